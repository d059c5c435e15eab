import { courseTime } from '$lib/components/shared/course-time';
import { latePenalty } from '$lib/rubrics';
import type { Report } from '$lib/contracts/reports';

export interface RuleInWords {
	/** 'Hand in? You can again until Friday 17:00.' */
	sentence: string;
	late: boolean;
	/** no hand-in is taken any more */
	closed: boolean;
}

/** What handing in at an instant means by the course's rule and clocks. */
export function ruleInWords(due: Report['due'], attempts: number, at: Date): RuleInWords {
	const say = (instant: string) => courseTime(new Date(instant), due.zone, undefined, at);
	const penalty = latePenalty(due.rule, Date.parse(due.dueAt), at.getTime());
	if (at.getTime() >= Date.parse(due.closesAt)) {
		const sentence = `Hand-in closed ${say(due.closesAt)}. Ask your instructor about more time.`;
		return { sentence, late: true, closed: true };
	}
	if (penalty.refused) return { sentence: penalty.sentence, late: true, closed: true };
	const again = `You can again until ${say(due.closesAt)}${attempts > 0 ? '; the newest counts' : ''}.`;
	if (penalty.late) return { sentence: `${penalty.sentence} Hand in? ${again}`, late: true, closed: false };
	const until = Date.parse(due.dueAt) < at.getTime() ? ` ${penalty.sentence}` : ` Due ${say(due.dueAt)}.`;
	return { sentence: `Hand in? ${again}${until}`, late: false, closed: false };
}
