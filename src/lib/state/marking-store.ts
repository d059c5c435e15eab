import type { Write } from './marking-queue';

// What is unsent outlives the page: on this device, under the marking's own key.
const keyOf = (marking: string) => `meniscus:marking:${marking}`;

export function loadQueue(marking: string): Write[] {
	try {
		const kept: unknown = JSON.parse(localStorage.getItem(keyOf(marking)) ?? '[]');
		return Array.isArray(kept) ? (kept as Write[]) : [];
	} catch {
		// Unreadable or forbidden storage: there is nothing to resend.
		return [];
	}
}

/** False when the device keeps nothing: then leaving the page would lose what is unsent. */
export function saveQueue(marking: string, queue: readonly Write[]): boolean {
	try {
		if (queue.length === 0) localStorage.removeItem(keyOf(marking));
		else localStorage.setItem(keyOf(marking), JSON.stringify(queue));
		return true;
	} catch {
		return false;
	}
}
