import { intervalUnit, parseUnit, type Component, type Source } from '$lib/quantities';
import type { UncertaintyComponent } from './types';

/** A half-width as a standard deviation (GUM 4.3.7 and 4.3.9). */
const spread = { normal: 1, rectangular: Math.sqrt(3), triangular: Math.sqrt(6) } as const;

export interface Deviation {
	source: Source;
	/** standard uncertainty in SI; for a gain, a fraction */
	size: number;
	acts: 'offset' | 'gain';
}

/**
 * Hands out the sources of one evaluation. A shared component is one deviation wherever its name appears, so that a
 * thermometer's offset moves every row alike; a reading-scope component is a new deviation at every call.
 */
export class Sources {
	private readonly components = new Map<string, Component>();
	private readonly shared = new Map<string, Source>();

	deviation(definition: UncertaintyComponent, place: string): Deviation {
		const size = definition.size / spread[definition.distribution];
		const factor = definition.acts === 'gain' ? 1 : intervalUnit(parseUnit(definition.unit)).factor;
		return { source: this.source(definition, place), size: size * factor, acts: definition.acts };
	}

	/** Half the last digit either way, rectangular; its own draw in every row. `step` in SI. */
	resolution(step: number, place: string, label: string): Deviation {
		const component = this.component(`${place}:resolution`, {
			label: `Resolution of ${label.charAt(0).toLowerCase()}${label.slice(1)}`,
			scope: 'reading',
			degreesOfFreedom: Infinity
		});
		return { source: { component }, size: step / Math.sqrt(12), acts: 'offset' };
	}

	/** An uncertainty typed with the value itself, as in 1.394(12). */
	stated(size: number, place: string, label: string): Deviation {
		const component = this.component(`${place}:stated`, {
			label: `${label}, stated with the reading`,
			scope: 'reading',
			degreesOfFreedom: Infinity
		});
		return { source: { component }, size, acts: 'offset' };
	}

	private source(definition: UncertaintyComponent, place: string): Source {
		const degreesOfFreedom = definition.degreesOfFreedom ?? Infinity;
		const facts = { label: definition.label, scope: definition.scope, degreesOfFreedom };
		if (definition.scope === 'reading')
			return { component: this.component(`${place}:${definition.name}`, facts) };
		const known = this.shared.get(definition.name);
		if (known) return known;
		const source: Source = { component: this.component(definition.name, facts) };
		this.shared.set(definition.name, source);
		return source;
	}

	private component(id: string, facts: Omit<Component, 'id'>): Component {
		const known = this.components.get(id);
		if (known) return known;
		const component: Component = { id, ...facts };
		this.components.set(id, component);
		return component;
	}
}
