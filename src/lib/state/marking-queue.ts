import type { MarkingState, RemarkAnchor, RemarkKind, RemarkShape } from '$lib/contracts/marking';

/**
 * What a grader did that the server has not confirmed, in order. Each names what it saw (`was`), so that a change made
 * elsewhere in the meantime can be told from one that touches something else.
 */
export type Write =
	| { kind: 'level'; criterion: string; level: number | null; was: number | null }
	| { kind: 'add'; remark: string; words: Words; anchor: RemarkAnchor }
	| { kind: 'revise'; remark: string; words: Words; was: Words | null }
	| { kind: 'delete'; remark: string; was: Words | null };

export interface Words {
	kind: RemarkKind;
	body: string;
}

const same = (a: Words | null, b: Words | null) => a?.kind === b?.kind && a?.body === b?.body;

/**
 * Adds a write, joined with an earlier one about the same thing where that has not been sent. `inFlight` is how many at the
 * front are on their way and must not be touched.
 */
export function enqueue(queue: readonly Write[], write: Write, inFlight: number): Write[] {
	const sent = queue.slice(0, inFlight);
	const waiting = queue.slice(inFlight);
	if (write.kind === 'level') {
		const earlier = waiting.find((one) => one.kind === 'level' && one.criterion === write.criterion);
		const was = earlier?.kind === 'level' ? earlier.was : write.was;
		const rest = waiting.filter((one) => one !== earlier);
		return was === write.level && earlier ? [...sent, ...rest] : [...sent, ...rest, { ...write, was }];
	}
	if (write.kind === 'add') return [...queue, write];
	const added = waiting.find((one) => one.kind === 'add' && one.remark === write.remark);
	if (added?.kind === 'add') {
		if (write.kind === 'delete')
			return [...sent, ...waiting.filter((one) => !('remark' in one) || one.remark !== write.remark)];
		return [...sent, ...waiting.map((one) => (one === added ? { ...added, words: write.words } : one))];
	}
	const earlier = waiting.find(
		(one) => (one.kind === 'revise' || one.kind === 'delete') && one.remark === write.remark
	);
	const was = earlier && 'was' in earlier && earlier.kind !== 'level' ? earlier.was : write.was;
	const rest = waiting.filter((one) => one !== earlier);
	if (earlier && write.kind === 'revise' && same(was, write.words)) return [...sent, ...rest];
	return [...sent, ...rest, { ...write, was }];
}

/** Levels by criterion, with what is not confirmed yet applied. */
export function levelsWith(state: MarkingState, queue: readonly Write[]): Record<string, number | null> {
	const levels: Record<string, number | null> = Object.fromEntries(
		state.levels.map((row) => [row.criterion, row.level])
	);
	for (const write of queue) if (write.kind === 'level') levels[write.criterion] = write.level;
	return levels;
}

export type QueuedRemark = RemarkShape & { unsent: boolean };

/** Remarks, with what is not confirmed yet applied. `now` dates those that are on this device only. */
export function remarksWith(state: MarkingState, queue: readonly Write[], now: string): QueuedRemark[] {
	let remarks: QueuedRemark[] = state.remarks.map((remark) => ({ ...remark, unsent: false }));
	for (const write of queue) {
		if (write.kind === 'level') continue;
		const known = remarks.find((remark) => remark.id === write.remark);
		if (write.kind === 'delete') remarks = remarks.filter((remark) => remark.id !== write.remark);
		else if (known)
			remarks = remarks.map((remark) =>
				remark === known ? { ...remark, ...write.words, unsent: true } : remark
			);
		else if (write.kind === 'add')
			remarks.push({
				id: write.remark,
				...write.words,
				at: now,
				anchor: { ...write.anchor, attached: true },
				unsent: true
			});
		// A deleted remark that comes back has its place from the state once it is stored.
	}
	return remarks;
}

/** Does a write still speak of what its writer saw, in a state that somebody changed meanwhile? */
export function stillApplies(write: Write, state: MarkingState): boolean {
	if (write.kind === 'add') return true;
	if (write.kind === 'level') {
		const level = state.levels.find((row) => row.criterion === write.criterion)?.level ?? null;
		return level === write.was || level === write.level;
	}
	const remark = state.remarks.find((one) => one.id === write.remark);
	return same(write.was, remark ? { kind: remark.kind, body: remark.body } : null);
}
