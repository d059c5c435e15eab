import { readdirSync, readFileSync } from 'node:fs';

/** What the kernel says of a process: state letter and parent; null for none. */
function statOf(pid: number | string): { state: string; parent: number } | null {
	try {
		const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
		const [state, parent] = stat.slice(stat.lastIndexOf(')') + 2).split(' ');
		return { state: state ?? 'X', parent: Number(parent) };
	} catch {
		return null;
	}
}

/** False for what is gone, and for what waits only to be counted out by its parent. */
export function isRunning(pid: number): boolean {
	return !/^[ZX]$/.test(statOf(pid)?.state ?? 'X');
}

/** SIGKILL for a postmaster and all its children; waits until they hold nothing any more. */
export async function killCluster(pid: number): Promise<void> {
	const children = readdirSync('/proc').filter((name) => /^\d+$/.test(name) && statOf(name)?.parent === pid);
	// The postmaster first, so that it cannot look after its children; then they, so that nothing they hold goes on.
	const all = [pid, ...children.map(Number)];
	for (const each of all) {
		try {
			process.kill(each, 'SIGKILL');
		} catch {
			// gone already
		}
	}
	while (all.some(isRunning)) await new Promise((resolve) => setTimeout(resolve, 5));
}
