import { describe, expect, it } from 'vitest';
import { engineVersion, evaluate } from '$lib/worksheets';
import { readingsOf, row, water } from './worksheets-fixture';

/**
 * The very doubles of one run. Snapshots name the engine that computed them, so a change of any digit here is a change
 * of the engine: raise `engineVersion` and write the new doubles down together, or find out what moved them.
 */
const golden = {
	engine: '1.1.0',
	values: {
		slope: '-5040.533621588206 29.530700902439204',
		intercept: '25.02534323719599 0.07968976227702473',
		H_vap: '41.9093283714673 0.24553190873666964',
		T_h: '365.49171555784187 0.20253282630294267',
		T_b: '373.3934725736066 0.20799918541305176'
	}
};

const readings = [
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

describe('golden values', () => {
	it('are the same to the last bit', () => {
		const { quantities } = evaluate(
			water,
			readingsOf(readings.map(([t = '', p = ''], i) => row(String(i), t, p)))
		);
		const values = Object.keys(golden.values).map((name) => [
			name,
			`${quantities[name]?.value} ${quantities[name]?.standardUncertainty}`
		]);
		expect(Object.fromEntries(values)).toEqual(golden.values);
		expect(engineVersion).toBe(golden.engine);
	});
});
