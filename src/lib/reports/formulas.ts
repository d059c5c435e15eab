import katex from 'katex';
import { Lru } from './lru';

/** TeX source longer than this is shown as typed. */
const longestFormula = 4_000;

const kept = new Lru<string>(1_000);

/** KaTeX's markup, or the source with what is wrong with it. Commands that load, link or style (`\href`, `\htmlClass`...) are refused. */
export function formulaHtml(tex: string, display: boolean): string {
	return kept.take(`${display ? 'd' : 'i'}${tex}`, () => typeset(tex, display));
}

function typeset(tex: string, display: boolean): string {
	if (tex.length > longestFormula) return unread(tex, 'longer than 4000 characters');
	try {
		const html = katex.renderToString(tex, {
			displayMode: display,
			throwOnError: true,
			trust: false,
			strict: 'ignore',
			maxExpand: 200,
			maxSize: 20,
			output: 'htmlAndMathml'
		});
		const excess = excessOf(html);
		return excess === null ? html : unread(tex, excess);
	} catch (problem) {
		// KaTeX's own refusals, and the stack running out on thousands of braces: the writer sees the source.
		if (problem instanceof katex.ParseError || problem instanceof RangeError)
			return unread(tex, reasonOf(problem));
		throw problem;
	}
}

/** Browsers flatten trees of 512 levels; a page has some of its own. */
const deepestMarkup = 300;
/** In em. `maxSize` holds for positive lengths only, and formulas must not be moved over what others wrote. */
const longestLength = 60;
const longestWayBack = 30;

function excessOf(html: string): string | null {
	let depth = 0;
	let wayBack = 0;
	for (const [tag, close, isEmpty] of html.matchAll(/<(\/)?[a-z][^>]*?(\/)?>/gi)) {
		depth += close === undefined ? (isEmpty === undefined ? 1 : 0) : -1;
		if (depth > deepestMarkup) return 'nested too deeply';
		const style = / style="([^"]*)"/.exec(tag)?.[1] ?? '';
		for (const [, property = '', length = ''] of style.matchAll(/([a-z-]+):(-?[\d.]+(?:e[+-]?\d+)?)em/g)) {
			const size = Number(length);
			if (!(Math.abs(size) <= longestLength)) return 'a length beyond 20 em';
			if (property.startsWith('margin') && size < 0) wayBack -= size;
		}
	}
	return wayBack > longestWayBack ? 'moved back too far' : null;
}

function unread(tex: string, reason: string): string {
	return `<span class="formula-unread"><code>${escapeHtml(tex)}</code> <span class="formula-note">Not a formula yet: ${escapeHtml(reason)}.</span></span>`;
}

function reasonOf(problem: Error): string {
	if (problem instanceof RangeError) return 'nested too deeply';
	const text = problem.message.replace(/^KaTeX parse error:\s*/, '').replace(/[\u0332\u0333]/g, '');
	return text.slice(0, 160).replace(/[.\s]+$/, '') || 'not read';
}

export function escapeHtml(text: string): string {
	return text
		.replaceAll('&', '&amp;')
		.replaceAll('<', '&lt;')
		.replaceAll('>', '&gt;')
		.replaceAll('"', '&quot;')
		.replaceAll("'", '&#39;');
}
