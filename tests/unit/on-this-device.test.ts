import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import {
	browserCopies,
	forgetPerson,
	noteUnconfirmed,
	unconfirmedWork
} from '../../src/lib/state/local-copies';
import { loadQueue, saveQueue } from '../../src/lib/state/marking-store';
import type { Write } from '../../src/lib/state/marking-queue';
import { databaseNames, keep, kept } from '../../src/lib/state/on-this-device';

const amal = '01900000-0000-7000-8000-000000000001';
const jonas = '01900000-0000-7000-8000-000000000002';
const level: Write = { kind: 'level', criterion: 'a', level: 2, was: null };
const marking = { id: 'm', label: 'Agate 27', href: '/c/pc310/sitting/agate-27/report' };

/** As a browser's: what is stored shows as the object's own keys. */
class Storage {
	getItem(key: string): string | null {
		return Object.hasOwn(this, key) ? String(Reflect.get(this, key)) : null;
	}
	setItem(key: string, value: string): void {
		Reflect.set(this, key, value);
	}
	removeItem(key: string): void {
		Reflect.deleteProperty(this, key);
	}
}

let databases: Set<string>;

/** A browser that cannot list its databases. */
function databasesWithoutList() {
	return {
		deleteDatabase(name: string) {
			const request: { onsuccess?: () => void } = {};
			queueMicrotask(() => {
				databases.delete(name);
				request.onsuccess?.();
			});
			return request;
		}
	};
}

beforeEach(() => {
	databases = new Set();
	vi.stubGlobal('localStorage', new Storage());
	vi.stubGlobal('indexedDB', databasesWithoutList());
});
afterEach(() => {
	vi.unstubAllGlobals();
});

describe('what a browser keeps', () => {
	it('is one person’s: another at the same computer neither sees nor sends it', () => {
		expect(saveQueue(amal, marking, [level])).toBe(true);
		keep(amal, 'read', 'report', ['remark']);
		expect(loadQueue(amal, 'm')).toEqual([level]);
		expect(loadQueue(jonas, 'm')).toEqual([]);
		expect(kept(jonas, 'read', 'report')).toBeNull();
		expect(unconfirmedWork(jonas)).toEqual([]);
	});

	it('is named while the server has not confirmed it', () => {
		saveQueue(amal, marking, [level]);
		noteUnconfirmed(amal, 'd', { title: 'Abstract of Water', href: '/c/pc310/w/1/report' });
		expect(unconfirmedWork(amal)).toEqual([
			{ title: 'Abstract of Water', href: '/c/pc310/w/1/report' },
			{ title: 'Marking of Agate 27', href: marking.href }
		]);
		saveQueue(amal, marking, []);
		noteUnconfirmed(amal, 'd', null);
		expect(unconfirmedWork(amal)).toEqual([]);
	});

	it('is wiped for the one who signs out, databases that the browser does not list included', async () => {
		for (const name of [`meniscus:${amal}:d:1`, `meniscus:${jonas}:d:1`]) {
			databases.add(name);
			databaseNames.add(name);
		}
		saveQueue(amal, marking, [level]);
		saveQueue(jonas, marking, [level]);
		expect(await browserCopies.names(`meniscus:${amal}:`)).toEqual([`meniscus:${amal}:d:1`]);
		await forgetPerson(amal);
		expect([...databases]).toEqual([`meniscus:${jonas}:d:1`]);
		expect(Object.keys(localStorage).filter((key) => key.includes(amal))).toEqual([]);
		expect(loadQueue(jonas, 'm')).toEqual([level]);
		expect(await browserCopies.names(`meniscus:${jonas}:`)).toEqual([`meniscus:${jonas}:d:1`]);
	});

	it('is nothing where storage is forbidden, and says so', () => {
		vi.stubGlobal('localStorage', undefined);
		expect(saveQueue(amal, marking, [level])).toBe(false);
		expect(loadQueue(amal, 'm')).toEqual([]);
		expect(unconfirmedWork(amal)).toEqual([]);
	});
});
