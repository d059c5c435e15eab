import { ln } from './elementary';

/** Where numbers drawn at random come from: the same seed gives the same numbers on every machine. */
export interface RandomSource {
	/** evenly from the open interval 0 to 1, with 53 bits */
	uniform(): number;
	/** standard normal */
	normal(): number;
}

type State = readonly [number, number, number, number];

/** xoshiro128** of D. Blackman and S. Vigna (ACM Trans. Math. Softw. 47 (2021) 36): 32 bits at a time, period 2^128 - 1. */
export class Xoshiro128 {
	private a: number;
	private b: number;
	private c: number;
	private d: number;

	constructor([a, b, c, d]: State) {
		if ((a | b | c | d) === 0) throw new RangeError('A state of zeros stays there.');
		[this.a, this.b, this.c, this.d] = [a | 0, b | 0, c | 0, d | 0];
	}

	/** a whole number from 0 to 2^32 - 1 */
	next(): number {
		const result = Math.imul(rotate(Math.imul(this.b, 5), 7), 9) >>> 0;
		const shifted = this.b << 9;
		this.c ^= this.a;
		this.d ^= this.b;
		this.b ^= this.c;
		this.a ^= this.d;
		this.c ^= shifted;
		this.d = rotate(this.d, 11);
		return result;
	}
}

function rotate(bits: number, by: number): number {
	return (bits << by) | (bits >>> (32 - by));
}

/** Four words from one: steps of the golden ratio, mixed by the finaliser of MurmurHash3 (A. Appleby). */
function stateOf(seed: number): State {
	let step = seed | 0;
	const word = () => {
		step = (step + 0x9e3779b9) | 0;
		let mixed = step ^ (step >>> 16);
		mixed = Math.imul(mixed, 0x85ebca6b);
		mixed ^= mixed >>> 13;
		mixed = Math.imul(mixed, 0xc2b2ae35);
		return mixed ^ (mixed >>> 16);
	};
	return [word(), word(), word(), word()];
}

/** `seed` is a whole number of 32 bits; the same one gives the same sequence. */
export function randomSource(seed: number): RandomSource {
	const generator = new Xoshiro128(stateOf(seed));
	let kept: number | null = null;
	const uniform = () => {
		const high = generator.next() >>> 5;
		const low = generator.next() >>> 6;
		// the middle of one of 2^53 equal pieces: neither 0 nor 1 comes out
		return (high * 67108864 + low + 0.5) / 9007199254740992;
	};
	const normal = () => {
		if (kept !== null) {
			const second = kept;
			kept = null;
			return second;
		}
		// polar method (G. Marsaglia and T. A. Bray, SIAM Rev. 6 (1964) 260)
		for (;;) {
			const x = 2 * uniform() - 1;
			const y = 2 * uniform() - 1;
			const square = x * x + y * y;
			if (square >= 1 || square === 0) continue;
			const scale = Math.sqrt((-2 * ln(square)) / square);
			kept = y * scale;
			return x * scale;
		}
	};
	return { uniform, normal };
}
