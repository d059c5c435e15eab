import type { RandomSource } from '$lib/quantities';

export interface RandomFormula {
	text: string;
	/** name, value, standard uncertainty */
	inputs: [string, number, number][];
}

/** Binding strength as people write it, so that only the parentheses that are needed stand, and some that are not. */
const strength = { sum: 1, product: 2, sign: 3, power: 4, atom: 5 } as const;
type Written = { text: string; binds: number };

const single = ['ln', 'log10', 'exp', 'sqrt', 'abs', 'sin', 'cos', 'tan', 'asin', 'acos', 'atan'] as const;

export class FormulaMaker {
	constructor(private readonly random: RandomSource) {}

	next(): RandomFormula {
		const count = 1 + this.below(5);
		const inputs = Array.from({ length: count }, (_, i): [string, number, number] => {
			// two to twelve significant digits in a range where most functions have values
			const size = 10 ** (4 * this.random.uniform() - 2);
			const value = Number(((this.below(5) === 0 ? -1 : 1) * size).toPrecision(2 + this.below(11)));
			return [
				`q${i}`,
				value,
				Number((Math.abs(value) * 10 ** (-3 * this.random.uniform() - 1)).toPrecision(3))
			];
		});
		const names = inputs.map(([name]) => name);
		return { text: this.write(names, 1 + this.below(6)).text, inputs };
	}

	private below(n: number): number {
		return Math.floor(n * this.random.uniform());
	}

	private one<T>(items: readonly [T, ...T[]] | readonly T[]): T {
		return items[this.below(items.length)] as T;
	}

	private write(names: readonly string[], depth: number): Written {
		if (depth === 0 || this.below(8) === 0) return this.leaf(names);
		const inner = () => this.write(names, depth - 1);
		switch (this.below(9)) {
			case 0:
			case 1:
				return this.join(inner(), this.one([' + ', ' - ']), inner(), strength.sum);
			case 2:
			case 3:
				return this.join(inner(), ' * ', inner(), strength.product);
			case 4:
				return this.join(inner(), ' / ', inner(), strength.product);
			case 5: {
				// whole, broken, negative and uncertain exponents
				const exponent =
					this.below(4) === 0 ? inner() : this.number(String(this.one([2, 3, -1, -2, 0.5, 1.5, -0.25])));
				return {
					text: `${this.within(inner(), strength.atom)}^${this.within(exponent, strength.atom)}`,
					binds: strength.power
				};
			}
			case 6:
				// unary minus binds less than a power and more than a product
				return { text: `-${this.within(inner(), strength.power)}`, binds: strength.sign };
			case 7:
				if (this.below(4) === 0) {
					return {
						text: `${this.one(['min', 'max'])}(${inner().text}, ${inner().text})`,
						binds: strength.atom
					};
				}
				return { text: `${this.one(single)}(${inner().text})`, binds: strength.atom };
			default:
				return { text: `${this.one(single)}(${inner().text})`, binds: strength.atom };
		}
	}

	private leaf(names: readonly string[]): Written {
		if (this.below(4) > 0) return { text: this.one(names), binds: strength.atom };
		return this.number((10 ** (2 * this.random.uniform() - 1)).toPrecision(1 + this.below(4)));
	}

	private number(text: string): Written {
		return { text, binds: text.startsWith('-') ? strength.sign : strength.atom };
	}

	/** The left side may bind as loosely as the operator, the right one has to bind more: a - (b + c). */
	private join(left: Written, operator: string, right: Written, binds: number): Written {
		return { text: `${this.within(left, binds)}${operator}${this.within(right, binds + 1)}`, binds };
	}

	private within({ text, binds }: Written, least: number): string {
		return binds < least || this.below(12) === 0 ? `(${text})` : text;
	}
}
