import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import type { Quantity } from '$lib/quantities';
import { evaluate, type Evaluation } from '$lib/worksheets';
import { namedValues } from '../../src/lib/worksheets/named';
import { Session as Work } from '../../src/lib/worksheets/session';
import {
	bounds,
	draws,
	holds,
	mistaken,
	readingsOf,
	recognisedInNumber,
	recognisedInOwn,
	worksheetOf,
	type Session
} from './simulated-session';

type Instrument = 'gauge' | 'closed' | 'open';
interface Options {
	noiseKelvins?: number;
	noiseTorr?: number;
	thermometerKelvins?: number;
	gaugeTorr?: number;
	barometerTorr?: number;
	instrument?: Instrument;
	rounded?: boolean;
}
const { simulate } = (await import('../../templates/vaporization-of-water/simulate.mjs')) as unknown as {
	simulate: (seed: number, options?: Options) => Session;
};

const worksheet = worksheetOf('vaporization-of-water');
const silent = { noiseKelvins: 0, noiseTorr: 0, thermometerKelvins: 0, gaugeTorr: 0, barometerTorr: 0, rounded: false }; // prettier-ignore
const exact = (instrument: Instrument = 'gauge', seed = 310) => simulate(seed, { ...silent, instrument });

const work = (session: Session, sheet = worksheet) => evaluate(sheet, readingsOf(session));
const value = (evaluation: Evaluation, name: string) => evaluation.quantities[name]?.value ?? NaN;
const cell = (evaluation: Evaluation, column: string, row = 0) =>
	evaluation.tables['readings']?.rows[row]?.cells[column]?.value ?? NaN;
const codes = (session: Session) => work(session).problems.map(({ code }) => code);

/** Agreement to this many significant digits. */
function expectDigits(found: number, expected: number, digits: number): void {
	expect(Math.abs(found / expected - 1)).toBeLessThan(0.5 * 10 ** -digits);
}

describe('pressures read on mercury', () => {
	it.each(['closed', 'open'] as const)('come out as those of the gauge: %s column', (instrument) => {
		const [column, gauge] = [work(exact(instrument)), work(exact())];
		expect(column.problems).toEqual([]);
		for (let row = 0; row < 10; row += 1)
			expectDigits(cell(column, 'p_abs', row), cell(gauge, 'p_abs', row), 10);
		for (const name of ['H_vap', 'T_b', 'H_C', 'T_b_A'])
			expectDigits(value(column, name), value(gauge, name), 9);
		// half a millimetre is not quite half a torr, nor the same on both kinds of column: other weights
		for (const name of ['H_w', 'T_b_xy']) expectDigits(value(column, name), value(gauge, name), 5);
	});

	const oneColumn = (millimetres: string, parameters: Record<string, string>) => {
		const session = exact('closed');
		Object.assign(session.tables['readings']?.[0] ?? {}, { h_closed: millimetres });
		Object.assign(session.parameters, parameters);
		return cell(work(session), 'h_red');
	};

	it('are reduced by 3.09 mm at 25 °C with a brass scale', () => {
		// tables of barometer corrections give 3.09 mm for 760 mm at 25 °C, from memory
		expect(760 - oneColumn('760', { t_Hg: '25.0' })).toBeCloseTo(3.09, 2);
		expect(oneColumn('760', { t_Hg: '0.0' })).toBeCloseTo(760, 10);
	});

	it('know the scale and the local free fall', () => {
		const brass = oneColumn('760', { t_Hg: '25.0', scale: 'brass' });
		const glass = oneColumn('760', { t_Hg: '25.0', scale: 'glass' });
		expectDigits(brass / glass, (1 + 1.84e-5 * 25) / (1 + 8e-6 * 25), 12);
		expectDigits(oneColumn('760', { t_Hg: '25.0', g_local: '9.79650' }) / brass, 9.7965 / 9.80665, 12);
	});

	it('left as read cost 0.11 K in the boiling point and, closed, nothing in the enthalpy', () => {
		const [right, wrong] = [
			work(exact('closed')),
			work(exact('closed'), mistaken(worksheet, 'column-not-reduced'))
		];
		expect(value(wrong, 'T_b') - value(right, 'T_b')).toBeCloseTo(-0.11, 2);
		expectDigits(value(wrong, 'H_vap'), value(right, 'H_vap'), 9);
	});

	it('left as read on an open column touch the enthalpy too', () => {
		const [right, wrong] = [
			work(exact('open')),
			work(exact('open'), mistaken(worksheet, 'column-not-reduced'))
		];
		expect(Math.abs(value(wrong, 'H_vap') - value(right, 'H_vap'))).toBeGreaterThan(0.05);
	});
});

describe('an emergent thread', () => {
	it('adds 1.6e-4 K for each degree of thread and each kelvin it is colder', () => {
		const session = exact();
		Object.assign(session.tables['readings']?.[0] ?? {}, { t: '95.00' });
		Object.assign(session.parameters, { t_exit: '35', t_stem: '40' });
		expect(cell(work(session), 'T')).toBeCloseTo(95 + 273.15 + 1.6e-4 * 60 * 55, 9);
		expect(cell(work(session, mistaken(worksheet, 'stem-left-out')), 'T')).toBeCloseTo(95 + 273.15, 9);
	});
});

describe('kinds of line through pressures without noise', () => {
	const evaluation = work(exact());
	const saturation = readFileSync(new URL('data/water_saturation_iapws95.csv', import.meta.url), 'utf8')
		.split('\n')
		.filter((line) => /^\d/.test(line))
		.map((line) => line.split(',').map(Number));
	/** Between the rows of the table of IAPWS-95 (Debian python3-iapws 1.5.3-1), column by number. */
	const table = (column: number, kelvins: number) => {
		const above = saturation.findIndex(([at = NaN]) => at > kelvins);
		const [low = [], high = []] = [saturation[above - 1], saturation[above]];
		const share = (kelvins - (low[0] ?? NaN)) / ((high[0] ?? NaN) - (low[0] ?? NaN));
		return (low[column] ?? NaN) * (1 - share) + (high[column] ?? NaN) * share;
	};
	const at = value(evaluation, 'T_h');

	it.each(['H_vap', 'H_w', 'H_xy', 'H_C', 'H_A'])('%s is the local slope of the saturation curve', (name) => {
		expect(Math.abs(value(evaluation, name) - table(7, at))).toBeLessThan(0.1);
	});

	it('the heat-capacity term carries the enthalpy to the boiling point', () => {
		const step = value(evaluation, 'H_C_b') - value(evaluation, 'H_C');
		expect(step).toBeCloseTo(-0.042 * (value(evaluation, 'T_b') - at), 9);
		// -33 J/(mol K) from the local slopes; -42 for ideal vapour, from memory
		expect(value(evaluation, 'H_C_b')).toBeCloseTo(table(7, 373.124), 0);
	});

	it('the bent line of Antoine meets the boiling point that the straight one misses by 0.01 K', () => {
		// 99.974 °C, IAPWS-95
		expect(Math.abs(value(evaluation, 'T_b_A') - 373.124)).toBeLessThan(0.003);
		expect(value(evaluation, 'T_b') - 373.124).toBeCloseTo(-0.015, 2);
	});

	it('the real vapour leads to the calorimetric enthalpy', () => {
		expect(value(evaluation, 'H_vap') - table(6, at)).toBeCloseTo(0.57, 1);
		expect(Math.abs(value(evaluation, 'H_Z') - table(6, at))).toBeLessThan(0.05);
		expect(evaluation.comparisons['H_Z']?.reference.value).toBeCloseTo(table(6, at), 9);
		// 0.9867 is what the table says of the vapour (column 8), less p V/(R T) of the liquid
		const liquid = (1000 * table(2, at) * 0.018015268) / table(4, at) / (8.314462618 * at);
		expect(table(8, at) - liquid).toBeCloseTo(0.9867, 3);
	});
});

describe('what the bench says', () => {
	const inFirst = (
		instrument: Instrument,
		cells: Record<string, string>,
		parameters: Record<string, string> = {}
	) => {
		const session = simulate(310, { instrument });
		Object.assign(session.tables['readings']?.[0] ?? {}, cells);
		Object.assign(session.parameters, parameters);
		return session;
	};

	it.each(['gauge', 'closed', 'open'] as const)('nothing about a complete run: %s', (instrument) => {
		expect(codes(simulate(310, { instrument }))).toEqual([]);
	});

	it.each([
		['open-column-without-barometer', inFirst('open', {}, { p_b: '' })],
		['no-mercury-temperature', inFirst('closed', {}, { t_Hg: '' })],
		['gauge-off', inFirst('gauge', {}, { p_b: '757.0', p_open: '767.0' })],
		['thermometer-off', inFirst('gauge', {}, { t_zero: '0.30' })],
		['leak', inFirst('gauge', {}, { leak: '2' })],
		['not-steady', inFirst('gauge', { drift: '0.3' })],
		['no-pressure', inFirst('gauge', { p: '' })],
		['no-barometer', inFirst('gauge', {}, { p_b: '' })]
	])('%s', (code, session) => {
		expect(codes(session)).toContain(code);
	});

	it('nothing where gauge and thermometer were found right', () => {
		expect(codes(inFirst('gauge', {}, { p_b: '757.0', p_open: '756.8', t_zero: '0.05' }))).toEqual([]);
	});

	it('that the span is short, on mercury too', () => {
		const session = simulate(310, { instrument: 'closed' });
		session.tables['readings']?.splice(4);
		expect(codes(session)).toContain('short-span');
	});
});

describe('recognised mistakes', () => {
	const right = work(exact());
	const wrong = (code: string, name: string) => value(work(exact(), mistaken(worksheet, code)), name);

	it('have the size they are known by', () => {
		const enthalpy = value(right, 'H_vap');
		expect(wrong('decadic-logarithm', 'H_vap')).toBeCloseTo(enthalpy / Math.LN10, 9);
		expect(wrong('decadic-logarithm', 'T_b')).toBeCloseTo(value(right, 'T_b'), 9);
		expect(wrong('sign-of-the-slope', 'H_vap')).toBeCloseTo(-enthalpy, 9);
		expect(wrong('joules-for-kilojoules', 'H_vap')).toBeCloseTo(1000 * enthalpy, 6);
		expectDigits(wrong('calories', 'H_vap'), (enthalpy * 1.987) / 8.314462618, 12);
		// d(1/t) is larger than d(1/T) by about (T/t) squared
		expect(wrong('celsius', 'H_vap')).toBeLessThan(0.1 * enthalpy);
	});
});

describe('each recognised mistake', () => {
	const session = (code: string) => {
		const made = simulate(310, { instrument: code === 'column-not-reduced' ? 'open' : 'gauge' });
		if (code === 'stem-left-out') Object.assign(made.parameters, { t_exit: '30', t_stem: '40' });
		return readingsOf(made);
	};
	it.each(worksheet.mistakes.map(({ code }) => code))('%s is recognised when made', (code) => {
		expect(recognisedInNumber(worksheet, session(code), code)).toBe(code);
		// a constant of the experiment is nothing the team writes
		if (code !== 'calories') expect(recognisedInOwn(worksheet, session(code), code)).toBe(code);
	});
});

describe('coverage of the 95 % interval', () => {
	const names = ['H_w', 'T_b_w', 'H_xy', 'T_b_xy', 'H_C', 'H_A', 'T_b_A'] as const;

	it.each(['gauge', 'open'] as const)(
		'holds for every kind of line: %s',
		{ timeout: 3_600_000 },
		(instrument) => {
			const [noisy, clean] = [new Work(worksheet), new Work(worksheet)];
			const found = (work: Work, session: Session) => {
				work.take(readingsOf(session));
				return new Map(namedValues(work).map(({ name, quantity }) => [name, quantity]));
			};
			const held = new Map<string, number>();
			const drawn = draws((seed) => {
				const measured = found(noisy, simulate(seed, { instrument }));
				// the line's own truth: what perfect instruments would have given at the same pressures
				const truth = found(clean, exact('gauge', seed));
				for (const name of names) {
					const [quantity, expected] = [measured.get(name), truth.get(name)];
					if (!quantity || !expected) throw new Error(`There is no ${name} in session ${seed}.`);
					if (holds(quantity, told(expected))) held.set(name, (held.get(name) ?? 0) + 1);
				}
			});
			const share = (name: string) => (held.get(name) ?? 0) / drawn;
			console.log(`${instrument}, ${drawn} draws: ${names.map((name) => `${name} ${(100 * share(name)).toFixed(2)} %`).join(', ')}`); // prettier-ignore
			const [low, high] = bounds(0.94, 0.96, drawn);
			for (const name of names) {
				expect(share(name), name).toBeGreaterThan(low);
				expect(share(name), name).toBeLessThan(high);
			}
		}
	);
});

function told({ value: si, unit }: Quantity): number {
	return si / unit.factor;
}
