import { SvelteMap } from 'svelte/reactivity';
import { v7 as uuidv7 } from 'uuid';
import type { marking as contracts } from '$lib/contracts';
import type { ReplyShape } from '$lib/contracts/marking';
import { request } from './api';
import { ReadInView } from './marking-reading.svelte';
import { keep, kept } from './on-this-device';

function knownRead(person: string, report: string): string[] {
	const known = kept(person, 'read', report);
	return Array.isArray(known) ? known.filter((one) => typeof one === 'string') : [];
}

/** Remarks this person read on this device. Which ones somebody has read is nobody else's business, so the server is not told. */
export function readRemarks(person: string, report: string): ReadInView {
	const known = knownRead(person, report);
	return new ReadInView(known, (remark) => {
		known.push(remark);
		// A device that keeps nothing shows them as unread next time.
		keep(person, 'read', report, known);
	});
}

export type ReplyStatus = { state: 'storing' } | { state: 'stopped'; why: string };

const now = () => new Date().toISOString();

/** Replies to the remarks of one's own report: shown at once, sent under an id made here, repeatable until they arrive. */
export class Replies {
	readonly #added = new SvelteMap<string, ReplyShape[]>();
	readonly #unsent = new SvelteMap<string, ReplyStatus>();

	of(remark: { id: string; replies: readonly ReplyShape[] }): ReplyShape[] {
		const here = this.#added.get(remark.id) ?? [];
		return [
			...remark.replies,
			...here.filter((reply) => !remark.replies.some((there) => there.id === reply.id))
		];
	}

	statusOf(reply: string): ReplyStatus | undefined {
		return this.#unsent.get(reply);
	}

	async add(remark: string, body: string): Promise<boolean> {
		const reply: ReplyShape = { id: uuidv7(), body, at: now(), own: true };
		this.#added.set(remark, [...(this.#added.get(remark) ?? []), reply]);
		return this.send(remark, reply);
	}

	async send(remark: string, reply: ReplyShape): Promise<boolean> {
		this.#unsent.set(reply.id, { state: 'storing' });
		try {
			await request<typeof contracts.replyToRemark>('PUT', '/remarks/{remark}/replies/{reply}', {
				params: { remark, reply: reply.id },
				body: { body: reply.body }
			});
			this.#unsent.delete(reply.id);
			return true;
		} catch (thrown) {
			this.#unsent.set(reply.id, {
				state: 'stopped',
				why: thrown instanceof Error ? thrown.message : 'Not stored.'
			});
			return false;
		}
	}
}
