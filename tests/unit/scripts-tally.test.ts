import { describe, expect, test } from 'vitest';
import { said, sum, tallyOf } from '../../scripts/test/tally.mjs';

const report = (totals: Record<string, number>, files: unknown[] = []) =>
	JSON.stringify({
		numPassedTests: 0,
		numFailedTests: 0,
		numPendingTests: 0,
		numTodoTests: 0,
		testResults: files,
		...totals
	});
const passedFile = { name: 'a.test.ts', status: 'passed', assertionResults: [{ status: 'passed' }] };

describe('what a test run came to', () => {
	test('counts as reported', () => {
		expect(
			tallyOf(report({ numPassedTests: 3, numPendingTests: 1, numTodoTests: 1 }, [passedFile]), 0)
		).toEqual({
			passed: 3,
			failed: 0,
			skipped: 2,
			notes: []
		});
		const failedFile = {
			name: 'b.test.ts',
			status: 'failed',
			assertionResults: [{ status: 'failed' }, { status: 'failed' }]
		};
		expect(tallyOf(report({ numPassedTests: 1, numFailedTests: 2 }, [failedFile]), 1)).toMatchObject({
			passed: 1,
			failed: 2,
			notes: []
		});
	});

	test('a file that did not load is a failure', () => {
		const unloaded = { name: 'c.test.ts', status: 'failed', assertionResults: [] };
		expect(tallyOf(report({ numPassedTests: 1 }, [passedFile, unloaded]), 1)).toMatchObject({
			passed: 1,
			failed: 1
		});
	});

	test('an error nobody awaited is a failure', () => {
		expect(tallyOf(report({ numPassedTests: 1 }, [passedFile]), 1)).toMatchObject({ passed: 1, failed: 1 });
	});

	test('no tests, no report, half a report are failures', () => {
		expect(tallyOf(report({}), 0)).toMatchObject({ failed: 1 });
		expect(tallyOf(undefined, 0)).toMatchObject({ failed: 1 });
		expect(tallyOf('{"numPassedTests": 3', 0)).toMatchObject({ failed: 1 });
	});
});

test('the line says skipped only when something was', () => {
	expect(
		said(
			sum([
				{ passed: 2, failed: 0, skipped: 0 },
				{ passed: 1, failed: 1, skipped: 0 }
			])
		)
	).toBe('3 passed, 1 failed');
	expect(said({ passed: 1, failed: 0, skipped: 4 })).toBe('1 passed, 0 failed, 4 skipped');
});
