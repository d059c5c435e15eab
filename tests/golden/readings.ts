import type { Readings } from '../../src/lib/worksheets';

/** Boiling temperatures in degC against pressures in torr: simulated from the physics with noise, not measured. */
const rows: [string, string][] = [
	['83.27', '399.2'],
	['85.83', '440.7'],
	['87.94', '479.4'],
	['90.00', '519.7'],
	['91.83', '559.5'],
	['93.75', '597.7'],
	['95.31', '638.7'],
	['97.16', '679.6'],
	['98.83', '719.4'],
	['100.29', '758.7']
];

/** Ten readings and the barometer. */
export const tenReadings: Readings = {
	parameters: { p_b: '757.6' },
	tables: {
		readings: rows.map(([t, p], index) => ({ id: `row-${index}`, cells: { t, p }, status: 'used' as const }))
	}
};
