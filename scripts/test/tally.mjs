import { readIfThere } from '../start/folder.mjs';

/**
 * @typedef {object} Tally
 * @property {number} passed
 * @property {number} failed
 * @property {number} skipped
 */

/** @param {Tally[]} tallies @returns {Tally} */
export const sum = (tallies) =>
	tallies.reduce(
		(all, one) => ({
			passed: all.passed + one.passed,
			failed: all.failed + one.failed,
			skipped: all.skipped + one.skipped
		}),
		{ passed: 0, failed: 0, skipped: 0 }
	);

/** @param {Tally} tally */
export const said = ({ passed, failed, skipped }) =>
	`${passed} passed, ${failed} failed${skipped > 0 ? `, ${skipped} skipped` : ''}`;

/**
 * What a run of vitest came to. Its own totals leave out files that did not load and errors nobody awaited: a file that failed
 * without a failed test counts as one failure, and so does an unhappy end, or a run without tests, that nothing else explains.
 * @param {string | undefined} report text of its JSON reporter
 * @param {number} code its exit status
 * @returns {Tally & { notes: string[] }}
 */
export function tallyOf(report, code) {
	/** @type {string[]} */
	const notes = [];
	/** @type {any} */
	let parsed;
	try {
		parsed = JSON.parse(report ?? '');
	} catch {
		return { passed: 0, failed: 1, skipped: 0, notes: ['The tests left no report.'] };
	}
	const tally = {
		passed: Number(parsed.numPassedTests ?? 0),
		failed: Number(parsed.numFailedTests ?? 0),
		skipped: Number(parsed.numPendingTests ?? 0) + Number(parsed.numTodoTests ?? 0)
	};
	for (const file of parsed.testResults ?? []) {
		const failedTests = (file.assertionResults ?? []).some(
			(/** @type {any} */ test) => test.status === 'failed'
		);
		if (file.status === 'failed' && !failedTests) {
			tally.failed++;
			notes.push(`${file.name} failed outside its tests.`);
		}
	}
	if (tally.failed === 0 && code !== 0) {
		tally.failed = 1;
		notes.push(`No test failed and the run ended with ${code}: an error outside the tests.`);
	}
	if (tally.failed === 0 && tally.passed + tally.skipped === 0) {
		tally.failed = 1;
		notes.push('There were no tests.');
	}
	return { ...tally, notes };
}

/** @param {string} path @param {number} code */
export const tallyOfFile = (path, code) => tallyOf(readIfThere(path), code);
