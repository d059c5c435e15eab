/** What a report is called where its author is not named: 'linden-4k2p9x' reads 'Linden 4k2p9x'. */
export function labelOf(alias: string): string {
	const [word = '', code = ''] = alias.split('-');
	return `${word.charAt(0).toUpperCase()}${word.slice(1)} ${code}`;
}

/** First name, which is how colleagues are spoken of. */
export const firstName = (name: string): string => name.trim().split(/\s+/)[0] ?? name;

/** 'on time', 'late by 40 min', 'late by 2 h', 'late by 3 days': whole units, rounded down. */
export function receivedInWords(receivedAt: Date, dueAt: Date): string {
	const minutes = Math.floor((receivedAt.getTime() - dueAt.getTime()) / 60_000);
	if (receivedAt.getTime() <= dueAt.getTime()) return 'on time';
	if (minutes < 1) return 'late by less than a minute';
	if (minutes < 120) return `late by ${String(minutes)} min`;
	const hours = Math.floor(minutes / 60);
	if (hours < 48) return `late by ${String(hours)} h`;
	return `late by ${String(Math.floor(hours / 24))} days`;
}
