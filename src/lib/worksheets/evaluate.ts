import { engineVersion } from './engine-version';
import type { Fitted } from './fit-step';
import { namedValues, namingFor } from './named';
import { unmetRequirements } from './requirements';
import { Session } from './session';
import { showComparisons } from './show-comparisons';
import { showFigures } from './show-figures';
import { showFits } from './show-fits';
import { showTables } from './show-tables';
import { showQuantity } from './shown';
import type {
	CarriedValue,
	Evaluation,
	FigureData,
	Readings,
	SampleCalculation,
	ShownFit,
	ShownQuantity,
	Worksheet
} from './types';
import { showWorkings } from './workings';
import type { Quantity } from '$lib/quantities';

/**
 * Works up the readings: the same code in the browser while typing and on the server at hand-in. Never throws on
 * readings: what is missing or cannot be read is a problem of the evaluation, with its address. `carried` are values
 * stated in place of computed ones: everything downstream is computed from them.
 */
export function evaluate(
	worksheet: Worksheet,
	readings: Readings,
	carried: readonly CarriedValue[] = []
): Evaluation {
	return new Evaluator(worksheet).evaluate(readings, carried);
}

/** The sample calculations alone, with rows chosen by table name. */
export function workingsFor(
	worksheet: Worksheet,
	readings: Readings,
	chosenRows: Readonly<Record<string, string>>
): Evaluation['workings'] {
	const session = new Session(worksheet);
	session.take(readings);
	return showWorkings(session, chosenRows);
}

/**
 * An evaluation that is kept from one state of the readings to the next: it says what `evaluate` says and computes only what
 * an edit touches. Rows whose object is the very same are not even looked at.
 */
export class Evaluator {
	private readonly session: Session;
	private readonly quantities = new WeakMap<Quantity, ShownQuantity>();
	private readonly fits = new WeakMap<Fitted, ShownFit>();
	private readonly calculations = new WeakMap<Quantity, SampleCalculation>();
	private readonly series = new WeakMap<object, FigureData['series'][number]>();

	constructor(worksheet: Worksheet) {
		this.session = new Session(worksheet);
	}

	evaluate(readings: Readings, carried: readonly CarriedValue[] = []): Evaluation {
		const { session } = this;
		session.take(readings, carried);
		const { comparisons, problems } = showComparisons(session);
		return {
			engine: engineVersion,
			problems: [...unmetRequirements(session), ...session.problems, ...problems],
			quantities: this.showQuantities(),
			tables: showTables(session),
			fits: showFits(session, this.fits),
			comparisons,
			figures: showFigures(session, this.series),
			workings: showWorkings(session, {}, this.calculations)
		};
	}

	/** The sample calculations alone, with rows chosen by table name, of the readings evaluated last. */
	workings(chosenRows: Readonly<Record<string, string>>): Evaluation['workings'] {
		return showWorkings(this.session, chosenRows);
	}

	private showQuantities(): Record<string, ShownQuantity> {
		const { session } = this;
		const shown: Record<string, ShownQuantity> = {};
		const constants = new Map(session.worksheet.constants.map(({ name, value }) => [name, String(value)]));
		for (const value of namedValues(session)) {
			const { name, group, quantity } = value;
			let known = this.quantities.get(quantity);
			if (known?.name !== name) {
				const typed =
					group === null ? (constants.get(name) ?? session.parameters.get(name)?.typed) : undefined;
				known = {
					...showQuantity(quantity, namingFor(value), typed),
					...(group === null ? {} : { group }),
					...('headline' in value.naming && value.naming.headline === true ? { headline: true } : {})
				};
				this.quantities.set(quantity, known);
			}
			shown[name] = known;
		}
		return shown;
	}
}
