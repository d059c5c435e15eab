import { randomBytes } from 'node:crypto';
import { createServer } from 'node:http';
import { SMTPServer } from 'smtp-server';
import { Mailbox } from './mail-catcher/mailbox.mjs';
import { listPage, mailPage } from './mail-catcher/page.mjs';

// Takes every mail and delivers none: for development and tests, on loopback. A mail is confirmed when it is on the disk.

const largestMailBytes = 20 * 1024 ** 2;

/** @param {import('node:net').Server} server @param {number} port @returns {Promise<number>} the port bound */
function listen(server, port) {
	return new Promise((resolve, reject) => {
		server.once('error', reject);
		server.listen(port, '127.0.0.1', () => {
			const address = server.address();
			resolve(address && typeof address === 'object' ? address.port : port);
		});
	});
}

/**
 * @typedef {object} MailCatcher
 * @property {string} smtpUrl
 * @property {number} smtpPort
 * @property {string} pageUrl page for people; `/messages.json` lists the same for programs, oldest first
 * @property {number} pagePort
 * @property {() => Promise<void>} close
 *
 * @param {object} options
 * @param {string} options.folder
 * @param {number} [options.smtpPort] 0: any
 * @param {number} [options.pagePort] 0: any
 * @returns {Promise<MailCatcher>}
 */
export async function startMailCatcher({ folder, smtpPort = 0, pagePort = 0 }) {
	const mailbox = await new Mailbox(folder).open();

	const smtp = new SMTPServer({
		disabledCommands: ['AUTH', 'STARTTLS'],
		size: largestMailBytes,
		disableReverseLookup: true,
		logger: false,
		onData(stream, session, callback) {
			/** @type {Buffer[]} */
			const chunks = [];
			stream.on('data', (chunk) => chunks.push(chunk));
			stream.on('end', () => {
				if (stream.sizeExceeded)
					return callback(Object.assign(new Error('The mail is too large.'), { responseCode: 552 }));
				const recipients = session.envelope.rcptTo.map((recipient) => recipient.address);
				mailbox.keep(Buffer.concat(chunks), recipients).then(
					() => callback(),
					(problem) => callback(problem)
				);
			});
		}
	});
	// A client that hangs up in the middle is no reason to end.
	smtp.on('error', () => undefined);

	const page = createServer(async (request, response) => {
		const path = (request.url ?? '/').split('?')[0] ?? '/';
		const nonce = randomBytes(16).toString('base64');
		response.setHeader('cache-control', 'no-store');
		response.setHeader('x-content-type-options', 'nosniff');
		response.setHeader(
			'content-security-policy',
			`default-src 'none'; style-src 'nonce-${nonce}'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'`
		);
		const answer = (/** @type {number} */ status, /** @type {string} */ type, /** @type {string} */ body) =>
			response.writeHead(status, { 'content-type': `${type}; charset=utf-8` }).end(body);
		if (path === '/messages.json' && request.method === 'DELETE') {
			// A page elsewhere could otherwise empty it through the visitor's browser.
			if (request.headers.origin !== undefined) return answer(403, 'text/plain', 'Not from a page.');
			await mailbox.empty();
			return answer(200, 'application/json', '[]');
		}
		if (request.method !== 'GET' && request.method !== 'HEAD')
			return answer(405, 'text/plain', 'Only reading.');
		if (path === '/') return answer(200, 'text/html', listPage(mailbox.all(), nonce));
		if (path === '/messages.json') return answer(200, 'application/json', JSON.stringify(mailbox.all()));
		const mail = mailbox.find(/^\/messages\/([\w-]+)$/.exec(path)?.[1] ?? '');
		return mail
			? answer(200, 'text/html', mailPage(mail, nonce))
			: answer(404, 'text/plain', 'No such mail.');
	});

	const boundSmtp = await listen(smtp.server, smtpPort);
	const boundPage = await listen(page, pagePort);
	return {
		smtpUrl: `smtp://127.0.0.1:${boundSmtp}`,
		smtpPort: boundSmtp,
		pageUrl: `http://127.0.0.1:${boundPage}`,
		pagePort: boundPage,
		async close() {
			page.closeAllConnections();
			await new Promise((resolve) => page.close(resolve));
			await new Promise((resolve) => smtp.close(() => resolve(undefined)));
		}
	};
}
