import { evaluate, type Readings, type Worksheet } from '$lib/worksheets';

/** What the page of the test calls: the evaluation as the text that a snapshot stores. */
Object.assign(globalThis, {
	workUp: (worksheet: Worksheet, readings: Readings) => JSON.stringify(evaluate(worksheet, readings))
});
