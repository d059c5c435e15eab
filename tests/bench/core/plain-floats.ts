import type { Readings } from '$lib/worksheets';

/** Value and standard uncertainty in min and mol/L, as the worksheet tells them. */
export interface Plain {
	k_H: [number, number];
	k_0: [number, number];
	half_life: [number, number];
}

const [gain, clockGain] = [0.005, 0.0005];
const [uAlpha, uEnd, uVolume, uTemperature] = [0.02, 0.01, 0.02, 0.2];
const [activation, gas, nominal] = [73_000, 8.314462618, 298.15];

/**
 * The same worksheet by hand in bare numbers: what somebody writes who knows the experiment and nothing else. The
 * effective variances, the scatter of each run and every shared deviation are there; nothing is general.
 */
export function plainFloats({ parameters, tables }: Readings): Plain {
	const acid = Number(parameters['c_acid']);
	const byRun = new Map<string, { t: number; alpha: number }[]>();
	for (const { cells } of tables['readings'] ?? []) {
		const point = { t: Number(cells['t']), alpha: Number(cells['alpha']) };
		const list = byRun.get(cells['run'] ?? '');
		if (list) list.push(point);
		else byRun.set(cells['run'] ?? '', [point]);
	}
	const runs = (tables['runs'] ?? []).map(({ cells }) => {
		const volume = Number(cells['V_acid']);
		const kelvins = Number(cells['t_run']) + 273.15;
		const end = Number(cells['alpha_end']);
		const line = firstOrder(byRun.get(cells['run'] ?? '') ?? [], end);
		const factor = Math.exp((activation / gas) * (1 / kelvins - 1 / nominal));
		return {
			x: (acid * volume) / 50,
			y: line.k * factor,
			/** own deviations of y and of x */
			own: Math.hypot(
				line.scatter * factor,
				line.byEnd * uEnd * factor,
				(line.k * factor * activation * uTemperature) / (gas * kelvins * kelvins)
			),
			ownX: (acid * uVolume) / 50,
			byClock: line.byClock * clockGain * factor,
			byAcid: (gain * acid * volume) / 50
		};
	});
	let slope = 0;
	let sums = sumsOf(runs, () => 1);
	for (let round = 0; round < 50; round += 1) {
		const before = slope;
		slope = sums.slope;
		if (round > 0 && Math.abs(slope - before) <= 1e-14 * Math.abs(slope)) break;
		sums = sumsOf(runs, (run) => 1 / (run.own * run.own + slope * slope * run.ownX * run.ownX));
	}
	let [ownSlope, ownHeight, mixed] = [0, 0, 0];
	const shared = { clock: [0, 0], acid: [0, 0] };
	runs.forEach((run, i) => {
		const w = sums.w[i] ?? 0;
		const dx = run.x - sums.centreX;
		const residual = run.y - sums.centreY - sums.slope * dx;
		const byY = [(w * dx) / sums.xx, w / sums.total] as const;
		const byX = [(w * (residual - sums.slope * dx)) / sums.xx, (-sums.slope * w) / sums.total] as const;
		const square = (a: number, b: number) =>
			byY[a as 0] * byY[b as 0] * run.own * run.own + byX[a as 0] * byX[b as 0] * run.ownX * run.ownX;
		ownSlope += square(0, 0);
		ownHeight += square(1, 1);
		mixed += square(0, 1);
		for (const which of [0, 1] as const) {
			shared.clock[which] = (shared.clock[which] ?? 0) + byY[which] * run.byClock;
			shared.acid[which] = (shared.acid[which] ?? 0) + byX[which] * run.byAcid;
		}
	});
	const at = (parts: number[]) => (parts[1] ?? 0) - sums.centreX * (parts[0] ?? 0);
	const uSlope = Math.sqrt(ownSlope + (shared.clock[0] ?? 0) ** 2 + (shared.acid[0] ?? 0) ** 2);
	const intercept = sums.centreY - sums.slope * sums.centreX;
	const own = ownHeight - 2 * sums.centreX * mixed + sums.centreX * sums.centreX * ownSlope;
	const uIntercept = Math.sqrt(own + at(shared.clock) ** 2 + at(shared.acid) ** 2);
	return {
		k_H: [sums.slope, uSlope],
		k_0: [intercept, uIntercept],
		half_life: [Math.LN2 / intercept, (Math.LN2 * uIntercept) / (intercept * intercept)]
	};
}

/** Weighted line of ln(alpha - end) against time; weights from the reading's uncertainty. */
function firstOrder(points: { t: number; alpha: number }[], end: number) {
	let [total, st, sy] = [0, 0, 0];
	const rows = points.map(({ t, alpha }) => {
		const net = alpha - end;
		const w = (net / uAlpha) ** 2;
		const y = Math.log((net * Math.PI) / 180 / (Math.PI / 180));
		total += w;
		st += w * t;
		sy += w * y;
		return { t, y, w, net };
	});
	const [centreT, centreY] = [st / total, sy / total];
	let [xx, xy] = [0, 0];
	for (const { t, y, w } of rows) {
		xx += w * (t - centreT) * (t - centreT);
		xy += w * (t - centreT) * (y - centreY);
	}
	const slope = xy / xx;
	let [squares, byEnd, byClock] = [0, 0, 0];
	for (const { t, y, w, net } of rows) {
		const dt = t - centreT;
		const residual = y - centreY - slope * dt;
		squares += w * residual * residual;
		byEnd += ((w * dt) / xx) * (-1 / net);
		byClock += ((w * (residual - slope * dt)) / xx) * t;
	}
	const scatter = Math.sqrt(squares / (rows.length - 2) / xx);
	return { k: -slope, scatter, byEnd, byClock: -byClock };
}

function sumsOf<T extends { x: number; y: number }>(points: T[], weight: (point: T) => number) {
	const w = points.map(weight);
	let [total, sx, sy] = [0, 0, 0];
	points.forEach(({ x, y }, i) => {
		total += w[i] ?? 0;
		sx += (w[i] ?? 0) * x;
		sy += (w[i] ?? 0) * y;
	});
	const [centreX, centreY] = [sx / total, sy / total];
	let [xx, xy] = [0, 0];
	points.forEach(({ x, y }, i) => {
		xx += (w[i] ?? 0) * (x - centreX) * (x - centreX);
		xy += (w[i] ?? 0) * (x - centreX) * (y - centreY);
	});
	return { w, total, centreX, centreY, xx, slope: xy / xx };
}
