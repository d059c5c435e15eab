import { untrack } from 'svelte';
import type { Awareness } from 'y-protocols/awareness';
import * as Y from 'yjs';
import {
	insertRows,
	readingsParts,
	readReadings,
	removeRow,
	setCell,
	setParameter,
	setStatus,
	type NewRow,
	type RowStatus
} from '$lib/collab';
import type { ReadingRow, Readings, Worksheet } from '$lib/worksheets';
import { openLiveDocument, type LiveDocument } from './live-document.svelte';
import { counted, differences, liveRowLimit, pastedCells, statusOf, type Difference } from './readings-text';
import { sameRows } from './same-rows';
import { Workings } from './workings.svelte';

export interface Person {
	id: string;
	name: string;
	initials: string;
}

export interface ReadingsSheetOptions {
	worksheet: Worksheet;
	/** as stored when the page was made: shown until the live document has come */
	readings: Readings;
	document: { id: string; epoch: number; canWrite: boolean; closed: 'frozen' | 'sealed' | null };
	person: Person;
	/** title of the work they are of */
	work: string;
	/** the course's, for times of day */
	zone: string;
}

export interface Place {
	table: string;
	row: string;
	column: string;
}

/** Where somebody else is. */
interface Presence extends Person {
	at: Place | null;
}

/** What an act on the table came to, in a sentence. */
export interface Outcome {
	done: boolean;
	text: string;
}

const newRowId = () => crypto.randomUUID().replaceAll('-', '').slice(0, 12);

/** The readings of one bench as the page works with them: live table, undo, presence, workings. */
export class ReadingsSheet {
	readonly worksheet: Worksheet;
	readonly workings: Workings;
	readonly #options: ReadingsSheetOptions;
	readonly #tableNames: string[];

	readings: Readings = $state.raw() as Readings;
	live: LiveDocument<Readings> | null = $state.raw(null);
	/** the live content has come, from the server or from this device */
	ready = $state(false);
	canUndo = $state(false);
	canRedo = $state(false);
	/** acts that can be undone: the same number as before means that nothing was done since */
	undoDepth = $state(0);
	others: Presence[] = $state.raw([]);
	/** readings changed here that are not confirmed */
	#here = $state(0);
	#cameBack = $state(0);
	// eslint-disable-next-line svelte/prefer-svelte-reactivity -- counted into #here; nothing draws the set itself
	readonly #changedHere = new Set<string>();
	#wasOffline = false;

	#doc: Y.Doc | null = null;
	#awareness: Awareness | null = null;
	#undo: Y.UndoManager | null = null;
	#at: Place | null = null;

	constructor(options: ReadingsSheetOptions) {
		this.#options = options;
		this.worksheet = options.worksheet;
		this.#tableNames = options.worksheet.tables.map((table) => table.name);
		this.readings = options.readings;
		this.workings = new Workings(options.worksheet, options.readings);
	}

	readonly canWrite = $derived.by(
		() => this.ready && this.#options.document.canWrite && (this.live?.canWrite ?? false)
	);

	readonly status = $derived.by(() =>
		this.live
			? statusOf(
					this.live,
					this.#here,
					this.#cameBack,
					this.#options.document.closed,
					'reading',
					this.#options.zone
				)
			: statusOf({ state: 'connecting', refusal: null, storedAt: null }, 0, 0, null)
	);

	/** Typed here and not taken: the document was closed, or somebody may not write any more. */
	readonly unsent: Difference[] = $derived.by(() => {
		const unsent = this.live?.unsent;
		return unsent ? differences(this.worksheet, unsent.here, unsent.stored) : [];
	});

	rows(table: string): ReadingRow[] {
		return this.readings.tables[table] ?? [];
	}

	/** Opens the live document; call it inside an effect of the page, which closes it again. */
	open(): () => void {
		const { document, person, work } = this.#options;
		const live = untrack(() =>
			openLiveDocument<Readings>({
				documentId: document.id,
				epoch: document.epoch,
				person: person.id,
				title: `Readings of ${work}`,
				write: document.canWrite,
				content: (doc) => readReadings(doc, this.#tableNames)
			})
		);
		this.live = live;
		// The document is another one after an epoch ended.
		$effect(() => this.#bind(live.doc, live.awareness));
		$effect(() => {
			if (live.synced) untrack(() => this.#take());
		});
		$effect(() => {
			const state = live.state;
			untrack(() => this.#stateChanged(state));
		});
		return () => {
			live.destroy();
			this.workings.destroy();
			this.live = null;
		};
	}

	#bind(doc: Y.Doc, awareness: Awareness | null): () => void {
		this.#doc = doc;
		this.#awareness = awareness;
		const undo = new Y.UndoManager(readingsParts(doc, this.#tableNames), { captureTimeout: 800 });
		this.#undo = undo;
		let scheduled = false;
		const changed = () => {
			if (scheduled) return;
			scheduled = true;
			queueMicrotask(() => {
				scheduled = false;
				if (this.#doc === doc) this.#take();
			});
		};
		const stack = () => {
			this.canUndo = undo.canUndo();
			this.undoDepth = undo.undoStack.length;
			this.canRedo = undo.canRedo();
		};
		const presence = () => {
			const states = [...(awareness?.getStates().entries() ?? [])];
			this.others = states.flatMap(([client, state]) => {
				const reader = (state as { reader?: Presence }).reader;
				return client !== doc.clientID && reader ? [reader] : [];
			});
		};
		doc.on('update', changed);
		undo.on('stack-item-added', stack);
		undo.on('stack-item-popped', stack);
		undo.on('stack-cleared', stack);
		awareness?.on('change', presence);
		untrack(() => {
			stack();
			this.#tellPresence();
			this.ready = false;
			// From this device, before or without the server.
			if (readingsParts(doc, this.#tableNames).some((part) => (part as Y.Map<unknown>).size > 0))
				this.#take();
		});
		return () => {
			doc.off('update', changed);
			awareness?.off('change', presence);
			undo.destroy();
		};
	}

	#take(): void {
		if (!this.#doc) return;
		this.readings = sameRows(this.readings, readReadings(this.#doc, this.#tableNames));
		this.ready = true;
		this.workings.follow(this.readings);
	}

	#stateChanged(state: LiveDocument['state']): void {
		if (state === 'offline') this.#wasOffline = true;
		if (state !== 'stored') return;
		this.#cameBack = this.#wasOffline ? this.#changedHere.size : 0;
		this.#wasOffline = false;
		this.#changedHere.clear();
		this.#here = 0;
	}

	#changed(key: string): void {
		this.#changedHere.add(key);
		this.#here = this.#changedHere.size;
		this.#cameBack = 0;
	}

	#tellPresence(): void {
		const { id, name, initials } = this.#options.person;
		this.#awareness?.setLocalStateField('reader', { id, name, initials, at: this.#at } satisfies Presence);
	}

	/** Where this person is; the next edit there is an undo step of its own. */
	enter(at: Place | null): void {
		this.#at = at;
		this.#undo?.stopCapturing();
		this.#tellPresence();
	}

	/** Initials of others in a row. */
	present(table: string, row: string): string[] {
		return this.others.flatMap(({ at, initials }) =>
			at?.table === table && at.row === row ? [initials] : []
		);
	}

	/** What tells the rows of a table apart, in their order: what rows of other tables may belong to. */
	keysOf(table: string): string[] {
		const definition = this.worksheet.tables.find(({ name }) => name === table);
		const key = definition?.key;
		if (!definition || key == null) return [];
		const rows = definition.fixed ?? this.rows(table).map(({ cells }) => cells);
		const texts = rows.map((cells) => (cells[key] ?? '').trim());
		return texts.filter((text, index) => text !== '' && texts.indexOf(text) === index);
	}

	setParameter(name: string, text: string): void {
		if (!this.canWrite || !this.#doc) return;
		this.#changed(name);
		setParameter(this.#doc, name, text);
	}

	/** Writes a cell as typed; a row that is not there yet comes into being at the end. */
	setCell(table: string, row: string, column: string, text: string): void {
		if (!this.canWrite || !this.#doc) return;
		this.#changed(`${table} ${row} ${column}`);
		if (!setCell(this.#doc, table, row, column, text) && text !== '')
			insertRows(this.#doc, table, [{ id: row, cells: { [column]: text } }]);
	}

	setStatus(table: string, row: string, status: RowStatus, reason?: string): void {
		if (!this.canWrite || !this.#doc) return;
		this.#changed(`${table} ${row} status`);
		setStatus(this.#doc, table, row, status, reason);
	}

	insertRow(table: string, after: string | null): void {
		if (!this.canWrite || !this.#doc || this.rows(table).length >= liveRowLimit) return;
		insertRows(this.#doc, table, [{ id: newRowId(), cells: {} }], after);
	}

	removeRow(table: string, row: string): void {
		if (!this.canWrite || !this.#doc) return;
		this.#undo?.stopCapturing();
		this.#changed(`${table} ${row}`);
		removeRow(this.#doc, table, row);
		this.#undo?.stopCapturing();
	}

	undo(): void {
		this.#undo?.undo();
	}
	redo(): void {
		this.#undo?.redo();
	}

	/** Adds read rows at the end. */
	insertRead(table: string, read: readonly { cells: Record<string, string> }[]): Outcome {
		const there = this.rows(table).length;
		if (!this.canWrite || !this.#doc)
			return { done: false, text: 'Nothing was inserted: the table cannot be changed now.' };
		if (there + read.length > liveRowLimit) return tooMany(there + read.length);
		const rows: NewRow[] = read.map(({ cells }) => ({ id: newRowId(), cells }));
		this.#undo?.stopCapturing();
		for (const { id } of rows) this.#changed(`${table} ${id}`);
		insertRows(this.#doc, table, rows);
		this.#undo?.stopCapturing();
		return { done: true, text: `${counted(rows.length, 'row')} inserted.` };
	}

	/** Fills cells from a place on with a pasted block; rows beyond the end are added. */
	paste(place: Place, text: string): Outcome {
		const doc = this.#doc;
		if (!this.canWrite || !doc)
			return { done: false, text: 'Nothing was pasted: the table cannot be changed now.' };
		const { table } = place;
		const columns = this.#columns(table);
		const from = columns.indexOf(place.column);
		const block = pastedCells(text);
		const rows = this.rows(table);
		const at = rows.findIndex(({ id }) => id === place.row);
		const start = at === -1 ? rows.length : at;
		if (start + block.length > liveRowLimit) return tooMany(start + block.length);
		let beyond = 0;
		this.#undo?.stopCapturing();
		doc.transact(() => {
			const added: NewRow[] = [];
			block.forEach((cells, index) => {
				const row = rows[start + index];
				const fresh: NewRow = { id: index === 0 && at === -1 ? place.row : newRowId(), cells: {} };
				cells.forEach((cell, offset) => {
					const column = columns[from + offset];
					if (column === undefined) {
						if (cell !== '') beyond += 1;
					} else if (row) {
						this.#changed(`${table} ${row.id} ${column}`);
						setCell(doc, table, row.id, column, cell);
					} else {
						this.#changed(`${table} ${fresh.id} ${column}`);
						fresh.cells[column] = cell;
					}
				});
				if (!row) added.push(fresh);
			});
			insertRows(doc, table, added);
		});
		this.#undo?.stopCapturing();
		const left =
			beyond > 0
				? ` ${counted(beyond, 'cell')} to the right of the last column ${beyond === 1 ? 'was' : 'were'} left out.`
				: '';
		return { done: true, text: `${counted(block.length, 'row')} pasted.${left}` };
	}

	#columns(table: string): string[] {
		const definition = this.worksheet.tables.find(({ name }) => name === table);
		return (definition?.columns ?? []).filter(({ formula }) => formula === null).map(({ name }) => name);
	}

	/** Puts what was not taken into the document that is current now. */
	async putIn(): Promise<void> {
		for (const { place, here } of this.unsent) {
			if ('parameter' in place) this.setParameter(place.parameter, here);
			else this.setCell(place.table, place.row, place.column, here);
		}
		await this.live?.dismissUnsent();
	}

	/** An id for the row that begins to exist with its first sign. */
	freshRow(): string {
		return newRowId();
	}
}

function tooMany(rows: number): Outcome {
	return {
		done: false,
		text: `A table takes ${liveRowLimit.toLocaleString('en')} rows, and this would make ${rows.toLocaleString('en')}. Nothing was taken. Upload the file: it is kept whole, and a thinned-out part can go into the table.`
	};
}
