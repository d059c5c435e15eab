// Readings of an invented run, from the physics with a seeded random generator: nothing in example/ was measured or
// copied. Run `node templates/vapour-pressure-of-cyclohexane/simulate.mjs` to write example/ again.
import { writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';

/**
 * Antoine's constants of cyclohexane, ln(p/kPa) = a - b/(t/degC + c), 9 to 105 degC: Smith, Van Ness, Abbott and
 * Swihart, Introduction to Chemical Engineering Thermodynamics, table B.2, as read on a public page.
 */
export const truth = { a: 13.6568, b: 2723.44, c: 220.618 };

/** Vapour pressure in kPa at a temperature in degC. */
export function vapourPressure(celsius) {
	return Math.exp(truth.a - truth.b / (celsius + truth.c));
}

/** Uniform numbers from 0 to 1 (32-bit linear congruential generator scrambled by multiplication and shifts). */
export function uniform(seed) {
	let state = seed >>> 0;
	return () => {
		state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
		let mixed = state ^ (state >>> 15);
		mixed = Math.imul(mixed | 1, mixed ^ 0x2c1b3c6d);
		mixed ^= mixed >>> 13;
		return ((mixed ^ (mixed >>> 16)) >>> 0) / 4294967296;
	};
}

function normal(random) {
	const radius = Math.sqrt(-2 * Math.log(1 - random()));
	return radius * Math.cos(2 * Math.PI * random());
}

/**
 * Seven bath temperatures from 20 to 77 degC on the way up and six between them on the way down. Sizes are standard
 * deviations; the thermometer's offset and the gauge's zero are the same in every row. `noise: 0` makes every reading
 * true, `rounded: false` leaves it unrounded.
 */
export function simulate(
	seed,
	{
		noise = 1,
		rounded = true,
		bathKelvins = 0.03,
		pressureKilopascals = 0.05,
		thermometerKelvins = 0.1,
		zeroKilopascals = 0.03,
		gain = 0.0005
	} = {}
) {
	const random = uniform(seed);
	const deviation = (size) => noise * size * normal(random);
	const text = (value, decimals) => (rounded ? value.toFixed(decimals) : String(value));
	const thermometer = deviation(thermometerKelvins);
	const zero = 0.35;
	const readZero = zero + deviation(zeroKilopascals);
	const factor = 1 + deviation(gain);
	const rising = Array.from({ length: 7 }, (_, i) => 20 + 9.5 * i);
	const falling = Array.from({ length: 6 }, (_, i) => 72.25 - 9.5 * i);
	const row = (direction) => (nominal) => {
		const celsius = nominal + noise * 0.4 * (random() - 0.5);
		return {
			direction,
			t: text(celsius + thermometer + deviation(bathKelvins), 2),
			p: text(vapourPressure(celsius) / factor + zero + deviation(pressureKilopascals), 2)
		};
	};
	return {
		parameters: { p_zero: text(readZero, 2) },
		tables: { readings: [...rising.map(row('rising')), ...falling.map(row('falling'))] }
	};
}

const exampleSeed = 1946;

if (process.argv[1] === fileURLToPath(import.meta.url)) {
	const { parameters, tables } = simulate(exampleSeed);
	const lines = tables.readings.map(({ direction, t, p }) => [direction, t, p].join(','));
	const folder = new URL('./example/', import.meta.url);
	writeFileSync(new URL('readings.csv', folder), ['direction,t / °C,p / kPa', ...lines, ''].join('\n'));
	writeFileSync(new URL('parameters.json', folder), JSON.stringify(parameters, null, '\t') + '\n');
}
