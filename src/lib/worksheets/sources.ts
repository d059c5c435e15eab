import { intervalUnit, parseUnit, type Component, type Scope, type Source } from '$lib/quantities';
import type { UncertaintyComponent } from './types';

/** A half-width as a standard deviation (GUM 4.3.7 and 4.3.9). */
const spread = { normal: 1, rectangular: Math.sqrt(3), triangular: Math.sqrt(6) } as const;

export interface Deviation {
	source: Source;
	/** standard uncertainty in SI; for a gain, a fraction */
	size: number;
	acts: 'offset' | 'gain';
}

/** Where a reading stands: what makes its components' ids unique, and which run a deviation of scope 'run' belongs to. */
export interface Standing {
	/** 'readings.p' */
	place: string;
	/** row id of the run; '' for the whole session */
	run: string;
	/** what is drawn anew in each row: in a table of runs that is one deviation a run */
	anew: Extract<Scope, 'reading' | 'run'>;
}

/**
 * Hands out the sources of one worksheet at work. A shared component is one deviation wherever its name appears, so that a
 * thermometer's offset moves every row alike; one of scope 'run' is one for each run; a reading-scope component is a new
 * deviation at every call.
 */
export class Sources {
	private readonly components = new Map<string, Component>();
	private readonly shared = new Map<string, Source>();
	private readonly distributions = new Map<Component, UncertaintyComponent['distribution']>();

	deviation(definition: UncertaintyComponent, standing: Standing): Deviation {
		const size = definition.size / spread[definition.distribution];
		const factor = definition.acts === 'gain' ? 1 : intervalUnit(parseUnit(definition.unit)).factor;
		return { source: this.source(definition, standing), size: size * factor, acts: definition.acts };
	}

	/** Half the last digit either way, rectangular; its own draw in every row. `step` in SI. */
	resolution(step: number, { place, anew }: Standing, label: string): Deviation {
		const component = this.component(`${place}:resolution`, 'rectangular', {
			label: `Resolution of ${label.charAt(0).toLowerCase()}${label.slice(1)}`,
			scope: anew,
			degreesOfFreedom: Infinity
		});
		return { source: { component }, size: step / Math.sqrt(12), acts: 'offset' };
	}

	/** An uncertainty typed with the value itself, as in 1.394(12). */
	stated(size: number, { place, anew }: Standing, label: string): Deviation {
		const component = this.component(`${place}:stated`, 'normal', {
			label: `${label}, stated with the reading`,
			scope: anew,
			degreesOfFreedom: Infinity
		});
		return { source: { component }, size, acts: 'offset' };
	}

	/** What a component's deviations are drawn from; normal where nothing else was stated. */
	distributionOf(component: Component): UncertaintyComponent['distribution'] {
		return this.distributions.get(component) ?? 'normal';
	}

	private source(definition: UncertaintyComponent, { place, run, anew }: Standing): Source {
		const degreesOfFreedom = definition.degreesOfFreedom ?? Infinity;
		const { name, label, scope, distribution } = definition;
		if (scope === 'reading') {
			const facts = { label, scope: anew, degreesOfFreedom };
			return { component: this.component(`${place}:${name}`, distribution, facts) };
		}
		const key = scope === 'run' ? `${name} ${run}` : name;
		const known = this.shared.get(key);
		if (known) return known;
		const component = this.component(name, distribution, { label, scope, degreesOfFreedom });
		const source: Source = { component };
		this.shared.set(key, source);
		return source;
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
