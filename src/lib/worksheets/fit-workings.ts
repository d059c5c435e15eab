import {
	differenceIn,
	divideUnits,
	formatQuantity,
	parseUnit,
	standardUncertainty,
	toldIn,
	valueIn,
	type Quantity,
	type Unit
} from '$lib/quantities';
import type { LineFit } from '$lib/regression';
import type { Fitted } from './fit-step';
import { isLeaf } from './formula-tree';
import { namingFor } from './named';
import { findColumn, namingOf } from './naming';
import type { RowState } from './rows';
import type { Session } from './session';
import { showBudget } from './shown';
import { numberTex } from './tex-numbers';
import { typeset } from './typeset';
import type { Naming, SampleCalculation } from './types';

/** How each parameter of a fit comes about: a line's sums with their numbers, or the equation that was fitted. */
export function fitWorkings(
	session: Session,
	fitted: Fitted,
	suffix: string,
	row: RowState | null,
	group: string | null
): Record<string, SampleCalculation> {
	const { definition, fit } = fitted;
	const line = fit.line && definition.model === 'line' ? lineTex(session, fitted, fit.line) : null;
	const equation = equationTex(session, fitted);
	const workings: Record<string, SampleCalculation> = {};
	definition.parameters.forEach((naming, i) => {
		const quantity = fit.parameters[i];
		if (!quantity) return;
		const shown = namingFor({ name: `${naming.name}${suffix}`, group, row, naming, quantity });
		workings[shown.name] = {
			name: shown.name,
			title: `${shown.label}, ${definition.label}`,
			row: row?.row.id ?? null,
			...(line?.[i] ?? { symbolic: equation, substituted: fitWords(fitted) }),
			result: `${naming.symbol} = ${resultTex(quantity, naming.unit)}`,
			partials: [],
			budget: showBudget(toldIn(quantity, parseUnit(naming.unit)))
		};
	});
	return workings;
}

export function resultTex(value: Quantity, unitName: string): string {
	const unit = parseUnit(unitName);
	const u = standardUncertainty(value);
	return formatQuantity(valueIn(value, unit), u === 0 ? null : differenceIn(u, unit), unit).tex;
}

/** Slope and intercept of a line from its least-squares sums. */
function lineTex(
	session: Session,
	{ definition, rows }: Fitted,
	fit: LineFit
): Pick<SampleCalculation, 'symbolic' | 'substituted'>[] {
	const columnOf = (name: string | null) => findColumn(session.worksheet, definition.table, name ?? '');
	const [unitX, unitY] = [
		parseUnit(columnOf(definition.x)?.unit ?? '1'),
		parseUnit(columnOf(definition.y)?.unit ?? '1')
	];
	const bare = (value: number, unit: Unit) => numberTex(value / unit.factor, unit);
	const [x, y] = [
		grouped(columnOf(definition.x)?.symbol ?? 'x'),
		grouped(columnOf(definition.y)?.symbol ?? 'y')
	];
	const [slope, intercept] = definition.parameters as [Naming, Naming];
	const w = definition.weights === 'stated' ? 'w\\,' : '';
	const over = w === '' ? `n = ${rows.length}` : `n = ${rows.length},\\ w = 1/u^2`;
	const spread = `\\sum ${w}\\left(${x} - \\overline{${x}}\\right)`;
	const squareX: Unit = {
		...unitX,
		factors: unitX.factors.map((factor) => ({ ...factor, exponent: factor.exponent * 2 })),
		factor: unitX.factor * unitX.factor
	};
	const product: Unit = {
		...unitX,
		factors: [...unitX.factors, ...unitY.factors],
		factor: unitX.factor * unitY.factor
	};
	return [
		{
			symbolic: `${slope.symbol} = \\frac{${spread}\\left(${y} - \\overline{${y}}\\right)}{${spread}^2}`,
			substituted: `${slope.symbol} = \\frac{${bare(fit.slope.value * fit.spreadX, product)}}{${bare(fit.spreadX, squareX)}} \\quad (${over})`
		},
		{
			symbolic: `${intercept.symbol} = \\overline{${y}} - ${slope.symbol}\\,\\overline{${x}}`,
			substituted: `${intercept.symbol} = ${bare(fit.centre.value, unitY)} - \\left(${bare(fit.slope.value, divideUnits(unitY, unitX))}\\right) \\times ${bare(fit.centreX, unitX)}`
		}
	];
}

/** The equation that was fitted, in symbols. */
function equationTex(session: Session, { definition }: Fitted): string {
	const symbolOf = (name: string | null) =>
		findColumn(session.worksheet, definition.table, name ?? '')?.symbol ?? name ?? '';
	const y = symbolOf(definition.y);
	const x = grouped(symbolOf(definition.x));
	const symbols = definition.parameters.map(({ symbol }) => symbol);
	const types = {
		leaf: (leaf: Parameters<Parameters<typeof typeset>[1]['leaf']>[0]) =>
			leaf.op === 'over'
				? leaf.function
				: (namingOf(session.worksheet, leaf.op === 'name' ? leaf.name : leaf.column)?.symbol ?? ''),
		celsius: (part: Parameters<typeof typeset>[0]) => (isLeaf(part) ? '\\vartheta' : '\\vartheta'),
		overUnit: () => null,
		times: '\\,'
	};
	switch (definition.model) {
		case 'curve':
			return definition.curve ? `${y} = ${typeset(definition.curve.formula, types)}` : y;
		case 'linear':
			return `${y} = ${definition.terms.map((term, i) => `${symbols[i] ?? ''}\\,${typeset(term, types)}`).join(' + ')}`;
		case 'polynomial':
			return `${y} = ${symbols.map((symbol, k) => (k === 0 ? symbol : k === 1 ? `${symbol}\\,${x}` : `${symbol}\\,${x}^{${k}}`)).join(' + ')}`;
		case 'origin':
			return `${y} = ${symbols[0] ?? ''}\\,${x}`;
		default:
			return `${y} = ${symbols[1] ?? ''} + ${symbols[0] ?? ''}\\,${x}`;
	}
}

function fitWords({ definition, fit }: Fitted): string {
	const rounds = fit.iterations > 1 ? `,\\ ${fit.iterations}\\ \\text{rounds}` : '';
	const weighed = definition.weights === 'equal' ? '' : '\\text{weighted}\\ ';
	return `${weighed}\\text{least squares},\\ n = ${fit.points},\\ \\nu = ${fit.degreesOfFreedom}${rounds}`;
}

function grouped(symbol: string): string {
	return /[\s(]/.test(symbol) ? `{${symbol}}` : symbol;
}
