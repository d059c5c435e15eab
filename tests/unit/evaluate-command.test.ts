import { describe, expect, it } from 'vitest';
import { main } from '../../scripts/evaluate/main';

const folder = 'templates/vaporization-of-water';

function run(...args: string[]): { code: number; out: string; said: string } {
	let [out, said] = ['', ''];
	const code = main(args, (text) => (out += text), (text) => (said += text)); // prettier-ignore
	return { code, out, said };
}

describe('working readings up from the command line', () => {
	const asked = ['--experiment', folder, '--readings', `readings=${folder}/example/readings.csv`, '--parameters', `${folder}/example/parameters.json`]; // prettier-ignore

	it('prints results, comparisons, fits and problems as JSON', () => {
		const { code, out } = run(...asked, '--json');
		const printed = JSON.parse(out) as {
			results: { name: string; group: string | null; value: number; unit: string }[];
			comparisons: { result: string; verdict: string }[];
			fits: { name: string; points: number }[];
			problems: unknown[];
		};
		expect(code).toBe(0);
		expect(Object.keys(printed).sort()).toEqual(['comparisons', 'fits', 'problems', 'results']);
		expect(printed.results.find(({ name }) => name === 'H_vap')).toMatchObject({
			group: null,
			unit: 'kJ/mol'
		});
		expect(printed.fits.find(({ name }) => name === 'line')?.points).toBe(10);
		expect(printed.comparisons.map(({ result }) => result)).toContain('T_b');
	});

	it('prints sample calculations for reading', () => {
		const { code, out } = run(...asked);
		expect(code).toBe(0);
		expect(out).toContain('Sample calculations');
		expect(out).toContain('\\Delta_{\\mathrm{vap}}H');
	});

	it('ends with 1 where a reading cannot be read', () => {
		const { code, out } = run(
			'--experiment',
			folder,
			'--readings',
			`readings=tests/unit/data/bad-readings.csv`,
			'--json'
		);
		expect(code).toBe(1);
		const { problems } = JSON.parse(out) as {
			problems: { severity: string; row: string | null; column: string | null }[];
		};
		expect(problems).toContainEqual(expect.objectContaining({ severity: 'error', row: '2', column: 'p' }));
	});

	it.each([
		[[], '--experiment is missing'],
		[['--experiment', 'templates/none'], 'no template.yaml'],
		[['--experiment', folder, '--readings', 'readings'], '<table>=<file.csv>'],
		[['--experiment', folder, '--readings', 'trials=x.csv'], 'no table "trials"'],
		[['--experiment', folder, '--readings', 'readings=none.csv'], 'cannot be read'],
		[['--experiment', folder, '--parameters', `${folder}/guide.md`], 'is not JSON'],
		[['--experiment', folder, '--colour'], '--colour']
	])('ends with 2 and says why: %j', (args, reason) => {
		const { code, out, said } = run(...args);
		expect(code).toBe(2);
		expect(out).toBe('');
		expect(said).toContain(reason);
	});
});
