import { SvelteSet } from 'svelte/reactivity';

/** ms in view after which something counts as read: about what a glance takes. */
const glance = 1_200;

/** What has been in view long enough to have been read: blocks while marking, remarks once returned. */
export class ReadInView {
	readonly #read: SvelteSet<string>;
	#observer: IntersectionObserver | null = null;
	// eslint-disable-next-line svelte/prefer-svelte-reactivity -- nothing is drawn from the timers
	readonly #timers = new Map<Element, ReturnType<typeof setTimeout>>();

	/** `known` was read on an earlier visit; `onread` is told of each new one. */
	constructor(
		known: Iterable<string> = [],
		private readonly onread: (key: string) => void = () => undefined
	) {
		this.#read = new SvelteSet(known);
	}

	has(key: string): boolean {
		return this.#read.has(key);
	}

	add(key: string): void {
		if (this.#read.has(key)) return;
		this.#read.add(key);
		this.onread(key);
	}

	/** Watches elements; `keyOf` names what one shows. The returned function stops. */
	watch(elements: Iterable<Element>, keyOf: (element: Element) => string | undefined): () => void {
		const observer = new IntersectionObserver(
			(entries) => {
				for (const { target, isIntersecting } of entries) {
					clearTimeout(this.#timers.get(target));
					const key = keyOf(target);
					if (!isIntersecting || !key) continue;
					this.#timers.set(
						target,
						setTimeout(() => {
							this.add(key);
							observer.unobserve(target);
						}, glance)
					);
				}
			},
			{ rootMargin: '-10% 0px -15% 0px' }
		);
		this.#observer = observer;
		for (const element of elements) observer.observe(element);
		return () => {
			this.#observer?.disconnect();
			for (const timer of this.#timers.values()) clearTimeout(timer);
			this.#timers.clear();
		};
	}
}
