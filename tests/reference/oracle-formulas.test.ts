import { afterAll, describe, expect, it } from 'vitest';
import { coverageFactor, QuantityProblem, randomSource, standardUncertainty } from '$lib/quantities';
import { evaluateFormula } from '../../src/lib/worksheets/formula';
import { parseFormula } from '../../src/lib/worksheets/formula-parser';
import { askOracle, difference, uncertain, whyNoOracle } from './oracle';
import { FormulaMaker, type RandomFormula } from './random-formulas';

/**
 * The same random formulas by this engine and by Debian's uncertainties, which share no line with each other. The seed is
 * fixed, so a difference comes back.
 */
const whyNot = whyNoOracle();
if (whyNot) console.log(`Not held against Python: ${whyNot}`);

const random = randomSource(20_260_310);
const within = (low: number, high: number) => low + (high - low) * random.uniform();
const figures: string[] = [];
afterAll(() => {
	if (figures.length > 0) console.log(figures.join('\n'));
});

/**
 * null where the engine says in words that there is no value; 'beyond' where its uncertainty lies outside what is kept (a
 * formula that passes through e.g. 1e200 on its way), which no measured quantity does
 */
function evaluated({ text, inputs }: RandomFormula): [number, number] | 'beyond' | null {
	const named = new Map(inputs.map(([name, value, u]) => [name, uncertain(value, u)]));
	const scope = { names: new Set(named.keys()), choices: new Set<string>(), tables: new Map(), table: null };
	const unreachable = () => {
		throw new Error('Nothing but names stands in these formulas.');
	};
	try {
		const result = evaluateFormula(parseFormula(text, scope), {
			quantity: (leaf) => (leaf.op === 'name' && named.get(leaf.name)) || unreachable(),
			text: unreachable,
			given: unreachable,
			step: () => undefined
		});
		return [result.value, standardUncertainty(result)];
	} catch (cause) {
		if (!(cause instanceof QuantityProblem)) throw cause;
		return cause.code === 'not-finite' && cause.message.includes('beyond all numbers') ? 'beyond' : null;
	}
}

/** value and standard uncertainty; the latter null where a derivative is infinite; null without a value */
type Told = [number, number | null] | null;

const moves = [1e-12, -1e-12, 1e-10, -1e-10];

/** Factor by which a formula enlarges a relative change of its inputs. */
function condition(answers: readonly Told[], at: 0 | 1): number {
	const [here, ...moved] = answers.map((answer) => answer?.[at] ?? NaN);
	const factors = moved.map((each, i) => difference(here ?? NaN, each) / Math.abs(moves[i] ?? NaN));
	return factors.some(Number.isNaN) ? Infinity : Math.max(...factors);
}

/** What rounding leaves of parts that cancel, as in q / q: no uncertainty at all. */
function cancelled(value: number, u: number): boolean {
	return u < 1e-12 * Math.abs(value);
}

describe.skipIf(whyNot)('random formulas against python3-uncertainties', () => {
	it('values and uncertainties agree to 1e-9', { timeout: 900_000 }, () => {
		const maker = new FormulaMaker(random);
		const formulas = Array.from({ length: 8000 }, () => maker.next());
		const answers = askOracle<{ answers: Told[]; rounding: number | null }>(
			formulas.map((formula) => ({ kind: 'formula', moves, ...formula }))
		);
		const count = { compared: 0, refusedByBoth: 0, beyondUs: 0, valueOnly: 0, illConditioned: 0 };
		let worst = 0;
		const departures: string[] = [];
		formulas.forEach((formula, i) => {
			const ours = evaluated(formula);
			const { answers: told, rounding } = answers[i] ?? { answers: [], rounding: null };
			const theirs = told[0] ?? null;
			const depart = () =>
				departures.push(
					`${formula.text} of ${JSON.stringify(formula.inputs)}: ${JSON.stringify(ours)} and ${JSON.stringify(told)}`
				);
			if (ours === 'beyond') count.beyondUs += 1;
			else if (ours === null && (theirs === null || theirs[1] === null)) count.refusedByBoth += 1;
			else if (ours === null || theirs === null) depart();
			else {
				for (const at of [0, 1] as const) {
					const other = theirs[at];
					// x / x is exactly one here, so that its arcsine needs no derivative; there it is infinite
					if (other === null) count.valueOnly += 1;
					// where a change in the twelfth digit of an input changes the seventh of the result, or rounding its eleventh, doubles do not carry nine
					else if (condition(told, at) > 1e5 || !((rounding ?? 1) < 1e-11)) count.illConditioned += 1;
					else if (at === 1 && cancelled(ours[0], ours[1]) && cancelled(theirs[0], other))
						count.compared += 1;
					else {
						count.compared += 1;
						const apart = difference(ours[at], other);
						worst = Math.max(worst, apart);
						if (!(apart <= 1e-9)) depart();
					}
				}
			}
		});
		figures.push(
			`formulas: ${count.compared} values and uncertainties, worst ${worst.toExponential(1)}; without value for both ${count.refusedByBoth}, beyond our range ${count.beyondUs}, value alone ${count.valueOnly}, ill-conditioned ${count.illConditioned}`
		);
		expect(departures).toEqual([]);
		expect(count.compared).toBeGreaterThan(10_000);
		expect(count.illConditioned + count.beyondUs + count.valueOnly).toBeLessThan(0.03 * count.compared);
	});
});

describe.skipIf(whyNot)("Student's t against 40 digits", () => {
	it('agrees to ten digits', { timeout: 600_000 }, () => {
		const triples = Array.from({ length: 400 }, () => {
			const [p, nu] = [within(0.05, 0.9995), 10 ** within(-0.3, 6)];
			return [p, nu, coverageFactor(p, nu)] as const;
		});
		const [apart = []] = askOracle<number[]>([{ kind: 'student', triples }]);
		const worst = Math.max(...apart.map(Math.abs));
		figures.push(`Student's t: ${triples.length} quantiles, worst ${worst.toExponential(1)}`);
		expect(apart).toHaveLength(triples.length);
		expect(worst).toBeLessThan(1e-10);
	});
});
