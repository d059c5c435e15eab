import { readFileSync, writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';

// Runs after each installation of the packages. Two of them leave a loose end where the database's process is killed, and
// that ends our process. A version that reads otherwise stops the installation: then look whether it still needs this.

const forget = 'chunk = nextWriteTimer = null';

const packages = [
	{
		// The driver defers small writes; when the connection is gone by then, the deferred write finds no socket, and the
		// connection's next life begins with stale bytes and a timer that never fires (its issues 1154 and 1208, open at 3.4.9).
		// A new connection asks for the array types by a query of its own that nobody awaits; when the connection is lost in
		// that moment, whoever waits for the connection is told all the same.
		file: 'postgres/src/connection.js',
		mends: [
			{
				from: '  function nextWrite(fn) {\n    const x = socket.write(chunk, fn)\n',
				to: `  function nextWrite(fn) {\n    if (socket === null) {\n      ${forget}\n      return true\n    }\n    const x = socket.write(chunk, fn)\n`
			},
			{
				from: '    clearImmediate(nextWriteTimer)\n    if (socket) {\n',
				to: `    clearImmediate(nextWriteTimer)\n    ${forget}\n    if (socket) {\n`
			},
			{
				from: "    clearImmediate(nextWriteTimer)\n    socket.removeListener('data', data)\n    socket.removeListener('connect', connected)\n    idleTimer",
				to: `    clearImmediate(nextWriteTimer)\n    ${forget}\n    socket.removeListener('data', data)\n    socket.removeListener('connect', connected)\n    idleTimer`
			},
			{
				from: '        return fetchArrayTypes()\n',
				to: '        return fetchArrayTypes().catch(() => undefined)\n'
			}
		]
	},
	{
		// The job runner marks a job as done or failed without awaiting it, inside the very block that is there to catch what
		// goes wrong with that (0.17.3, and 0.18.0 still). Its batches would await it, but after two lost in a row its
		// shutdown waits for ever.
		file: 'graphile-worker/dist/worker.js',
		mends: [
			{ from: '                failJob({\n', to: '                await failJob({\n' },
			{ from: '                completeJob(job);\n', to: '                await completeJob(job);\n' }
		]
	}
];

for (const { file, mends } of packages) {
	const path = fileURLToPath(new URL(`../node_modules/${file}`, import.meta.url));
	const before = readFileSync(path, 'utf8');
	let text = before;
	for (const { from, to } of mends) {
		if (text.includes(to)) continue;
		if (text.split(from).length !== 2) {
			console.error(
				`${path} is not the version that scripts/mend-packages.mjs knows. Look whether it still needs mending.`
			);
			process.exit(1);
		}
		text = text.replace(from, () => to);
	}
	if (text !== before) writeFileSync(path, text);
}
