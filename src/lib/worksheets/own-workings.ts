import { standardUncertainty, type Quantity } from '$lib/quantities';
import { isLeaf, nodesOf } from './formula-tree';
import { keyOf } from './named';
import { findColumn, namingOf } from './naming';
import { orderSteps } from './order';
import { Session } from './session';
import { withFormulas, withMistake } from './variant';
import type { Formula, MistakeDefinition, Readings, Worksheet, WorksheetStep } from './types';

/** A formula that has not been written yet: whatever needs it waits. */
const unwritten: Formula = { op: 'name', name: '' };

/** How a step of the team's own workings stands against the reference's. */
export interface OwnStep {
	/** computed column or result */
	name: string;
	label: string;
	/** 'same' to nine digits; 'close' within a tenth of the uncertainty: a rounded constant, say; 'missing': not written or not computed */
	verdict: 'same' | 'close' | 'differs' | 'missing';
	/** the row in which it differs most; null for a single value */
	row: string | null;
	/** in the unit of the step's SI dimension; null where there is none */
	own: number | null;
	reference: number | null;
	/** whether everything it rests on is as in the reference: then the departure is here */
	departsHere: boolean;
	mistake: Pick<MistakeDefinition, 'code' | 'title' | 'message'> | null;
	message: string;
}

export interface OwnComparison {
	/** in the order in which they need each other */
	steps: OwnStep[];
	/** the first departure; null where there is none yet */
	first: OwnStep | null;
	/** names of own formulas that need each other in a circle */
	cycle: string[] | null;
}

/** The worksheet as the team works it: its own formulas, and nothing where it has written none. */
export function ownWorksheet(
	worksheet: Worksheet,
	own: Readonly<Record<string, Formula>>
): Worksheet | { cycle: string[] } {
	const formulas: Record<string, Formula> = {};
	for (const name of computedNames(worksheet))
		formulas[name] = Object.hasOwn(own, name) ? (own[name] ?? unwritten) : unwritten;
	const variant = withFormulas(worksheet, formulas);
	const ordered = orderSteps(variant);
	return 'cycle' in ordered ? ordered : { ...variant, order: ordered.order };
}

/** Names that a team may write formulas for: computed columns and results, in the order in which they need each other. */
export function computedNames(worksheet: Worksheet): string[] {
	return worksheet.order.flatMap((step) => nameOf(step) ?? []);
}

function nameOf(step: WorksheetStep): string | null {
	if (step.kind === 'fit') return null;
	return step.kind === 'column' ? step.column : step.name;
}

/**
 * The team's own workings beside the reference's, step by step: the first departure is named, and the recognised mistake
 * behind it where one fits.
 */
export function compareOwn(
	worksheet: Worksheet,
	readings: Readings,
	own: Readonly<Record<string, Formula>>
): OwnComparison {
	const theirs = ownWorksheet(worksheet, own);
	if ('cycle' in theirs) return { steps: [], first: null, cycle: theirs.cycle };
	const reference = worked(worksheet, readings);
	const team = worked(theirs, readings);
	const departed = new Set<string>();
	const steps = worksheet.order.flatMap((step): OwnStep[] => {
		const name = nameOf(step);
		if (name === null) {
			if (step.kind === 'fit') markFit(worksheet, step.name, departed);
			return [];
		}
		const compared = compareStep(worksheet, step, name, reference, team);
		const rests = needsOf(worksheet, step).some((need) => departed.has(need));
		if (compared.verdict === 'differs' || compared.verdict === 'missing') departed.add(name);
		const departsHere = compared.verdict === 'differs' && !rests;
		const mistake = departsHere ? behind(worksheet, readings, step, name, team) : null;
		return [{ ...compared, departsHere, mistake, message: sentence(compared, departsHere, mistake) }];
	});
	return { steps, first: steps.find(({ departsHere }) => departsHere) ?? null, cycle: null };
}

function worked(worksheet: Worksheet, readings: Readings): Session {
	const session = new Session(worksheet);
	session.take(readings);
	return session;
}

/** What a step rests on: names and columns of its reference formula. */
function needsOf(worksheet: Worksheet, step: WorksheetStep): string[] {
	const formula =
		step.kind === 'column'
			? findColumn(worksheet, step.table, step.column)?.formula
			: worksheet.results.find(({ name }) => name === step.name)?.formula;
	return formula ? leafNames(formula) : [];
}

function leafNames(formula: Formula): string[] {
	return [...nodesOf(formula)].flatMap((node) => {
		if (!isLeaf(node)) return [];
		return node.op === 'name' ? [node.name] : node.op === 'column' ? [node.column] : [];
	});
}

/** A fit departs with its points: its parameters are then no step of the team's. */
function markFit(worksheet: Worksheet, name: string, departed: Set<string>): void {
	const fit = worksheet.fits.find((candidate) => candidate.name === name);
	if (!fit) return;
	const formulas = [fit.where, ...fit.terms, fit.curve?.formula].flatMap((formula) =>
		formula ? leafNames(formula) : []
	);
	const needs = [fit.x, fit.y, fit.weights, ...formulas];
	if (needs.some((need) => need !== null && departed.has(need)))
		for (const parameter of fit.parameters) departed.add(parameter.name);
}

/** Values of a step by row, or the single one. */
function valuesOf(session: Session, step: WorksheetStep, name: string): Map<string | null, Quantity> {
	const values = new Map<string | null, Quantity>();
	if (step.kind !== 'column') {
		const value = session.names.get(name);
		if (value) values.set(null, value);
		return values;
	}
	for (const row of session.rows.tables.get(step.table) ?? []) {
		const value = row.values.get(name);
		if (value) values.set(row.row.id, value);
	}
	return values;
}

type Compared = Omit<OwnStep, 'departsHere' | 'mistake' | 'message'>;

function compareStep(
	worksheet: Worksheet,
	step: WorksheetStep,
	name: string,
	reference: Session,
	team: Session
): Compared {
	const label = namingOf(worksheet, name)?.label ?? name;
	const right = valuesOf(reference, step, name);
	const theirs = valuesOf(team, step, name);
	const none: Compared = { name, label, verdict: 'missing', row: null, own: null, reference: null };
	if (right.size === 0 || theirs.size === 0) return none;
	let worst: Compared = { ...none, verdict: 'same' };
	let distance = -1;
	for (const [row, value] of right) {
		const own = theirs.get(row);
		const facts = {
			name,
			label,
			row: row === null ? null : calledRow(reference, step, row),
			reference: value.value
		};
		if (!own) return { ...facts, own: null, verdict: 'missing' };
		const off = Math.abs(own.value - value.value) / (Math.abs(value.value) || 1);
		if (off <= distance) continue;
		distance = off;
		worst = { ...facts, own: own.value, verdict: nearness(own, value) };
	}
	return worst;
}

function calledRow(session: Session, step: WorksheetStep, id: string): string {
	const table = step.kind === 'column' ? step.table : '';
	const row = session.rows.tables.get(table)?.find((each) => each.row.id === id);
	return row ? keyOf(session.worksheet, row) : id;
}

function nearness(own: Quantity, reference: Quantity): 'same' | 'close' | 'differs' {
	const off = Math.abs(own.value - reference.value);
	if (off <= 1e-9 * Math.abs(reference.value)) return 'same';
	return off <= 0.1 * standardUncertainty(reference) ? 'close' : 'differs';
}

/** The recognised mistake that makes the very values the team found at this step. */
function behind(
	worksheet: Worksheet,
	readings: Readings,
	step: WorksheetStep,
	name: string,
	team: Session
): OwnStep['mistake'] {
	const theirs = valuesOf(team, step, name);
	for (const mistake of worksheet.mistakes) {
		if (!Object.hasOwn(mistake.instead.formulas, name) && Object.keys(mistake.instead.constants).length === 0)
			continue;
		const values = valuesOf(worked(withMistake(worksheet, mistake), readings), step, name);
		const fits = [...theirs].every(([row, own]) => {
			const made = values.get(row);
			return made !== undefined && nearness(own, made) !== 'differs';
		});
		if (fits && theirs.size > 0) {
			const { code, title, message } = mistake;
			return { code, title, message };
		}
	}
	return null;
}

function sentence(
	{ label, verdict, row }: Compared,
	departsHere: boolean,
	mistake: OwnStep['mistake']
): string {
	const where = row === null ? label : `${label}, ${row}`;
	switch (verdict) {
		case 'same':
			return `${label}: as in the reference workings.`;
		case 'close':
			return `${label}: as in the reference workings within a tenth of its uncertainty. A constant may be rounded.`;
		case 'missing':
			return `${label}: no value to compare yet.`;
		default:
			if (mistake) return `${where}: ${mistake.message}`;
			return departsHere
				? `${where}: differs from the reference workings, though everything before it agrees. Look at this formula.`
				: `${where}: differs, but so does something it rests on. Mend that first.`;
	}
}
