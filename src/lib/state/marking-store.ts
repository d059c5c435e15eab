import { noteUnconfirmed } from './local-copies';
import type { Write } from './marking-queue';
import { keep, kept } from './on-this-device';

/** What is unsent outlives the page: on this device, for the one who did it. */
export function loadQueue(person: string, marking: string): Write[] {
	const queue = kept(person, 'marking', marking);
	return Array.isArray(queue) ? queue.filter(isWrite) : [];
}

/** What an earlier version of the page left is not sent on trust. */
function isWrite(one: unknown): one is Write {
	if (typeof one !== 'object' || one === null || !('kind' in one)) return false;
	if (one.kind === 'level') return 'criterion' in one && 'level' in one;
	if (!('remark' in one)) return false;
	return one.kind === 'delete' || ((one.kind === 'add' || one.kind === 'revise') && 'words' in one);
}

/** False when the device keeps nothing: then leaving the page would lose what is unsent. */
export function saveQueue(
	person: string,
	marking: { id: string; label: string; href: string },
	queue: readonly Write[]
): boolean {
	const waiting = queue.length > 0;
	noteUnconfirmed(
		person,
		marking.id,
		waiting ? { title: `Marking of ${marking.label}`, href: marking.href } : null
	);
	return keep(person, 'marking', marking.id, waiting ? queue : null);
}
