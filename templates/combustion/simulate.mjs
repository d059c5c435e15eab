// Readings of an invented session, from the physics with a seeded random generator: nothing in example/ was measured or
// copied. Run `node templates/combustion/simulate.mjs` to write example/ again.
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

/** What is true in the invented laboratory. Energies in J and J/g, temperatures in degC, times in min. */
export const truth = {
	heatCapacity: 10150,
	/** Naphthalene in the standard state: J/g, and J/mol with the tabulated molar mass. */
	standardEnergy: 40190,
	molarEnergy: 40190 * 128.174,
	certificate: 26434,
	cooling: 0.0022,
	jacket: 25,
	start: 23.2,
	stirring: 0.0006,
	lag: 0.9,
	bombVolume: 0.34
};

const gasConstant = 8.314462618;
const atmosphere = 101325;

const substances = {
	'benzoic acid': { mass: 1, carbon: 7, hydrogen: 6, oxygen: 2, density: 1320 },
	naphthalene: { mass: 0.6, carbon: 10, hydrogen: 8, oxygen: 0, density: 1145 }
};

/**
 * Temperature of the calorimeter in degC: Newton's cooling towards the jacket, stirring, and from `firing` on a rise by
 * `rise` that comes with the time constant `lag`. The closed solution of that linear equation.
 */
export function temperature({ rise, lag, cooling, jacket, stirring, start, firing }) {
	// cooling 0 is the adiabatic calorimeter: its drift is the stirrer's
	const drifting = (from, minutes) => {
		if (cooling === 0) return from + stirring * minutes;
		const final = jacket + stirring / cooling;
		return final + (from - final) * Math.exp(-cooling * minutes);
	};
	const atFiring = drifting(start, firing);
	return (minutes) => {
		if (minutes <= firing) return drifting(start, minutes);
		const since = minutes - firing;
		const heating = Math.exp(-cooling * since) - Math.exp(-since / lag);
		return drifting(atFiring, since) + (rise / (1 - cooling * lag)) * heating;
	};
}

/** By how much less a gram gives in the standard state than in the bomb (J/g), by the energy of compressed gas. */
export function reduction({ grams, molarMass, carbon, hydrogen, oxygen, atmospheres, litres }) {
	const moles = grams / molarMass;
	const perMole = (gasConstant * 298.15) / (litres / 1000) / atmosphere;
	const before = (atmospheres * litres * atmosphere) / 1000 / (gasConstant * 298.15);
	const after = before + moles * (oxygen / 2 - hydrogen / 4);
	const fraction = (moles * carbon) / after;
	const held = (amount, factor) => 6.51 * factor * perMole * amount ** 2;
	return (held(after, 1 + 1.69 * fraction * (1 + fraction)) - held(before, 1)) / grams;
}

/**
 * One session: `runs` runs of each compound. `noise` scales every deviation (0: none): `flicker` in K for each
 * temperature, `scatter` of the rise from run to run, and those that are shared by the whole session, of which the
 * thermometer's slope is one. `digits: false` leaves readings unrounded. Periods in minutes, `step` between readings.
 * Readings are texts, as typed.
 */
export function simulate(
	seed,
	{
		runs = 3,
		noise = 1,
		scatter = 0.001,
		flicker = 0.001,
		digits = true,
		fore = 6,
		main = 12,
		late = 8,
		step = 0.25,
		lag = truth.lag,
		cooling = truth.cooling,
		stirring = truth.stirring
	} = {}
) {
	const random = uniform(seed);
	const deviation = (size) => noise * size * normal(random);
	const written = (value, decimals) => (digits ? value.toFixed(decimals) : String(value));
	const graduated = (value, division) => (digits ? Math.round(value / division) * division : value);
	const real = { ...truth, lag, cooling, stirring };

	const slope = 1 + deviation(0.001);
	const certificate = real.certificate + deviation(1.5);
	const [carbon, hydrogen, oxygen] = [
		12.011 + deviation(0.0012),
		1.008 + deviation(0.00012),
		15.999 + deviation(0.0006)
	];
	const air = 1.2 + deviation(0.02);
	const wireHeat = 9.6 + deviation(0.1);
	const acidHeat = 59000 + deviation(500);
	const unaccounted = deviation(12);
	const litres = real.bombVolume;
	const concentration = 0.1;
	const gauge = deviation(0.5);

	const parameters = {
		V_bomb: written(litres + deviation(0.002), 3),
		c_a: written(concentration + deviation(0.0005), 4)
	};
	const tables = { runs: [], temperatures: [] };
	for (const [compound, substance] of Object.entries(substances)) {
		const calibrant = compound === 'benzoic acid';
		const molarMass = substance.carbon * carbon + substance.hydrogen * hydrogen + substance.oxygen * oxygen;
		for (let i = 0; i < runs; i += 1) {
			const run = `${calibrant ? 'B' : 'N'}${i + 1}`;
			const grams = substance.mass * (1 + 0.05 * (2 * random() - 1));
			const inAir = grams / (1 + air * (1 / substance.density - 1 / 8000));
			const atmospheres = 30 + 0.2 * (2 * random() - 1);
			const water = 1 + 0.02 * (2 * random() - 1);
			const burned = 6 + 3 * random();
			const litresOfTitrant = (3 + 3 * random()) / 1000;
			const beside = burned * wireHeat + litresOfTitrant * concentration * acidHeat;
			const start = real.start + (noise === 0 ? 0 : 0.1 * (2 * random() - 1));
			const curve = (rise) => temperature({ ...real, rise, start, firing: fore });

			const heat = (end) => {
				if (!calibrant) {
					const conditions = { ...substance, grams, molarMass, atmospheres, litres };
					return grams * (real.molarEnergy / molarMass + reduction(conditions) + unaccounted) + beside;
				}
				const perLitre = [grams / litres - 3, water / litres - 3];
				const factor =
					1 + 1e-6 * (20 * (atmospheres - 30) + 42 * perLitre[0] + 30 * perLitre[1] - 45 * (end - 25));
				return grams * certificate * factor + beside;
			};
			// the certificate's factor needs the temperature at the end, which hardly needs the factor
			let rise = 2.5;
			for (let pass = 0; pass < 8; pass += 1) rise = heat(curve(rise)(fore + main)) / real.heatCapacity;
			rise *= 1 + deviation(scatter);

			tables.runs.push({
				run,
				compound,
				m_s: written(inAir + deviation(0.0001), 4),
				mass_basis: 'air',
				wire: 'nickel-chromium',
				l_before: written(10, 1),
				l_after: written(10 - burned + deviation(0.2), 1),
				V_a: written(graduated(1000 * litresOfTitrant + deviation(0.05), 0.05), 2),
				p_O2: written(atmospheres + gauge, 1),
				m_w: written(water, 2),
				t_b: written(fore, 2),
				t_e: written(fore + main, 2),
				residue: 'clean',
				note: ''
			});
			const at = curve(rise);
			for (let reading = 0; reading * step <= fore + main + late + step / 1000; reading += 1)
				tables.temperatures.push({
					run,
					t: written(reading * step, 2),
					T: written(at(reading * step) * slope + deviation(flicker), 3)
				});
		}
	}
	return { parameters, tables };
}

const exampleSeed = 222;

if (process.argv[1] === fileURLToPath(import.meta.url)) {
	const { parameters, tables } = simulate(exampleSeed);
	const folder = new URL('./example/', import.meta.url);
	const units = {
		m_s: 'g',
		l_before: 'cm',
		l_after: 'cm',
		V_a: 'mL',
		p_O2: 'atm',
		m_w: 'g',
		t_b: 'min',
		t_e: 'min',
		t: 'min',
		T: '°C'
	};
	for (const [name, rows] of Object.entries(tables)) {
		const columns = Object.keys(rows[0]);
		const header = columns.map((column) => (units[column] ? `${column} / ${units[column]}` : column));
		const lines = [header, ...rows.map((row) => columns.map((column) => row[column]))];
		writeFileSync(new URL(`${name}.csv`, folder), lines.map((cells) => cells.join(',')).join('\n') + '\n');
	}
	writeFileSync(new URL('parameters.json', folder), JSON.stringify(parameters, null, '\t') + '\n');
}
