/**
 * Numbers as they were typed, as differences from the first of them: subtracted in whole decimals, so that 13 leading
 * digits in common cost nothing. 1000000000000.4 and .3 differ by 0.1 exactly; as doubles they differ by 0.1 ± 0.0001.
 */
export interface Deviations {
	/** the first number */
	readonly origin: number;
	/** each number minus the first, rounded once */
	readonly deviations: readonly number[];
}

const decimal = /^([+-]?)(\d*)(?:\.(\d*))?(?:[eE]([+-]?\d+))?$/;
/** Beyond these no double lies, and whole decimals would grow without bound. */
const mostExponent = 400;

/** @throws RangeError for text that is not a decimal number */
export function deviationsOfTyped(texts: readonly string[]): Deviations {
	const numbers = texts.map(parse);
	const places = numbers.reduce((most, each) => Math.max(most, each.places), 0);
	const whole = numbers.map((each) => each.digits * 10n ** BigInt(places - each.places));
	const first = whole[0] ?? 0n;
	return {
		origin: Number(texts[0] ?? NaN),
		deviations: whole.map((each) => Number(`${each - first}e-${places}`))
	};
}

function parse(text: string): { digits: bigint; places: number } {
	const [match, sign = '', before = '', after = '', power = '0'] = decimal.exec(text.trim()) ?? [];
	const exponent = Number(power);
	if (match === undefined || before + after === '' || Math.abs(exponent) > mostExponent) {
		throw new RangeError(`“${text}” is not a decimal number.`);
	}
	const digits = BigInt(`${sign === '-' ? '-' : ''}${before}${after}`);
	const places = after.length - exponent;
	return places >= 0 ? { digits, places } : { digits: digits * 10n ** BigInt(-places), places: 0 };
}
