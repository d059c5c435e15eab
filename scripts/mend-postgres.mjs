import { readFileSync, writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';

// Runs after each installation of the packages. The database driver defers small writes; when the server's process is
// killed in that moment, the deferred write finds no socket and ends our process, and the connection's next life begins
// with stale bytes and a timer that never fires (its issues 1154 and 1208, open at version 3.4.9). Three lines mend it.
// A version that reads otherwise stops the installation: then look whether it still needs this.

const file = fileURLToPath(new URL('../node_modules/postgres/src/connection.js', import.meta.url));
const forget = 'chunk = nextWriteTimer = null';
const mends = [
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
	}
];

let text = readFileSync(file, 'utf8');
for (const { from, to } of mends) {
	if (text.includes(to)) continue;
	if (text.split(from).length !== 2) {
		console.error(
			`${file} is not the version that scripts/mend-postgres.mjs knows. Look whether it still needs mending.`
		);
		process.exit(1);
	}
	text = text.replace(from, () => to);
}
writeFileSync(file, text);
