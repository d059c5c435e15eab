import { v7 as uuidv7 } from 'uuid';
import { WebSocket } from 'ws';
import { insertRows, sectionText } from '../../src/lib/collab';
import { LiveConnection } from '../../src/lib/state/live-connection';

/** What the outside world was told: nothing enters without a 2xx answer or an answered barrier. */
export interface Ledger {
	words: string[];
	rows: string[];
	attempts: { id: string; sha256: string; key: string }[];
	remarks: { id: string; body: string }[];
	levels: number[];
}

export const emptyLedger = (): Ledger => ({ words: [], rows: [], attempts: [], remarks: [], levels: [] });

export interface Place {
	origin: string;
	/** as a header */
	cookie: string;
}

const pause = (ms: number) => new Promise<void>((resolve) => setTimeout(resolve, ms));

/** The product's own live client, over a socket that carries a person's cookie. */
export function openLive(
	place: Place,
	documentId: string,
	epoch: number,
	person: string
): LiveConnection<string> {
	return new LiveConnection<string>({
		documentId,
		epoch,
		person,
		url: `${place.origin.replace('http', 'ws')}/live`,
		content: (doc) => sectionText(doc).toString(),
		changed: () => undefined,
		local: null,
		barrierMs: 10,
		// Sooner than a page: most kills are to find everybody at work again.
		reconnectMs: { first: 50, longest: 200 },
		WebSocket: class extends WebSocket {
			constructor(url: string) {
				super(url, { headers: { cookie: place.cookie, origin: place.origin } });
				this.on('error', () => undefined);
			}
		}
	});
}

export interface Actor {
	/** it gave up by itself; stopping it then throws why */
	readonly failed: boolean;
	stop(): Promise<void>;
}

/** Types in bursts; enters a burst in the ledger when the page would say "Stored". */
function writer(live: LiveConnection<string>, type: () => string, ledger: string[]): Actor {
	let running = true;
	const done = (async () => {
		while (running) {
			const burst = [type(), type(), type()];
			while (running && live.state !== 'stored') await pause(5);
			if (live.state === 'stored') ledger.push(...burst);
			await pause(30);
		}
	})();
	return {
		get failed() {
			return live.state === 'refused';
		},
		async stop() {
			running = false;
			await done;
			const { state } = live;
			live.destroy();
			if (state === 'refused') throw new Error(`a writer was turned away: ${live.refusal}`);
		}
	};
}

export function writeWords(live: LiveConnection<string>, name: string, ledger: Ledger): Actor {
	let n = 0;
	const type = () => {
		const word = `<${name}${n++}>`;
		const text = sectionText(live.doc);
		text.insert(text.length, word);
		return word;
	};
	return writer(live, type, ledger.words);
}

export function writeRows(live: LiveConnection<string>, ledger: Ledger): Actor {
	let last: string | undefined;
	const type = () => {
		const id = uuidv7();
		insertRows(live.doc, 'readings', [{ id, cells: { t: '91.60', p: '559.6' } }], last);
		last = id;
		return id;
	};
	return writer(live, type, ledger.rows);
}

/** null: no answer, or an answer that promises nothing (5xx). */
async function send(
	place: Place,
	method: string,
	path: string,
	body: unknown,
	headers: Record<string, string> = {}
): Promise<{ status: number; json: Record<string, unknown> } | null> {
	try {
		const answer = await fetch(`${place.origin}/api/v1${path}`, {
			method,
			signal: AbortSignal.timeout(5_000),
			headers: { cookie: place.cookie, origin: place.origin, 'content-type': 'application/json', ...headers },
			...(body === undefined ? {} : { body: JSON.stringify(body) })
		});
		const json = (await answer.json()) as Record<string, unknown>;
		return answer.status >= 500 ? null : { status: answer.status, json };
	} catch {
		return null;
	}
}

function loop(step: () => Promise<void>, everyMs: number): Actor {
	let running = true;
	let failure: unknown;
	const done = (async () => {
		while (running) {
			await step();
			await pause(everyMs);
		}
	})().catch((problem: unknown) => {
		failure = problem;
	});
	return {
		get failed() {
			return failure !== undefined;
		},
		async stop() {
			running = false;
			await done;
			if (failure) throw failure;
		}
	};
}

/** Hands in again and again, each time under one key until it is answered. */
export function handInAgain(place: Place, report: string, body: unknown, ledger: Ledger): Actor {
	let key = uuidv7();
	return loop(async () => {
		const answer = await send(place, 'POST', `/reports/${report}/hand-in`, body, { 'idempotency-key': key });
		if (!answer) return;
		if (answer.status >= 300)
			throw new Error(`hand-in refused: ${answer.status} ${JSON.stringify(answer.json)}`);
		const { id, sha256 } = answer.json['attempt'] as { id: string; sha256: string };
		ledger.attempts.push({ id, sha256, key });
		key = uuidv7();
	}, 80);
}

/** Sets levels and adds remarks, repeating each until it is answered. */
export function markAlong(
	place: Place,
	marking: string,
	criterion: string,
	anchor: unknown,
	first: { revision: number },
	ledger: Ledger
): Actor {
	let { revision } = first;
	let level = 1;
	let remark = { id: uuidv7(), body: 'remark 0' };
	let turn = 0;
	const change = async (path: string, body: unknown): Promise<boolean> => {
		const answer = await send(place, 'PUT', path, body, { 'if-match': `"${revision}"` });
		if (!answer) return false;
		if (answer.status === 412) {
			// An unanswered write may have been made: look, then repeat.
			const now = await send(place, 'GET', `/markings/${marking}`, undefined);
			if (now && now.status === 200) revision = Number(now.json['revision']);
			return false;
		}
		if (answer.status >= 300)
			throw new Error(`marking refused: ${answer.status} ${JSON.stringify(answer.json)}`);
		revision = Number(answer.json['revision']);
		return true;
	};
	return loop(async () => {
		if (turn % 2 === 0) {
			if (!(await change(`/markings/${marking}/levels/${criterion}`, { level }))) return;
			ledger.levels.push(level);
			level = (level % 4) + 1;
		} else {
			if (
				!(await change(`/markings/${marking}/remarks/${remark.id}`, {
					kind: 'note',
					body: remark.body,
					anchor
				}))
			)
				return;
			ledger.remarks.push(remark);
			remark = { id: uuidv7(), body: `remark ${turn}` };
		}
		turn += 1;
	}, 30);
}
