const nameWidth = 14;
const summaryWidth = 58;

/**
 * Shows steps as they go: one line for each with what came out of it and how long it took. On a terminal the line is redrawn
 * while the step runs; elsewhere a long step says what it is doing on lines of its own.
 * @param {NodeJS.WriteStream} [stream]
 */
export function createSteps(stream = process.stdout) {
	const line = (/** @type {string} */ name, /** @type {string} */ text) =>
		`  ${name.padEnd(nameWidth)}${text}`;
	const draw = (/** @type {string} */ text) => {
		if (stream.isTTY) stream.write(`\r\u001b[K${text.slice(0, (stream.columns || 100) - 1)}`);
		else stream.write(`${text}\n`);
	};

	/**
	 * @template Result
	 * @param {string} name
	 * @param {(say: (text: string) => void) => Promise<{ said: string, value: Result }> | { said: string, value: Result }} work
	 * @returns {Promise<Result>}
	 */
	return async function step(name, work) {
		const began = performance.now();
		const seconds = () => `${((performance.now() - began) / 1000).toFixed(1)} s`;
		let doing = '';
		const redraw = () =>
			draw(line(name, `${doing.slice(0, summaryWidth).padEnd(summaryWidth)} ${seconds()}`));
		const timer = stream.isTTY ? setInterval(redraw, 200) : undefined;
		if (stream.isTTY) redraw();
		try {
			const { said, value } = await work((text) => {
				doing = `${text} …`;
				if (stream.isTTY) redraw();
				else stream.write(`${line(name, doing)}\n`);
			});
			clearInterval(timer);
			draw(line(name, `${said.padEnd(summaryWidth)} ${seconds()}`));
			if (stream.isTTY) stream.write('\n');
			return value;
		} catch (problem) {
			clearInterval(timer);
			draw(line(name, `stopped`.padEnd(summaryWidth) + ` ${seconds()}`));
			if (stream.isTTY) stream.write('\n');
			throw problem;
		}
	};
}

/**
 * Rows under a heading, columns as wide as they need.
 * @param {string[]} heading
 * @param {string[][]} rows
 */
export function table(heading, rows) {
	const all = [heading, ...rows];
	const widths = heading.map((_, column) => Math.max(...all.map((row) => (row[column] ?? '').length)));
	return all
		.map((row) => `  ${row.map((cell, column) => cell.padEnd(widths[column] ?? 0)).join('  ')}`.trimEnd())
		.join('\n');
}
