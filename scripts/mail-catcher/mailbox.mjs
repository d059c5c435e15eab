import { randomUUID } from 'node:crypto';
import { mkdir, open, readdir, readFile, rename, rm } from 'node:fs/promises';
import { join } from 'node:path';
import { simpleParser } from 'mailparser';

/**
 * @typedef {object} Caught
 * @property {string} id
 * @property {string} from
 * @property {string[]} to who it was delivered to, as the server was told
 * @property {string} subject
 * @property {string} text
 * @property {string[]} links web addresses in the text, in order
 * @property {string} at ISO time of arrival
 */

/**
 * @param {string} text
 * @returns {{ text: string, link: boolean }[]} the text in pieces
 */
export function piecesOf(text) {
	const pieces = [];
	let at = 0;
	for (const match of text.matchAll(/https?:\/\/[^\s<>"')\]]+/g)) {
		// A full stop or comma after an address belongs to the sentence.
		const link = match[0].replace(/[.,;:!?]+$/, '');
		if (match.index > at) pieces.push({ text: text.slice(at, match.index), link: false });
		pieces.push({ text: link, link: true });
		at = match.index + link.length;
	}
	if (at < text.length) pieces.push({ text: text.slice(at), link: false });
	return pieces;
}

/** Mails in a folder, one file each; what was accepted survives a crash. */
export class Mailbox {
	/** @type {Map<string, Caught>} */
	#mails = new Map();

	/** @param {string} folder */
	constructor(folder) {
		this.folder = folder;
	}

	async open() {
		await mkdir(this.folder, { recursive: true, mode: 0o700 });
		for (const name of (await readdir(this.folder)).sort()) {
			const path = join(this.folder, name);
			// What has another name never arrived whole.
			if (!name.endsWith('.eml')) await rm(path, { force: true });
			else await this.#read(name.slice(0, -4), await readFile(path));
		}
		return this;
	}

	/** @returns {Caught[]} oldest first */
	all() {
		return [...this.#mails.values()];
	}

	/** @param {string} id */
	find(id) {
		return this.#mails.get(id);
	}

	/**
	 * @param {Buffer} source
	 * @param {string[]} recipients
	 */
	async keep(source, recipients) {
		const id = `${Date.now().toString().padStart(14, '0')}-${randomUUID()}`;
		const temporary = join(this.folder, `${id}.arriving`);
		const envelope = Buffer.from(`X-Caught-For: ${recipients.join(', ').replace(/[\r\n]/g, ' ')}\r\n`);
		const whole = Buffer.concat([envelope, source]);
		const handle = await open(temporary, 'wx', 0o600);
		try {
			await handle.writeFile(whole);
			await handle.sync();
		} finally {
			await handle.close();
		}
		await rename(temporary, join(this.folder, `${id}.eml`));
		const folder = await open(this.folder, 'r');
		try {
			await folder.sync();
		} finally {
			await folder.close();
		}
		await this.#read(id, whole);
	}

	async empty() {
		for (const id of this.#mails.keys()) await rm(join(this.folder, `${id}.eml`), { force: true });
		this.#mails.clear();
	}

	/** @param {string} id @param {Buffer} whole */
	async #read(id, whole) {
		const mail = await simpleParser(whole, { skipImageLinks: true });
		const caughtFor = mail.headers.get('x-caught-for');
		const text = (mail.text ?? '').replaceAll('\r\n', '\n').trim();
		this.#mails.set(id, {
			id,
			from: mail.from?.text ?? '',
			to: typeof caughtFor === 'string' ? caughtFor.split(', ').filter(Boolean) : [],
			subject: mail.subject ?? '',
			text,
			links: piecesOf(text)
				.filter((piece) => piece.link)
				.map((piece) => piece.text),
			at: new Date(Number(id.split('-')[0])).toISOString()
		});
	}
}
