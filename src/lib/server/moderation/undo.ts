/** Hours for which a return can be taken back: long enough to see a slip, short enough that students can rely on it. */
export const undoHours = 2;

export const undoUntil = (returnedAt: Date): Date => new Date(returnedAt.getTime() + undoHours * 3_600_000);
