// Readings of an invented afternoon, from the physics with a seeded random generator: nothing in example/ was measured
// or copied. Run `node templates/mutarotation/simulate.mjs` to write example/ again.
import { writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';

const gasConstant = 8.314462618;

/**
 * What is true in the simulated laboratory. Rate constants at 25 degC in 1/min and L/(mol min): log10 values 0.0096 and
 * 0.258 (Hudson 1907, from memory) times ln 10, rounded; specific rotations in deg mL/(g dm): Bates et al., NBS
 * Circular C440 (1942), from memory; activation energy in J/mol: middle of 70 to 75 kJ/mol, from memory.
 */
export const truth = {
	k0: 0.0221,
	kH: 0.594,
	nominalCelsius: 25,
	activationEnergy: 72500,
	alphaRotation: 112.2,
	equilibriumRotation: 52.7
};

const massConcentration = 0.1;
const tubeLength = 2;
const acidConcentration = 1;
const acidPartMillilitres = 25;
const mixtureMillilitres = 50;
const blankDegrees = 0.04;
const mixingMinutes = 0.2;

/** Volume of acid (mL), minutes between readings: 24 readings from 2 min reach over about three half-lives. */
const runs = [
	{ run: 'A', acid: 0, step: 4.25 },
	{ run: 'B', acid: 2.5, step: 1.75 },
	{ run: 'C', acid: 5, step: 1.1 },
	{ run: 'D', acid: 10, step: 0.65 },
	{ run: 'E', acid: 15, step: 0.45 }
];
const readingsPerRun = 24;
/** Sixteen intervals are a little more than two half-lives. */
const pairedSteps = 16;

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

/** Sum of both rate constants in 1/min at an acid concentration in mol/L and a temperature in degC. */
export function rateConstant(acid, celsius) {
	const { k0, kH, nominalCelsius, activationEnergy } = truth;
	const reciprocals = 1 / (nominalCelsius + 273.15) - 1 / (celsius + 273.15);
	return (k0 + kH * acid) * Math.exp((activationEnergy / gasConstant) * reciprocals);
}

/**
 * Five runs. Sizes are standard deviations: of one angle (degrees), of the blank, of the run's temperature and of the
 * moment of mixing; `acid` and `glucose` are relative and the same in all runs. `noise: 0` makes every reading true,
 * `rounded: false` leaves it unrounded, and `finalHalfLives` says when the last angle is read. `actual` holds the rate
 * constant (1/min) that each run really had, at its real temperature.
 */
export function simulate(
	seed,
	{
		noise = 1,
		rounded = true,
		finalHalfLives = 14,
		angleDegrees = 0.02,
		blank = 0.02,
		temperatureKelvins = 0.2,
		mixing = 0.05,
		acid = 0.005,
		glucose = 0.002,
		tube = 0.0005
	} = {}
) {
	const random = uniform(seed);
	const deviation = (size) => noise * size * normal(random);
	const text = (value, decimals) => (rounded ? value.toFixed(decimals) : String(value));

	const trueAcid = acidConcentration * (1 + deviation(acid));
	const scale = massConcentration * (1 + deviation(glucose)) * (tubeLength + deviation(tube));
	const readBlank = blankDegrees + deviation(blank);
	const final = truth.equilibriumRotation * scale;
	const amplitude = truth.alphaRotation * scale - final;

	const tables = { runs: [], readings: [] };
	const actual = {};
	for (const { run, acid: millilitres, step } of runs) {
		const celsius = truth.nominalCelsius + noise * 0.1 * Math.round(2 * random() - 1);
		const concentration = (trueAcid * millilitres) / mixtureMillilitres;
		const k = rateConstant(concentration, celsius + deviation(temperatureKelvins));
		actual[run] = k;
		const start = mixingMinutes + deviation(mixing);
		const angle = (minutes) =>
			final + amplitude * Math.exp(-k * (minutes - start)) + blankDegrees + deviation(angleDegrees);
		const end = Math.ceil((finalHalfLives * Math.LN2) / rateConstant(concentration, truth.nominalCelsius));
		tables.runs.push({
			run,
			t_run: text(celsius, 1),
			V_acid: text(millilitres, 2),
			t_mix: text(mixingMinutes, 2),
			D: text(pairedSteps * step, 2),
			alpha_end: text(angle(end), 2),
			t_end: String(end)
		});
		for (let i = 0; i < readingsPerRun; i += 1) {
			const minutes = 2 + i * step;
			tables.readings.push({ run, t: text(minutes, 2), alpha: text(angle(minutes), 2) });
		}
	}
	const parameters = {
		c_glc: text(massConcentration, 4),
		l: text(tubeLength, 3),
		alpha_blank: text(readBlank, 2),
		t_nom: truth.nominalCelsius.toFixed(1),
		lambda: '589.3',
		c_acid: text(acidConcentration, 3),
		V_part: text(acidPartMillilitres, 2),
		V_mix: text(mixtureMillilitres, 2)
	};
	return { parameters, tables, actual };
}

const exampleSeed = 2104;
const headers = {
	runs: {
		run: 'run',
		t_run: 't_run / °C',
		V_acid: 'V_acid / mL',
		t_mix: 't_mix / min',
		D: 'D / min',
		alpha_end: 'alpha_end / deg',
		t_end: 't_end / min'
	},
	readings: { run: 'run', t: 't / min', alpha: 'alpha / deg' }
};

if (process.argv[1] === fileURLToPath(import.meta.url)) {
	const { parameters, tables } = simulate(exampleSeed);
	const folder = new URL('./example/', import.meta.url);
	for (const [table, columns] of Object.entries(headers)) {
		const lines = tables[table].map((row) => Object.keys(columns).map((name) => row[name]).join(',')); // prettier-ignore
		writeFileSync(
			new URL(`${table}.csv`, folder),
			[Object.values(columns).join(','), ...lines, ''].join('\n')
		);
	}
	writeFileSync(new URL('parameters.json', folder), JSON.stringify(parameters, null, '\t') + '\n');
}
