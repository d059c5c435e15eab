export interface CaughtMail {
	id: string;
	from: string;
	to: string[];
	subject: string;
	text: string;
	links: string[];
	/** Time of arrival, UTC. */
	at: string;
}

function page(): string {
	const address = process.env['MAIL_PAGE_URL'];
	if (!address)
		throw new Error('There is no mail catcher: only the server and browser projects of vitest start one.');
	return address;
}

/**
 * Mails the catcher holds, oldest first.
 * @param to only those to this address
 */
export async function caughtMail(to?: string): Promise<CaughtMail[]> {
	const response = await fetch(`${page()}/messages.json`);
	if (!response.ok) throw new Error(`The mail catcher answered ${response.status}.`);
	const all = (await response.json()) as CaughtMail[];
	return to === undefined ? all : all.filter((mail) => mail.to.includes(to));
}

/** Empties the catcher. */
export async function forgetMail(): Promise<void> {
	const response = await fetch(`${page()}/messages.json`, { method: 'DELETE' });
	if (!response.ok) throw new Error(`The mail catcher answered ${response.status}.`);
}
