/** Version of the arithmetic, part of every snapshot. Raise it whenever any number, rounding or sentence could change. */
export const engineVersion = '1.1.0';
