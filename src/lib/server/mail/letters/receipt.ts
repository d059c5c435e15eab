import { letter, pageAddress, type Letter } from './letter';

export interface ReceiptPayload {
	name: string;
	course: string;
	title: string;
	attempt: number;
	/** of the manifest, in hex */
	sha256: string;
	/** ISO 8601, UTC */
	receivedAt: string;
	dueAt: string;
	closesAt: string;
	/** IANA name: the letter tells times as the course's clocks show them */
	zone: string;
	/** what the course's rule says: 'On time.' or 'Late by 2 h: ...' */
	lateness: string;
	sections: { position: number; title: string; written: boolean }[];
	path: string;
}

/** To the author of a report that was handed in. */
export function receipt(payload: ReceiptPayload): Letter {
	const { title, attempt, zone } = payload;
	const at = (instant: string) => clock(new Date(instant), zone);
	const again = attempt === 1 ? '' : ` This is hand-in ${attempt}; it counts instead of the earlier one.`;
	const sections = payload.sections.map(
		({ position, title: name, written }) => `  ${position} ${name}${written ? '' : ' (nothing written)'}`
	);
	return letter(
		`Handed in: ${title}${attempt === 1 ? '' : ` (${attempt})`}`,
		[
			`${payload.name},`,
			`your report on ${title}, ${payload.course}, was received on ${at(payload.receivedAt)}.${again}`,
			`It was due on ${at(payload.dueAt)}. ${payload.lateness}`,
			`What was handed in:\n${sections.join('\n')}\nwith the readings and results as they stood.`,
			`SHA-256 of it:\n${payload.sha256}`,
			`You can hand in again until ${at(payload.closesAt)}; the newest counts:\n${pageAddress(payload.path)}`
		],
		'You get this because you handed in a report. Keep it: it is your receipt.'
	);
}

/** 'Friday 4 December 2026, 16:41 (Atlantic Standard Time)' */
function clock(at: Date, zone: string): string {
	const format = new Intl.DateTimeFormat('en-GB', {
		timeZone: zone,
		weekday: 'long',
		day: 'numeric',
		month: 'long',
		year: 'numeric',
		hour: '2-digit',
		minute: '2-digit',
		hourCycle: 'h23',
		timeZoneName: 'long'
	});
	const part = Object.fromEntries(format.formatToParts(at).map(({ type, value }) => [type, value]));
	return `${part['weekday']} ${part['day']} ${part['month']} ${part['year']}, ${part['hour']}:${part['minute']} (${part['timeZoneName']})`;
}
