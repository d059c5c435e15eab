// Readings of an invented run, from the physics with a seeded random generator: nothing in example/ was measured or
// copied. Run `node templates/vaporization-of-water/simulate.mjs` to write example/ again.
import { writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';

const pascalsPerTorr = 101325 / 760;

/** Saturation pressure of water in Pa: Wagner and Pruss 1993, the auxiliary equation of IAPWS SR1-86(1992). */
export function saturationPressure(kelvins) {
	const tau = 1 - kelvins / 647.096;
	const terms = [
		[-7.85951783, 1],
		[1.84408259, 1.5],
		[-11.7866497, 3],
		[22.6807411, 3.5],
		[-15.9618719, 4],
		[1.80122502, 7.5]
	];
	const sum = terms.reduce((total, [a, power]) => total + a * tau ** power, 0);
	return 22.064e6 * Math.exp((647.096 / kelvins) * sum);
}

/** Temperature in K at which water boils under the pressure in Pa, by bisection. */
export function boilingTemperature(pascals) {
	let low = 273.16;
	let high = 450;
	while (high - low > 1e-9) {
		const middle = (low + high) / 2;
		if (saturationPressure(middle) < pascals) low = middle;
		else high = middle;
	}
	return (low + high) / 2;
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

/** What the mercury column of a simulated run is like: constants as in template.yaml, from memory. */
const mercury = { celsius: 25, expansion: 1.818e-4, scale: 1.84e-5 };

/** Height in mm of a mercury column with a brass scale that stands for a pressure in torr. */
function columnHeight(torr) {
	const { celsius, expansion, scale } = mercury;
	return (torr * pascalsPerTorr * (1 + expansion * celsius)) / (1 + scale * celsius) / 133.322387415;
}

/**
 * One run: ten pressures from 400 to 760 torr, read with noise of 0.1 K and 0.5 torr on a thermometer and a gauge
 * whose own offsets (0.2 K, 0.3 torr, standard deviations) are the same in every row. `instrument` tells what the
 * pressure is read on: the electronic gauge, or a closed or open mercury column (offsets and noise in mm then).
 */
export function simulate(
	seed,
	{
		noiseKelvins = 0.1,
		noiseTorr = 0.5,
		thermometerKelvins = 0.2,
		gaugeTorr = 0.3,
		barometerTorr = 0.3,
		instrument = 'gauge',
		rounded = true
	} = {}
) {
	const random = uniform(seed);
	const text = (value, decimals) => (rounded ? value.toFixed(decimals) : String(value));
	const thermometer = thermometerKelvins * normal(random);
	const gauge = gaugeTorr * normal(random);
	const readings = Array.from({ length: 10 }, (_, i) => {
		const torr = 400 + 40 * i + 3 * (random() - 0.5);
		const celsius = boilingTemperature(torr * pascalsPerTorr) - 273.15;
		return {
			torr,
			t: text(celsius + thermometer + noiseKelvins * normal(random), 2),
			deviation: gauge + noiseTorr * normal(random)
		};
	});
	const room = 757 + 6 * (random() - 0.5);
	const pressure = {
		gauge: ({ torr, deviation }) => ({ p: text(torr + deviation, 1) }),
		closed: ({ torr, deviation }) => ({ h_closed: text(columnHeight(torr) + deviation, 1) }),
		open: ({ torr, deviation }) => ({ h_open: text(columnHeight(room - torr) + deviation, 1) })
	}[instrument];
	const rows = readings.map((reading) => ({ t: reading.t, ...pressure(reading), note: '' }));
	if (instrument === 'gauge') return { parameters: { p_b: room.toFixed(1) }, tables: { readings: rows } };
	const read = room + barometerTorr * normal(random);
	const parameters = { p_b: text(read, 1), t_Hg: mercury.celsius.toFixed(1), scale: 'brass' };
	return { parameters, tables: { readings: rows } };
}

const exampleSeed = 310;

if (process.argv[1] === fileURLToPath(import.meta.url)) {
	const { parameters, tables } = simulate(exampleSeed);
	const lines = ['t / °C,p / Torr,note', ...tables.readings.map(({ t, p, note }) => [t, p, note].join(','))];
	const folder = new URL('./example/', import.meta.url);
	writeFileSync(new URL('readings.csv', folder), lines.join('\n') + '\n');
	writeFileSync(new URL('parameters.json', folder), JSON.stringify(parameters, null, '\t') + '\n');
}
