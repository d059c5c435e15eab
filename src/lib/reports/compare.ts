import type { Evaluation, ShownQuantity } from '$lib/worksheets';
import { linkableValues } from './links';
import { blockNumber, projectSection } from './projection';
import { statedValues, type StatedNumber } from './stated';
import { parseUnit } from './units';

/** A stated value with what the workings give. */
export interface StatedLine {
	/** linked values agree by construction; typed ones are compared */
	kind: 'linked' | 'typed';
	/** block number, '3.1' */
	block: string;
	/** in the projection, code points */
	start: number;
	end: number;
	/** name and label of the value it was compared with */
	name: string;
	label: string;
	/** as it stands in the text */
	stated: string;
	/** '373.5(3) K' */
	recomputed: string;
	/** the recomputed value, rounded to the digits stated, is the stated one */
	agrees: boolean;
	/** (stated - recomputed) in multiples of the standard uncertainty; null when it agrees or none is known */
	departure: number | null;
	/** null when none was stated or none is known */
	uncertaintyAgrees: boolean | null;
	hasUncertainty: boolean;
	/** for the lane: '373.5(3) K, 2 u', '' when it agrees */
	short: string;
	/** 'Stated 372.9 K; workings give 373.5(3) K.' */
	sentence: string;
}

/**
 * Beyond this many standard uncertainties a typed number is taken for something else (a setting, a reading, another
 * substance) and nothing is said: common practice, wide enough for slips of a digit, narrow enough not to accuse.
 */
const windowInUncertainties = 12;
/** 0 °C in K, by definition of the Celsius scale (SI brochure, 9th edition, 2.3.1). */
const celsiusZero = 273.15;

/** Every value a section states, linked or typed, that the workings know. Numbers that match nothing give no line. */
export function compareStated(source: string, evaluation: Evaluation, sectionNumber: number): StatedLine[] {
	const projection = projectSection(source, evaluation);
	const values = [...linkableValues(evaluation)];
	const lines: StatedLine[] = [];
	for (const link of projection.links) {
		const quantity = link.kind === 'value' ? linkableValues(evaluation).get(link.name) : undefined;
		const block = projection.blocks.find(({ start, end }) => link.position >= start && link.position < end);
		if (!quantity || !block) continue;
		const { text } = quantity.display;
		lines.push({
			kind: 'linked',
			block: blockNumber(sectionNumber, block),
			start: link.position,
			end: link.position + 1,
			name: link.name,
			label: quantity.label,
			stated: text,
			recomputed: text,
			agrees: true,
			departure: null,
			uncertaintyAgrees: null,
			hasUncertainty: quantity.standardUncertainty !== null,
			short: '',
			sentence: `Linked: ${text}.`
		});
	}
	for (const stated of statedValues(source)) {
		if (isReference(stated, evaluation)) continue;
		const match = nearest(stated, values);
		if (match) lines.push(typedLine(stated, match, blockNumber(sectionNumber, { index: stated.block })));
	}
	return lines.sort((a, b) => a.start - b.start);
}

interface Match {
	name: string;
	quantity: ShownQuantity;
	/** stated less recomputed, in the quantity's unit */
	difference: number;
	agrees: boolean;
	/** unit of the last digit stated and stated uncertainty, in the quantity's unit */
	lastDigit: number;
	uncertainty: number | null;
}

function nearest(stated: StatedNumber, values: [string, ShownQuantity][]): Match | null {
	let best: { match: Match; distance: number } | null = null;
	for (const [name, quantity] of values) {
		const converted = inUnit(stated, quantity.unit);
		if (converted === null || !Number.isFinite(quantity.value)) continue;
		const difference = converted.value - quantity.value;
		const agrees = isRounded(difference, converted.lastDigit, quantity.value);
		const u = quantity.standardUncertainty;
		if (!agrees && !(u !== null && u > 0 && Math.abs(difference) <= windowInUncertainties * u)) continue;
		const distance = u !== null && u > 0 ? Math.abs(difference) / u : 0;
		const match = {
			name,
			quantity,
			difference,
			agrees,
			lastDigit: converted.lastDigit,
			uncertainty: converted.uncertainty
		};
		if (!best || comesBefore(match, distance, best)) best = { match, distance };
	}
	return best?.match ?? null;
}

/**
 * A value that agrees comes before one that does not; then a result that the experiment is about, because by-ways to the
 * same quantity (another fit, say) lie close to it; then the nearer one.
 */
function comesBefore(match: Match, distance: number, best: { match: Match; distance: number }): boolean {
	if (match.agrees !== best.match.agrees) return match.agrees;
	const [headline, other] = [match.quantity.headline === true, best.match.quantity.headline === true];
	return headline === other ? distance < best.distance : headline;
}

function typedLine(stated: StatedNumber, match: Match, block: string): StatedLine {
	const { quantity, agrees } = match;
	const u = quantity.standardUncertainty;
	const departure = agrees || u === null || u === 0 ? null : match.difference / u;
	const uncertaintyAgrees =
		match.uncertainty === null || u === null ? null : isSameUncertainty(match.uncertainty, u);
	const recomputed = quantity.display.text;
	const inU = departure === null ? '' : `, ${multiple(departure)}\u2009u`;
	const sentence = agrees
		? `Stated ${stated.text}; workings give the same, ${recomputed}.`
		: `Stated ${stated.text}; workings give ${recomputed}.`;
	const about = uncertaintyAgrees === false ? ' The stated uncertainty differs.' : '';
	return {
		kind: 'typed',
		block,
		start: stated.start,
		end: stated.end,
		name: match.name,
		label: quantity.label,
		stated: stated.text,
		recomputed,
		agrees,
		departure,
		uncertaintyAgrees,
		hasUncertainty: stated.uncertainty !== null,
		short: agrees ? '' : `${recomputed}${inU}`,
		sentence: sentence + about
	};
}

/** A typed number in another unit of the same kind; null when the units differ by more than a power of ten. */
function inUnit(
	stated: StatedNumber,
	unit: string
): { value: number; lastDigit: number; uncertainty: number | null } | null {
	const target = parseUnit(unit);
	if (target === null || target.key === '') return null;
	const shift = celsiusShift(stated.unit.key, target.key);
	if (stated.unit.key !== target.key && shift === null) return null;
	const power = stated.unit.power - target.power;
	const scale = (text: string, exponent: number): number => Number(`${text}e${exponent}`);
	return {
		value: scale(stated.digits, stated.exponent + power) + (shift ?? 0),
		lastDigit: scale('1', stated.exponent + power - stated.decimals),
		uncertainty: stated.uncertainty === null ? null : stated.uncertainty * scale('1', power)
	};
}

function celsiusShift(from: string, to: string): number | null {
	if (from === '°C' && to === 'K') return celsiusZero;
	return from === 'K' && to === '°C' ? -celsiusZero : null;
}

/** Within half of the last digit stated; the slack is for the last bits of binary fractions. */
function isRounded(difference: number, lastDigit: number, value: number): boolean {
	return Math.abs(difference) <= lastDigit / 2 + 1e-12 * Math.max(Math.abs(value), lastDigit);
}

/** Uncertainties are stated to one or two digits, often rounded up: a twentieth, or one unit of the first digit. */
function isSameUncertainty(stated: number, recomputed: number): boolean {
	if (Math.abs(stated - recomputed) <= 0.05 * recomputed) return true;
	const digit = Number(`1e${Number(stated.toExponential(0).split('e')[1] ?? '0')}`);
	const isOneDigit = Math.abs(stated / digit - Math.round(stated / digit)) < 1e-9;
	return (
		isOneDigit && Math.abs(stated - recomputed) <= digit * (1 - 1e-9) && stated >= recomputed - digit / 2
	);
}

/** Literature values that the text quotes are not results of these readings. */
function isReference(stated: StatedNumber, evaluation: Evaluation): boolean {
	return Object.values(evaluation.comparisons).some(({ reference }) => {
		const converted = inUnit(stated, reference.unit);
		return (
			converted !== null && isRounded(converted.value - reference.value, converted.lastDigit, reference.value)
		);
	});
}

function multiple(departure: number): string {
	const size = Math.abs(departure);
	return size < 9.95 ? String(Number(size.toFixed(1))) : size.toFixed(0);
}
