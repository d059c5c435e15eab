import {
	formatQuantity,
	parseTypedNumber,
	parseUnit,
	standardUncertainty,
	differenceIn,
	valueIn,
	type Quantity
} from '$lib/quantities';
import { namedValues } from './named';
import { namingOf } from './naming';
import { Session } from './session';
import { withMistake } from './variant';
import type { MistakeDefinition, Readings, Worksheet } from './types';

/** A number somebody worked out by hand, for a result or for a computed cell of one row. */
export interface StatedValue {
	/** 'H_vap', 'gamma.argon', or a computed column together with `row` */
	name: string;
	/** row id */
	row?: string;
	/** as typed, in the unit of the name */
	text: string;
}

export interface StatedVerdict {
	verdict: 'agrees' | 'differs' | 'unreadable' | 'nothing to compare';
	/** where the number is what a recognised mistake makes */
	mistake: Pick<MistakeDefinition, 'code' | 'title' | 'message'> | null;
	message: string;
}

/**
 * Whether a number worked out by hand is what the readings give: within one unit of the last digit it states, since
 * intermediate values may have been rounded (common practice). If not, the recognised mistakes are tried.
 */
export function checkStated(worksheet: Worksheet, readings: Readings, stated: StatedValue): StatedVerdict {
	const naming = namingOf(worksheet, stated.name.replace(/\..*$/, ''));
	const reading = parseTypedNumber(stated.text);
	if (reading.kind !== 'number' || !naming) {
		const reason = reading.kind === 'problem' ? reading.message : 'Nothing is typed.';
		return {
			verdict: 'unreadable',
			mistake: null,
			message: naming ? reason : `There is no value "${stated.name}".`
		};
	}
	const unit = parseUnit(naming.unit);
	const value = find(worksheet, readings, stated);
	if (!value) {
		const message = `${naming.label} cannot be computed from the readings yet.`;
		return { verdict: 'nothing to compare', mistake: null, message };
	}
	const { value: typed, decimals } = reading.number;
	const step = Number(`1e${-decimals}`);
	const near = (quantity: Quantity) => Math.abs(typed - valueIn(quantity, unit)) <= step * (1 + 1e-9);
	if (near(value))
		return { verdict: 'agrees', mistake: null, message: `${naming.label} agrees with the readings.` };
	for (const mistake of worksheet.mistakes) {
		const made = find(withMistake(worksheet, mistake), readings, stated);
		if (!made || !near(made)) continue;
		const { code, title, message } = mistake;
		return { verdict: 'differs', mistake: { code, title, message }, message };
	}
	const u = standardUncertainty(value);
	const shown = formatQuantity(valueIn(value, unit), u === 0 ? null : differenceIn(u, unit), unit).text;
	return { verdict: 'differs', mistake: null, message: `${naming.label}: the readings give ${shown}.` };
}

function find(worksheet: Worksheet, readings: Readings, { name, row }: StatedValue): Quantity | undefined {
	const session = new Session(worksheet);
	session.take(readings);
	if (row === undefined) return namedValues(session).find((value) => value.name === name)?.quantity;
	for (const { name: table, columns } of worksheet.tables) {
		if (!columns.some((column) => column.name === name)) continue;
		return session.rows.tables
			.get(table)
			?.find((state) => state.row.id === row)
			?.values.get(name);
	}
	return undefined;
}
