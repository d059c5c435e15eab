import type { Quantity } from '$lib/quantities';
import { constant, variable, type Dual } from './dual';
import type { Objective } from './descent';
import type { InputSlope } from './fit-types';

/** A model in SI numbers: written in dual numbers, so that its derivatives are exact. */
export type Model = (parameters: readonly Dual[], inputs: readonly Dual[]) => Dual;

/** A model beside its readings: residuals and slopes at any parameters. */
export class ModelProblem {
	/** whether some input is not exact */
	readonly uncertain: boolean;
	private readonly constants: readonly (readonly Dual[])[];

	constructor(
		private readonly model: Model,
		private readonly inputs: readonly (readonly Quantity[])[],
		readonly y: readonly Quantity[]
	) {
		for (const column of inputs) {
			if (column.length !== y.length)
				throw new RangeError(`An input of ${column.length} values beside ${y.length} points.`);
		}
		this.uncertain = inputs.some((column) => column.some(({ parts }) => parts.size > 0));
		this.constants = y.map((_, i) => inputs.map((column) => constant(column[i]?.value ?? NaN)));
	}

	evaluate(parameters: readonly number[], inputs: readonly Dual[]) {
		const count = parameters.length;
		const varied = parameters.map((value, j) => variable(value, j, count));
		const { value, gradient } = this.model(varied, inputs);
		return { value, gradient: gradient.length === 0 ? parameters.map(() => 0) : gradient };
	}

	objective(weights: readonly number[]): Objective {
		const { y, model, constants } = this;
		const roots = weights.map(Math.sqrt);
		return {
			size: Math.sqrt(y.reduce((sum, { value }, i) => sum + (weights[i] ?? 0) * value * value, 0)),
			residuals: (parameters) => {
				const fixed = parameters.map(constant);
				const result = new Float64Array(y.length);
				for (let i = 0; i < y.length; i += 1) {
					const residual = ((y[i]?.value ?? NaN) - model(fixed, constants[i] ?? []).value) * (roots[i] ?? 0);
					if (!Number.isFinite(residual)) return null;
					result[i] = residual;
				}
				return result;
			},
			slopes: (parameters) => {
				const count = parameters.length;
				const varied = parameters.map((value, j) => variable(value, j, count));
				const residuals = new Float64Array(y.length);
				const columns = parameters.map(() => new Float64Array(y.length));
				for (let i = 0; i < y.length; i += 1) {
					const root = roots[i] ?? 0;
					const { value, gradient } = model(varied, constants[i] ?? []);
					residuals[i] = ((y[i]?.value ?? NaN) - value) * root;
					let finite = Number.isFinite(residuals[i]);
					for (let j = 0; j < count; j += 1) {
						const slope = (gradient[j] ?? 0) * root;
						finite &&= Number.isFinite(slope);
						const column = columns[j];
						if (column) column[i] = slope;
					}
					if (!finite) return null;
				}
				return { residuals, columns };
			}
		};
	}

	/**
	 * Slopes towards the uncertain inputs of a point, exact; with the sizes of the parameters also how
	 * they move with these, by central differences.
	 */
	inputSlopes(parameters: readonly number[], i: number, sizes?: readonly number[]): InputSlope[] {
		if (!this.uncertain) return [];
		const constants = this.constants[i] ?? [];
		return this.inputs.flatMap((column, k) => {
			const input = column[i];
			if (!input || input.parts.size === 0) return [];
			const varied = constants.map((each, m) => (m === k ? variable(each.value, 0, 1) : each));
			const towards = (values: readonly number[]) =>
				this.model(values.map(constant), varied).gradient[0] ?? 0;
			const gradient = (sizes ?? []).map((size, j) => {
				const step = differenceStep(size);
				return (towards(moved(parameters, j, step)) - towards(moved(parameters, j, -step))) / (2 * step);
			});
			return [{ input, slope: towards(parameters), gradient }];
		});
	}

	/** Whether any point has a deviation that it shares with others. */
	get shares(): boolean {
		const shared = ({ parts }: Quantity) =>
			[...parts.keys()].some(({ component }) => component.scope !== 'reading');
		return this.y.some(shared) || this.inputs.some((column) => column.some(shared));
	}

	/** Sum over the points of weight, residual (both held) and gradient of the model at the parameters. */
	pull(parameters: readonly number[], weights: readonly number[], residuals: readonly number[]): number[] {
		const count = parameters.length;
		const varied = parameters.map((value, j) => variable(value, j, count));
		const sums = new Array<number>(count).fill(0);
		for (let i = 0; i < this.y.length; i += 1) {
			const { gradient } = this.model(varied, this.constants[i] ?? []);
			const share = (weights[i] ?? 0) * (residuals[i] ?? 0);
			for (let j = 0; j < count; j += 1) sums[j] = (sums[j] ?? 0) + share * (gradient[j] ?? 0);
		}
		return sums;
	}
}

/** Cube root of the rounding unit: where a central difference of exact derivatives loses least. */
export function differenceStep(size: number): number {
	return 6e-6 * (size || 1);
}

export function moved(parameters: readonly number[], index: number, by: number): number[] {
	return parameters.map((each, j) => (j === index ? each + by : each));
}
