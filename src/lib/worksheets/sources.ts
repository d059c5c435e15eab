import { addPart, intervalUnit, parseUnit, type Component, type Scope, type Source } from '$lib/quantities';
import type { UncertaintyComponent } from './types';

/** A half-width as a standard deviation (GUM 4.3.7 and 4.3.9). */
const spread = { normal: 1, rectangular: Math.sqrt(3), triangular: Math.sqrt(6) } as const;

/** Where a reading stands: what makes its components' ids unique, and which run a deviation of scope 'run' belongs to. */
export interface Standing {
	/** 'readings.p' */
	place: string;
	/** row id of the run; '' for the whole session */
	run: string;
	/** what is drawn anew in each row: in a table of runs that is one deviation a run */
	anew: Extract<Scope, 'reading' | 'run'>;
}

/** What states a reading's uncertainty: a column or a parameter. */
export interface Uncertain {
	label: string;
	unit: string;
	resolution: string | null;
	uncertainty: UncertaintyComponent[];
}

/** A component as every reading of one column has it. */
interface Part {
	component: Component;
	/** standard uncertainty in SI; for a gain, a fraction */
	size: number;
	gain: boolean;
}

interface Plan {
	factor: number;
	shared: Part[];
	own: Part[];
}

/**
 * Hands out the sources of one worksheet at work. A shared component is one deviation wherever its name appears, so that a
 * thermometer's offset moves every row alike; one of scope 'run' is one for each run; a reading-scope component is a new
 * deviation in every reading.
 */
export class Sources {
	private readonly components = new Map<string, Component>();
	private readonly shared = new Map<string, Source>();
	private readonly distributions = new Map<Component, UncertaintyComponent['distribution']>();
	private readonly plans = new Map<string, Plan>();

	/**
	 * The linear parts of one reading, `value` in SI without its scale's zero. Who states an uncertainty with the reading
	 * (`stated`, in its unit) knows its scatter: it stands in place of what the column says, and shared parts stay.
	 */
	partsOf(
		definition: Uncertain,
		standing: Standing,
		value: number,
		stated: number | null
	): Map<Source, number> {
		const { place, anew, run } = standing;
		const plan = this.planOf(definition, place, anew);
		const parts = new Map<Source, number>();
		for (const part of plan.shared)
			addPart(parts, this.sharedSource(part, run), part.gain ? part.size * value : part.size);
		if (stated !== null) {
			const label = `${definition.label}, stated with the reading`;
			const facts = { label, scope: anew, degreesOfFreedom: Infinity };
			parts.set({ component: this.component(`${place}:stated`, 'normal', facts) }, stated * plan.factor);
			return parts;
		}
		for (const { component, size, gain } of plan.own) {
			const part = gain ? size * value : size;
			if (part !== 0) parts.set({ component }, part);
		}
		return parts;
	}

	private planOf(definition: Uncertain, place: string, anew: Standing['anew']): Plan {
		const known = this.plans.get(place);
		if (known) return known;
		const factor = intervalUnit(parseUnit(definition.unit)).factor;
		const plan: Plan = { factor, shared: [], own: [] };
		for (const stated of definition.uncertainty) {
			const { scope, name, label, distribution, acts, size, unit } = stated;
			const own = scope === 'reading';
			const component = this.component(own ? `${place}:${name}` : name, distribution, {
				label,
				scope: own ? anew : scope,
				degreesOfFreedom: stated.degreesOfFreedom ?? Infinity
			});
			const gain = acts === 'gain';
			const si = (size / spread[distribution]) * (gain ? 1 : intervalUnit(parseUnit(unit)).factor);
			(own ? plan.own : plan.shared).push({ component, size: si, gain });
		}
		if (definition.resolution !== null) {
			// half the last digit either way, its own draw in every row
			const { label } = definition;
			const component = this.component(`${place}:resolution`, 'rectangular', {
				label: `Resolution of ${label.charAt(0).toLowerCase()}${label.slice(1)}`,
				scope: anew,
				degreesOfFreedom: Infinity
			});
			const size = (Number(definition.resolution) * factor) / Math.sqrt(12);
			plan.own.push({ component, size, gain: false });
		}
		this.plans.set(place, plan);
		return plan;
	}

	private sharedSource({ component }: Part, run: string): Source {
		const key = component.scope === 'run' ? `${component.id} ${run}` : component.id;
		const known = this.shared.get(key);
		if (known) return known;
		const source: Source = { component };
		this.shared.set(key, source);
		return source;
	}

	/** What a component's deviations are drawn from; normal where nothing else was stated. */
	distributionOf(component: Component): UncertaintyComponent['distribution'] {
		return this.distributions.get(component) ?? 'normal';
	}

	private component(
		id: string,
		distribution: UncertaintyComponent['distribution'],
		facts: Omit<Component, 'id'>
	): Component {
		const known = this.components.get(id);
		if (known) return known;
		const component: Component = { id, ...facts };
		this.components.set(id, component);
		this.distributions.set(component, distribution);
		return component;
	}
}
