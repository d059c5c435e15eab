import { readFileSync } from 'node:fs';

/** Reads one family of NIST's Statistical Reference Datasets; its `source` and `licence` stand in the file. */
export function nistSets<T>(family: string): Record<string, T> {
	const text = readFileSync(new URL(`data/nist/${family}.json`, import.meta.url), 'utf8');
	return (JSON.parse(text) as { sets: Record<string, T> }).sets;
}

/** Columns of decimal text, by name. */
export function columnsOf(names: readonly string[], rows: readonly string[]): Record<string, string[]> {
	const cells = rows.map((row) => row.split(' '));
	return Object.fromEntries(names.map((name, j) => [name, cells.map((row) => row[j] ?? '')]));
}

/**
 * Correct decimal digits: minus the decadic logarithm of the relative deviation, of the deviation itself where the
 * certified value is 0 (log relative error, McCullough 1998). At most 16, all that a double holds.
 */
export function digits(value: number, certified: string | number): number {
	const target = Number(certified);
	const deviation = Math.abs(target === 0 ? value : value / target - 1);
	return deviation === 0 ? 16 : Math.min(16, -Math.log10(deviation));
}

/** The worst digits of a family, for the report that each test file prints. */
export class Worst {
	private readonly rows = new Map<string, { digits: number; of: string }>();

	note(family: string, of: string, value: number): number {
		const known = this.rows.get(family);
		if (!known || !(value >= known.digits)) this.rows.set(family, { digits: value, of });
		return value;
	}

	print(title: string): void {
		const lines = [...this.rows].map(([family, row]) => `  ${family}: ${row.digits.toFixed(1)} (${row.of})`);
		process.stdout.write(`${title}, worst digits\n${lines.join('\n')}\n`);
	}
}
