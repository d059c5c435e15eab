import { divideHalfEven, fromHundredths, toHundredths } from './exact';
import type { LatePenalty, LateRule } from './types';

const minute = 60_000;
const hour = 60 * minute;

/**
 * What a course's rule says of a report. Instants in milliseconds of one clock (UTC). A report received at the due
 * instant, or up to the grace after it, is on time. A step covers lateness up to and including its hours, counted
 * from the due instant.
 */
export function latePenalty(rule: LateRule, dueInstant: number, receivedInstant: number): LatePenalty {
	const late = receivedInstant - dueInstant;
	if (late <= rule.graceMinutes * minute) {
		return {
			late: false,
			minutesLate: 0,
			deduction: 0,
			refused: false,
			sentence: late <= 0 ? 'On time.' : 'On time, within the grace.'
		};
	}
	const minutesLate = Math.ceil(late / minute);
	const by = `Late by ${duration(minutesLate)}`;
	const limit = rule.refuseAfterHours ?? null;
	if (limit !== null && late > limit * hour) {
		const sentence = `${by}: this course's rule takes nothing later than ${duration(Math.round(limit * 60))}.`;
		return { late: true, minutesLate, deduction: 1, refused: true, sentence };
	}
	const steps = [...rule.steps].sort((a, b) => a.upToHours - b.upToHours);
	const step = steps.find(({ upToHours }) => late <= upToHours * hour) ?? steps[steps.length - 1];
	const percent = step?.percent ?? 0;
	const basis = toHundredths(percent, 'Percentage of a late step');
	if (basis < 0 || basis > 10_000)
		throw new RangeError(`Percentage of a late step: ${percent} is outside 0 to 100`);
	const rest = basis === 0 ? 'nothing off' : `${fromHundredths(basis)}\u00a0% off`;
	return {
		late: true,
		minutesLate,
		deduction: basis / 10_000,
		refused: false,
		sentence: `${by}: ${rest} by this course's rule.`
	};
}

/** Points left after a deduction, and what was taken: a share of the points reached, to the hundredth, halves to even. */
export function finalMark(
	points: number,
	penalty: Pick<LatePenalty, 'deduction'>
): { points: number; taken: number } {
	const reached = toHundredths(points, 'Points');
	const taken = divideHalfEven(reached * Math.round(penalty.deduction * 10_000), 10_000);
	return { points: fromHundredths(reached - taken), taken: fromHundredths(taken) };
}

/** '35 min', '2 h', '2 h 10 min', '3 days 4 h': minutes are left out from one day on. */
function duration(minutes: number): string {
	const hours = Math.floor(minutes / 60);
	const part = (count: number, unit: string): string[] => (count === 0 ? [] : [`${count}\u00a0${unit}`]);
	if (hours < 24) return [...part(hours, 'h'), ...part(minutes % 60, 'min')].join(' ');
	const days = Math.floor(hours / 24);
	return [...part(days, days === 1 ? 'day' : 'days'), ...part(hours % 24, 'h')].join(' ');
}
