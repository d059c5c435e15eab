import { v7 as uuidv7 } from 'uuid';
import type { Readings } from '$lib/worksheets';
import type { SeededRandom } from './random';

/**
 * Boiling temperatures of water in degC at 400 to 760 torr in steps of 40.
 * Source: computed from IAPWS-95 saturation (see tests/reference).
 */
const boiling = [82.93, 85.35, 87.59, 89.68, 91.64, 93.48, 95.23, 96.89, 98.47, 99.97];
const firstTorr = 400;
const stepTorr = 40;

/** Stated noise of the simulated bench: one standard deviation each. */
const noise = { temperatureK: 0.1, pressureTorr: 0.5, thermometerK: 0.2, gaugeTorr: 0.3 };

/** One team's simulated session: shared offsets drawn once, noise at every reading. */
export function simulateReadings(random: SeededRandom): Readings {
	const thermometer = noise.thermometerK * random.normal();
	const gauge = noise.gaugeTorr * random.normal();
	const rows = boiling.map((celsius, index) => ({
		id: uuidv7(),
		status: 'used' as const,
		cells: {
			t: (celsius + thermometer + noise.temperatureK * random.normal()).toFixed(2),
			p: (firstTorr + index * stepTorr + gauge + noise.pressureTorr * random.normal()).toFixed(1)
		}
	}));
	return { parameters: { p_b: (756 + 3 * random.normal()).toFixed(1) }, tables: { readings: rows } };
}
