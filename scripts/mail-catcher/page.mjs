import { piecesOf } from './mailbox.mjs';

const entities = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&#39;' };

/** @param {string} text */
const escape = (text) =>
	text.replace(/[&<>"']/g, (character) => entities[/** @type {keyof typeof entities} */ (character)]);

/** The application's tokens, so that the page beside it does not look like somebody else's. */
const style = `
:root { color-scheme: light dark; --page: #fcfdfc; --margin: #f1f4f3; --ink: #16201f; --quiet: #505b5a; --liquid: #632080; --hairline: #d5dbd9; }
@media (prefers-color-scheme: dark) {
	:root { --page: #141a1a; --margin: #1b2322; --ink: #e4eae8; --quiet: #a3afac; --liquid: #c9a6ec; --hairline: #36403f; }
}
body { margin: 0; background: var(--margin); color: var(--ink); font: 1rem/1.5 'Atkinson Hyperlegible Next', system-ui, sans-serif; }
main { max-width: 648px; margin: 0 auto; min-height: 100vh; box-sizing: border-box; padding: 28px 41px; background: var(--page); }
h1 { font-size: 1.375rem; line-height: 1.75rem; font-weight: 600; margin: 0 0 4px; }
p { margin: 0; }
.quiet, time { color: var(--quiet); font-size: .875rem; line-height: 1.25rem; }
ol { list-style: none; margin: 28px 0 0; padding: 0; }
li { border-top: 1px solid var(--hairline); }
li a { display: block; padding: 10px 0; min-height: 44px; box-sizing: border-box; color: inherit; text-decoration: none; }
li a:hover strong, a:hover { text-decoration: underline; }
strong { display: block; font-weight: 600; }
a { color: var(--liquid); }
a:focus-visible { outline: 2px solid var(--liquid); outline-offset: 2px; }
dl { display: grid; grid-template-columns: 4rem 1fr; gap: 2px 12px; margin: 16px 0 0; font-size: .875rem; line-height: 1.25rem; }
dt { color: var(--quiet); }
dd { margin: 0; overflow-wrap: anywhere; }
pre { margin: 28px 0 0; white-space: pre-wrap; overflow-wrap: anywhere; font: 1.125rem/1.75rem 'Literata', Georgia, serif; }
@media (max-width: 720px) { main { padding: 16px; } }
`;

/**
 * @param {string} title
 * @param {string} content
 * @param {string} nonce
 */
const sheet = (title, content, nonce) => `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>${escape(title)}</title>
<style nonce="${nonce}">${style}</style>
</head>
<body><main>${content}</main></body>
</html>
`;

/** @param {string} at */
const time = (at) =>
	`<time datetime="${at}">${new Date(at).toLocaleString('en-GB', { dateStyle: 'medium', timeStyle: 'short', timeZone: 'UTC' })} UTC</time>`;

/**
 * @param {import('./mailbox.mjs').Caught[]} mails oldest first
 * @param {string} nonce
 */
export function listPage(mails, nonce) {
	const rows = [...mails]
		.reverse()
		.map(
			(mail) =>
				`<li><a href="/messages/${mail.id}"><strong>${escape(mail.subject || 'No subject')}</strong><span class="quiet">${escape(mail.to.join(', '))}, ${time(mail.at)}</span></a></li>`
		);
	const said =
		mails.length === 0
			? 'Nothing mailed yet. What Meniscus sends on this machine is kept here and goes nowhere else.'
			: `${mails.length} ${mails.length === 1 ? 'mail' : 'mails'}, newest first. They are kept here and go nowhere else.`;
	return sheet('Mail', `<h1>Mail</h1><p class="quiet">${said}</p><ol>${rows.join('')}</ol>`, nonce);
}

/**
 * One mail as text; its HTML is never shown.
 * @param {import('./mailbox.mjs').Caught} mail
 * @param {string} nonce
 */
export function mailPage(mail, nonce) {
	const text = piecesOf(mail.text)
		.map((piece) =>
			piece.link ? `<a href="${escape(piece.text)}">${escape(piece.text)}</a>` : escape(piece.text)
		)
		.join('');
	return sheet(
		mail.subject || 'No subject',
		`<p class="quiet"><a href="/">Mail</a></p><h1>${escape(mail.subject || 'No subject')}</h1>
<dl><dt>To</dt><dd>${escape(mail.to.join(', '))}</dd><dt>From</dt><dd>${escape(mail.from)}</dd><dt>Sent</dt><dd>${time(mail.at)}</dd></dl>
<pre>${text}</pre>`,
		nonce
	);
}
