/** What S3 calls a problem: a code clients know, a sentence, a status. */
export class StoreProblem extends Error {
	/** @param {number} status @param {string} code @param {string} message */
	constructor(status, code, message) {
		super(message);
		this.status = status;
		this.code = code;
	}
}

const entities = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&apos;' };

/** @param {string} text */
const escapeXml = (text) =>
	text.replace(/[&<>"']/g, (character) => entities[/** @type {keyof typeof entities} */ (character)]);

/**
 * @typedef {string | number | boolean | undefined | Elements | Elements[]} Content
 * @typedef {{ [name: string]: Content }} Elements
 */

/** @param {Elements} elements @returns {string} arrays repeat their element, undefined leaves it out */
function elementsToXml(elements) {
	return Object.entries(elements)
		.flatMap(([name, content]) =>
			Array.isArray(content) ? content.map((one) => [name, one]) : [[name, content]]
		)
		.filter(([, content]) => content !== undefined)
		.map(([name, content]) => {
			const inner =
				typeof content === 'object'
					? elementsToXml(/** @type {Elements} */ (content))
					: escapeXml(String(content));
			return `<${name}>${inner}</${name}>`;
		})
		.join('');
}

/**
 * @param {import('node:http').ServerResponse} response
 * @param {number} status
 * @param {string} name of the outermost element
 * @param {Elements} elements
 */
export function answerXml(response, status, name, elements) {
	const namespace = name === 'Error' ? '' : ' xmlns="http://s3.amazonaws.com/doc/2006-03-01/"';
	const body = `<?xml version="1.0" encoding="UTF-8"?>\n<${name}${namespace}>${elementsToXml(elements)}</${name}>`;
	response.writeHead(status, {
		'content-type': 'application/xml',
		'content-length': Buffer.byteLength(body)
	});
	response.end(body);
}

/**
 * @param {import('node:http').IncomingMessage} request
 * @param {import('node:http').ServerResponse} response
 * @param {unknown} problem
 */
export function answerProblem(request, response, problem) {
	const known =
		problem instanceof StoreProblem
			? problem
			: new StoreProblem(500, 'InternalError', 'The store met something unforeseen.');
	if (known !== problem) console.error(problem);
	if (response.headersSent) return void response.destroy();
	// The body may not have been read: the connection cannot be used for another request.
	response.setHeader('connection', 'close');
	if (request.method === 'HEAD') return void response.writeHead(known.status).end();
	answerXml(response, known.status, 'Error', {
		Code: known.code,
		Message: known.message,
		Resource: request.url
	});
	request.resume();
}
