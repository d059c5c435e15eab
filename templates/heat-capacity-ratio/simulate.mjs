// Readings of an invented session, from the physics with a seeded random generator: nothing in example/ was measured or
// copied. Run `node templates/heat-capacity-ratio/simulate.mjs` to write example/ again.
import { writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';

/** Uniform numbers from 0 to 1 (32-bit linear congruential generator scrambled by multiplication and shifts). */
function uniform(seed) {
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

/** What the example's session measures: both gases low by a heat leak while the vessel was open. */
export const leaking = { argon: 1.64, nitrogen: 1.385 };

/** Ideal gases at 295.15 K: 5/3, and 7/5 less the beginning of the vibration. */
export const ideal = { argon: 5 / 3, nitrogen: 1.3998 };

/**
 * One session: trials of each gas from 600 ± 40 mm, the room at 99.40 kPa and 295.15 K, the fluid 1047 kg/m3 there.
 * `noise` scales every deviation (0: none), of which zero, barometer, density and free fall are shared by the whole
 * session; `digits: false` leaves readings unrounded. Readings are texts, as typed.
 */
export function simulate(seed, { gamma = leaking, trials = 6, noise = 1, digits = true } = {}) {
	const random = uniform(seed);
	const deviation = (size) => noise * size * normal(random);
	const written = (value, decimals) => (digits ? value.toFixed(decimals) : String(value));

	const room = 99.4e3;
	const celsius = 22;
	const zero = 2;
	const expansion = 8e-4 + deviation(3e-4);
	const gravity = 9.80665 + deviation(0.01);
	const density = 1047;
	const density20 = density * (1 + expansion * (celsius - 20));
	const perMillimetre = (density * gravity) / 1000;

	const parameters = {
		p_b: written((room + deviation(100)) / 1000, 2),
		barometer: 'electronic',
		t_room: written(celsius + deviation(0.3), 1),
		rho_20: written(density20 + deviation(2), 1),
		z: written(zero + deviation(0.3), 0),
		p_msl: written((room + 1790) / 1000, 2),
		altitude: written(150, 0)
	};
	const rows = Object.entries(gamma).flatMap(([gas, ratio]) =>
		Array.from({ length: trials }, (_, i) => {
			const first = 600 + (trials > 1 ? -40 + (80 * i) / (trials - 1) : 0);
			const p1 = room + perMillimetre * first;
			// how quickly the stopper is back differs from trial to trial
			const ownRatio = ratio + deviation(0.012);
			const p3 = p1 * (room / p1) ** (1 / ownRatio);
			const third = (p3 - room) / perMillimetre;
			// twenty seconds after closing a good third of the warming is done
			const second = third * (1 - Math.exp(-20 / (45 + deviation(4))));
			return {
				gas,
				h_1: written(first + zero + deviation(0.7), 0),
				drift: 'none',
				h_2: written(second + zero + deviation(0.7), 0),
				h_3: written(third + zero + deviation(0.7), 0),
				w_3: written(240 + 15 * (i % 3), 0),
				note: ''
			};
		})
	);
	return { parameters, tables: { trials: rows } };
}

const exampleSeed = 314;

if (process.argv[1] === fileURLToPath(import.meta.url)) {
	const { parameters, tables } = simulate(exampleSeed);
	const names = ['gas', 'h_1', 'drift', 'h_2', 'h_3', 'w_3', 'note'];
	const header = 'gas,h_1 / mm,drift,h_2 / mm,h_3 / mm,w_3 / s,note';
	const lines = [header, ...tables.trials.map((row) => names.map((name) => row[name]).join(','))];
	const folder = new URL('./example/', import.meta.url);
	writeFileSync(new URL('trials.csv', folder), lines.join('\n') + '\n');
	writeFileSync(new URL('parameters.json', folder), JSON.stringify(parameters, null, '\t') + '\n');
}
