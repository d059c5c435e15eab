import { untrack } from 'svelte';
import { readReadings, readText } from '$lib/collab';
import type { reports } from '$lib/contracts';
import { presenceIn, type Present } from './editor-presence';
import { openLiveDocument, type LiveDocument, type LiveState } from './live-document.svelte';
import type { ReportSheet } from './report.svelte';
import { sameRows } from './same-rows';

interface Person {
	id: string;
	name: string;
	initials: string;
}

/** What the line at the foot of the sheet says. */
export interface StoringLine {
	text: string;
	state: 'kept' | 'sending' | 'waiting' | 'stopped';
}

/**
 * The live documents of a report: its sections and the readings. Made in the browser only; whatever arrives is put into
 * the sheet, which draws it. `destroy` with the page.
 */
export class LiveReport {
	readonly sections: Record<string, LiveDocument> = {};
	readonly #titles: Record<string, string> = {};
	readonly #readings: LiveDocument<unknown>;
	readonly #stop: () => void;
	/** who else is where, by block number */
	present: Record<string, string[]> = $state.raw({});
	#wasOffline = $state(false);
	#cameBack = $state(false);

	/** `work` is the title of what the report is on. */
	constructor(report: reports.Report, sheet: ReportSheet, person: Person, work: string) {
		for (const { key, title, document: documentId, epoch } of report.sections) {
			this.sections[key] = openLiveDocument({
				documentId,
				epoch,
				person: person.id,
				title: `${title} of ${work}`
			});
			this.#titles[key] = title;
		}
		const tables = sheet.worksheet.tables.map(({ name }) => name);
		this.#readings = openLiveDocument<unknown>({
			documentId: report.readings.document,
			epoch: report.readings.epoch,
			person: person.id,
			title: `Readings of ${work}`,
			content: (doc) => readReadings(doc, tables)
		});
		this.#stop = $effect.root(() => {
			for (const { key, position } of report.sections) {
				const live = this.sections[key];
				if (live) this.#follow(live, key, position, sheet, person);
			}
			this.#followReadings(sheet, tables);
			$effect(() => {
				const state = this.state;
				if (state === 'offline') this.#wasOffline = true;
				else if (this.#wasOffline && state === 'stored') {
					this.#wasOffline = false;
					this.#cameBack = true;
				} else if (state === 'storing') this.#cameBack = false;
			});
		});
	}

	/** The state that matters most among all sections; a section that one may only read says nothing of storing. */
	get state(): LiveState {
		const states = Object.values(this.sections).map((live) => live.state);
		const order: LiveState[] = ['refused', 'offline', 'storing', 'connecting', 'stored', 'read-only'];
		return order.find((state) => states.includes(state)) ?? 'connecting';
	}

	/** Every edit made here is committed on the server, in every section. */
	get stored(): boolean {
		return Object.values(this.sections).every(
			(live) => live.waiting === 0 && (live.state === 'stored' || live.state === 'read-only')
		);
	}

	/** Titles of the sections that hold something only this device has. */
	get unstored(): string[] {
		return Object.entries(this.sections).flatMap(([key, live]) =>
			live.waiting > 0 ? [this.#titles[key] ?? key] : []
		);
	}

	get storedAt(): Date | null {
		const times = Object.values(this.sections).flatMap(({ storedAt }) => storedAt ?? []);
		return times.reduce<Date | null>((latest, at) => (latest && latest > at ? latest : at), null);
	}

	/** `clock` tells an instant in the course's zone: '14:32'. */
	line(clock: (at: Date) => string): StoringLine {
		const waiting = this.unstored;
		switch (this.state) {
			case 'refused':
				return { state: 'stopped', text: refusalText(Object.values(this.sections)) };
			case 'offline':
				return waiting.length > 0
					? {
							state: 'waiting',
							text: `Offline. What you wrote in ${listed(waiting)} is on this device only.`
						}
					: { state: 'waiting', text: 'Offline. What you wrote is stored.' };
			case 'storing':
				return { state: 'sending', text: 'Storing…' };
			case 'connecting':
				return { state: 'kept', text: 'Connecting…' };
			case 'read-only':
				return { state: 'kept', text: 'This can be read, not changed.' };
			case 'stored': {
				const at = this.storedAt;
				if (this.#cameBack) return { state: 'kept', text: 'Online again. Everything is stored.' };
				return { state: 'kept', text: at ? `Stored ${clock(at)}.` : 'Stored.' };
			}
		}
	}

	destroy(): void {
		this.#stop();
		for (const live of Object.values(this.sections)) live.destroy();
		this.#readings.destroy();
	}

	#follow(live: LiveDocument, key: string, position: number, sheet: ReportSheet, person: Person): void {
		$effect(() => {
			const { doc } = live;
			// What the server drew stays until content has arrived: an empty document is not yet an empty section.
			const take = () => {
				const text = readText(doc);
				if (live.synced || text !== '') sheet.setText(key, text);
			};
			void live.synced;
			untrack(take);
			doc.on('update', take);
			return () => doc.off('update', take);
		});
		$effect(() => {
			const { awareness, doc } = live;
			if (!awareness) return;
			awareness.setLocalStateField('user', {
				id: person.id,
				name: person.initials,
				color: 'var(--liquid)',
				colorLight: 'var(--chosen)'
			});
			const look = () => {
				const blocks = sheet.sections[position - 1]?.rendered.blocks ?? [];
				this.#place(position, presenceIn(doc, awareness, blocks, person.id));
			};
			awareness.on('change', look);
			untrack(look);
			return () => awareness.off('change', look);
		});
	}

	#place(position: number, present: Present): void {
		const others = Object.entries(this.present).filter(([block]) => !block.startsWith(`${position}.`));
		this.present = { ...Object.fromEntries(others), ...present };
	}

	#followReadings(sheet: ReportSheet, tables: string[]): void {
		const live = this.#readings;
		$effect(() => {
			const { doc } = live;
			if (!live.synced) return;
			let scheduled = 0;
			const take = () => {
				scheduled = 0;
				const readings = readReadings(doc, tables);
				if (JSON.stringify(readings) !== JSON.stringify(sheet.readings))
					sheet.readings = sameRows(sheet.readings, readings);
			};
			// A pasted table is many edits at once: the workings are done once for all of them.
			const soon = () => {
				scheduled ||= requestAnimationFrame(take);
			};
			untrack(take);
			doc.on('update', soon);
			return () => {
				doc.off('update', soon);
				cancelAnimationFrame(scheduled);
			};
		});
	}
}

function refusalText(documents: LiveDocument[]): string {
	return documents.some(({ refusal }) => refusal === 'signed-out')
		? 'You are signed out. Sign in on another page, then load this one anew. What you wrote is on this device.'
		: 'This report is not yours to write any more. What was not stored is kept on this device.';
}

const listed = (titles: string[]): string =>
	titles.length < 2 ? (titles[0] ?? '') : `${titles.slice(0, -1).join(', ')} and ${titles.at(-1)}`;
