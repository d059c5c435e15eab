/** `clock`: 14:32; `day`: Friday 17:00; `date`: Friday 4 December; `date-clock`: Fri 4 Dec, 17:00; `full`: Friday 4 December 2026, 17:00. */
export type TimeForm = 'clock' | 'day' | 'date' | 'date-clock' | 'full';

const dayInMs = 86_400_000;

function parts(at: Date, zone: string): Record<string, string> {
	const format = new Intl.DateTimeFormat('en-GB', {
		timeZone: zone,
		weekday: 'long',
		day: 'numeric',
		month: 'long',
		year: 'numeric',
		hour: '2-digit',
		minute: '2-digit',
		hourCycle: 'h23'
	});
	return Object.fromEntries(format.formatToParts(at).map(({ type, value }) => [type, value]));
}

/**
 * An instant as the course's clocks show it. Without a form the shortest that cannot be mistaken `now`: the clock on
 * the same day, the weekday within six days, the date within half a year, the year beyond.
 */
export function courseTime(at: Date, zone: string, form?: TimeForm, now?: Date): string {
	const p = parts(at, zone);
	const clock = `${p['hour']}:${p['minute']}`;
	const date = `${p['weekday']} ${p['day']} ${p['month']}`;
	switch (form ?? formFor(at, zone, now)) {
		case 'clock':
			return clock;
		case 'day':
			return `${p['weekday']} ${clock}`;
		case 'date':
			return date;
		case 'date-clock':
			return `${p['weekday']?.slice(0, 3)} ${p['day']} ${p['month']?.slice(0, 3)}, ${clock}`;
		case 'full':
			return `${date} ${p['year']}, ${clock}`;
	}
}

function formFor(at: Date, zone: string, now: Date | undefined): TimeForm {
	if (now === undefined) return 'full';
	const here = parts(at, zone);
	const there = parts(now, zone);
	if (['year', 'month', 'day'].every((part) => here[part] === there[part])) return 'clock';
	const days = Math.abs(at.getTime() - now.getTime()) / dayInMs;
	return days < 6 ? 'day' : days < 180 ? 'date-clock' : 'full';
}
