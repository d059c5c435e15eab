import type { Root as HastRoot, RootContent } from 'hast';
import { composeSection, type ComposedProse } from './compose';
import { objectCharacter } from './links';
import { countPoints } from './points';
import { projectSection } from './projection';
import { scanUnit, type UnitForm } from './units';

/** A number with a unit that somebody typed. */
export interface StatedNumber {
	/** position among the section's blocks */
	block: number;
	/** in the projection, code points; one inside a formula takes the whole formula */
	start: number;
	end: number;
	/** as typed, TeX made plain */
	text: string;
	/** 'e' form for Number: '-372.9', without the power of ten */
	digits: string;
	/** power of ten written behind it */
	exponent: number;
	/** digits after the decimal sign */
	decimals: number;
	/** stated standard uncertainty in the typed unit with that power of ten, null when none is stated */
	uncertainty: number | null;
	unit: UnitForm;
	unitText: string;
}

const superscriptDigits: Record<string, string> = {
	...Object.fromEntries([...'⁰¹²³⁴⁵⁶⁷⁸⁹'].map((character, index) => [character, String(index)])),
	'⁻': '-',
	'⁺': '+'
};

// Sign, whole part (thin spaces allowed), decimals, (uncertainty), ± uncertainty, closing parenthesis, power of ten.
const number =
	/(?<![\p{L}\d_^\uFFFC]|\d[.,])(?<sign>[+\-−](?<![\p{L}\d)][+\-−]))?(?<whole>\d+(?:[\u2009\u202F]\d{3})*)(?:(?<mark>[.,])(?<decimals>\d+))?(?:\((?<digits>\d{1,3}(?:[.,]\d+)?)\))?(?:\s*(?:±|\+\/[-−]|\+[-−])\s*(?<plusMinus>\d+(?:[.,]\d+)?))?(?<close>\s*\))?(?:\s*[×·*x]\s*10\s*(?:\^\s*\{?\(?(?<power>[-−+]?\d{1,3})\)?\}?|(?<raised>[⁻⁺]?[⁰¹²³⁴⁵⁶⁷⁸⁹]{1,3}))|[eE](?<e>[-−+]?\d{1,3}))?[\s~]*/gu;

/** Numbers with units that were typed by hand, in order. Code is left out; formulas are read through their TeX. */
export function statedValues(source: string): StatedNumber[] {
	const projection = projectSection(source);
	return composeSection(source).flatMap((block, index) => {
		const start = projection.blocks[index]?.start;
		return block.kind === 'prose' && start !== undefined ? statedIn(block, index, start) : [];
	});
}

function statedIn(block: ComposedProse, index: number, blockStart: number): StatedNumber[] {
	const { text, starts, ends } = plainText(block.tree, blockStart);
	const found: StatedNumber[] = [];
	for (const match of text.matchAll(number)) {
		const groups = match.groups ?? {};
		const unitFrom = match.index + match[0].length;
		const scanned = scanUnit(text, unitFrom);
		if (scanned === null || isGrouped(groups.mark, groups.whole, groups.decimals)) continue;
		const last = scanned.end - 1;
		const sign = groups.sign === undefined || groups.sign === '+' ? '' : '-';
		const decimals = groups.decimals ?? '';
		const whole = (groups.whole ?? '').replace(/\D/g, '');
		const raised = [...(groups.raised ?? '')].map((character) => superscriptDigits[character] ?? '').join('');
		const exponent = Number((groups.power ?? groups.e ?? (raised || '0')).replace('−', '-'));
		found.push({
			block: index,
			start: starts[match.index] ?? blockStart,
			end: ends[last] ?? blockStart,
			text: text.slice(match.index, scanned.end).replace(/\s+/g, ' '),
			digits: `${sign}${whole}${decimals === '' ? '' : `.${decimals}`}`,
			exponent,
			decimals: decimals.length,
			uncertainty: uncertaintyOf(groups.digits, groups.plusMinus, decimals.length, exponent),
			unit: scanned.form,
			unitText: text.slice(unitFrom, scanned.end)
		});
	}
	return found;
}

/** "1,000 K" may be a thousand or one: nothing is claimed about it. */
function isGrouped(
	mark: string | undefined,
	whole: string | undefined,
	decimals: string | undefined
): boolean {
	return mark === ',' && decimals?.length === 3 && whole !== '0' && (whole?.length ?? 0) <= 3;
}

function uncertaintyOf(
	digits: string | undefined,
	plusMinus: string | undefined,
	decimals: number,
	exponent: number
): number | null {
	if (plusMinus !== undefined) return Number(`${plusMinus.replace(',', '.')}e${exponent}`);
	if (digits === undefined) return null;
	// 41.6(6): in units of the last digit; 41.6(0.6): as it stands.
	if (/[.,]/.test(digits)) return Number(`${digits.replace(',', '.')}e${exponent}`);
	return Number(`${digits}e${exponent - decimals}`);
}

interface PlainText {
	text: string;
	/** projection range of what each UTF-16 unit of `text` stands for, code points */
	starts: number[];
	ends: number[];
}

function plainText(tree: HastRoot, blockStart: number): PlainText {
	const plain: PlainText = { text: '', starts: [], ends: [] };
	let position = blockStart;
	const put = (text: string, width: number | null): void => {
		for (const character of text) {
			for (let unit = 0; unit < character.length; unit += 1) {
				plain.starts.push(position);
				plain.ends.push(position + (width ?? 1));
			}
			plain.text += character;
			if (width === null) position += 1;
		}
		if (width !== null) position += width;
	};
	const visit = (node: HastRoot | RootContent): void => {
		if (node.type === 'text') put(node.value, null);
		else if (node.type === 'element') {
			const { dataRun, dataName } = node.properties;
			if (dataName !== undefined) put(objectCharacter, 1);
			else if (typeof dataRun === 'string') put(plainTex(dataRun), countPoints(dataRun));
			else if (node.tagName === 'code')
				node.children.forEach(
					(child) => child.type === 'text' && put(objectCharacter.repeat(countPoints(child.value)), null)
				);
			else node.children.forEach(visit);
		} else if (node.type === 'root') node.children.forEach(visit);
	};
	visit(tree);
	return plain;
}

/** TeX as near to plain text as numbers and units need. */
function plainTex(tex: string): string {
	const plain = tex
		.replace(/\\(?:mathrm|text|textrm|mathit|mathsf|operatorname)(?![A-Za-z])/g, '')
		.replace(/\\(?:[,;:! ]|quad|qquad|thinspace)|~/g, ' ')
		.replace(/\\pm(?![A-Za-z])/g, '±')
		.replace(/\\times(?![A-Za-z])/g, '×')
		.replace(/\\cdot(?![A-Za-z])/g, '·')
		.replace(/\^\s*\{?\\circ\}?|\\degree(?![A-Za-z])/g, '°')
		.replace(/\\%/g, '%')
		.replace(/\\(?:left|right)(?![A-Za-z])/g, '')
		.replace(/\{,\}/g, ',')
		.replace(/\\[A-Za-z]+/g, objectCharacter)
		.replace(/\^\{([^{}]*)\}/g, '^$1')
		.replace(/[{}]/g, '');
	// Something has to stand for the formula.
	return plain === '' ? objectCharacter : plain;
}
