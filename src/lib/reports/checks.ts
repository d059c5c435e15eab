import type { Evaluation } from '$lib/worksheets';
import { compareStated } from './compare';
import { composeSection, type ComposedBlock, type ComposedProse } from './compose';
import { explainUnknown, isKnown, placedLabel } from './links';
import { blockNumber } from './projection';
import { numberPlacements } from './render';
import { runsOf, runsText } from './runs';
import type { Check, Numbering } from './types';

export interface CheckedSection {
	/** 'abstract' is held to an abstract's rules */
	key: string;
	source: string;
}

/** The checks of every section of a report, numbered from 1. Each rule that applies gives one entry met, or one for each place where it is not. */
export function checkReport(sections: readonly CheckedSection[], evaluation: Evaluation | null): Check[][] {
	const numbering = numberPlacements(sections.map((section) => section.source));
	const mentions = new Set(sections.flatMap((section) => mentionsIn(section.source, numbering)));
	return sections.map(({ key, source }, index) => {
		const number = index + 1;
		const blocks = composeSection(source);
		return [
			...(key === 'abstract' ? abstractChecks(blocks, number, evaluation) : []),
			...uncertaintyChecks(source, number, evaluation),
			...mentionChecks(blocks, number, numbering, mentions),
			...linkChecks(blocks, number, evaluation)
		];
	});
}

function abstractChecks(blocks: ComposedBlock[], number: number, evaluation: Evaluation | null): Check[] {
	const written = blocks.filter(
		(block) => block.kind !== 'prose' || (block.type !== 'heading' && block.type !== 'footnoteDefinition')
	);
	const second = written[1];
	const onlyParagraph =
		written.length === 1 && written[0]?.kind === 'prose' && written[0].type === 'paragraph';
	const values = blocks
		.flatMap((block) => (block.kind === 'prose' ? block.links : []))
		.filter(
			(link) => link.kind === 'value' && (evaluation === null || isKnown(evaluation, 'value', link.name))
		);
	return [
		{
			code: 'abstract-one-paragraph',
			block: second ? blockNumber(number, { index: blocks.indexOf(second) }) : null,
			met: onlyParagraph,
			message: onlyParagraph
				? 'One paragraph.'
				: written.length === 0
					? 'No abstract yet. Write one paragraph.'
					: `${written.length === 1 ? 'Not a paragraph' : `${written.length} blocks`}. An abstract is one paragraph.`
		},
		{
			code: 'abstract-gives-values',
			block: null,
			met: values.length > 0,
			message:
				values.length > 0
					? `Gives ${[...new Set(values.map((link) => link.name))].join(', ')}.`
					: 'No linked value. Give the best values found, each as a link.'
		}
	];
}

function uncertaintyChecks(source: string, number: number, evaluation: Evaluation | null): Check[] {
	if (evaluation === null) return [];
	const stated = compareStated(source, evaluation, number);
	const bare = stated.filter((line) => line.kind === 'typed' && !line.hasUncertainty);
	if (stated.length === 0) return [];
	if (bare.length === 0)
		return [
			{ code: 'value-has-uncertainty', block: null, met: true, message: 'Every result has its uncertainty.' }
		];
	return bare.map((line) => ({
		code: 'value-has-uncertainty',
		block: line.block,
		met: false,
		message: `${line.stated} stands without uncertainty. Link it: :value[${line.name}] gives ${line.recomputed}.`
	}));
}

function mentionChecks(
	blocks: ComposedBlock[],
	number: number,
	numbering: Numbering,
	mentions: Set<string>
): Check[] {
	const checks: Check[] = [];
	const done = new Set<string>();
	blocks.forEach((block, index) => {
		if ((block.kind !== 'figure' && block.kind !== 'table') || done.has(`${block.kind}=${block.name}`))
			return;
		done.add(`${block.kind}=${block.name}`);
		const label = placedLabel(block.kind, numbering[block.kind][block.name]);
		const met = mentions.has(`${block.kind}=${block.name}`);
		const message = met ? `${label} is mentioned.` : `Nobody mentions ${label}. Say what it shows.`;
		checks.push({ code: 'figure-mentioned', block: blockNumber(number, { index }), met, message });
	});
	return checks;
}

function linkChecks(blocks: ComposedBlock[], number: number, evaluation: Evaluation | null): Check[] {
	if (evaluation === null) return [];
	const checks: Check[] = [];
	let links = 0;
	blocks.forEach((block, index) => {
		for (const { kind, name } of block.kind === 'prose' ? block.links : [block]) {
			links += 1;
			if (isKnown(evaluation, kind, name)) continue;
			checks.push({
				code: 'link-known',
				block: blockNumber(number, { index }),
				met: false,
				message: explainUnknown(evaluation, kind, name).message
			});
		}
	});
	if (links > 0 && checks.length === 0) {
		const message =
			links === 1 ? 'The link leads to the workings.' : `All ${links} links lead to the workings.`;
		checks.push({ code: 'link-known', block: null, met: true, message });
	}
	return checks;
}

const written =
	/\b(Fig(?:ure|\.)?s?\.?|Tables?|Tab\.)[\s\u00a0]*(\d{1,3}(?:\s*(?:,|and|&|to|[-–])\s*\d{1,3})*)/gi;

/** 'figure=line' for every figure and table that running text points at, by link or by number. */
function mentionsIn(source: string, numbering: Numbering): string[] {
	return composeSection(source).flatMap((block) =>
		block.kind === 'prose' ? mentionsOf(block, numbering) : []
	);
}

function mentionsOf(block: ComposedProse, numbering: Numbering): string[] {
	const linked = block.links
		.filter((link) => link.kind !== 'value')
		.map((link) => `${link.kind}=${link.name}`);
	const named = [...runsText(runsOf(block.tree)).matchAll(written)].flatMap((match) => {
		const kind = /^f/i.test(match[1] ?? '') ? 'figure' : 'table';
		const numbers = numbersIn(match[2] ?? '');
		return Object.entries(numbering[kind])
			.filter(([, number]) => numbers.has(number))
			.map(([name]) => `${kind}=${name}`);
	});
	return [...linked, ...named];
}

/** '1, 3 to 5' */
function numbersIn(text: string): Set<number> {
	const numbers = new Set<number>();
	for (const [, first, last] of text.matchAll(/(\d+)(?:\s*(?:to|[-–])\s*(\d+))?/g)) {
		for (let number = Number(first); number <= Number(last ?? first); number += 1) numbers.add(number);
	}
	return numbers;
}
