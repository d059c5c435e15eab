import type { Attachment } from 'svelte/attachments';

/**
 * Makes a box that can be moved sideways a stop for the Tab key, named `label`, while there is something to move:
 * one that shows everything would only be in the way. The markup itself has `tabindex="0" role="group" aria-label`, so
 * that it can be reached before this has run.
 */
export function scrollStop(label: string): Attachment<HTMLElement> {
	return (box) => {
		const look = () => {
			if (box.scrollWidth > box.clientWidth + 1) {
				box.tabIndex = 0;
				box.setAttribute('role', 'group');
				box.setAttribute('aria-label', label);
			} else {
				for (const name of ['tabindex', 'role', 'aria-label']) box.removeAttribute(name);
			}
		};
		const stops = [watchSize(box, look), goesOn(box)];
		return () => {
			for (const stop of stops) stop?.();
		};
	};
}

/** Marks a box while something lies out of sight at its right, for app.css to draw: its edge alone looks like the end. */
export const goesOn: Attachment<HTMLElement> = (box) => {
	const look = () =>
		box.toggleAttribute('data-goes-on', box.scrollWidth - box.clientWidth - box.scrollLeft > 1);
	box.addEventListener('scroll', look, { passive: true });
	const stop = watchSize(box, look);
	return () => {
		box.removeEventListener('scroll', look);
		stop();
	};
};

/** As scrollStop, for a landmark that moves up and down: it keeps its role and name. */
export const tallStop: Attachment<HTMLElement> = (box) =>
	watchSize(box, () => {
		if (box.scrollHeight > box.clientHeight + 1) box.tabIndex = 0;
		else box.removeAttribute('tabindex');
	});

function watchSize(box: HTMLElement, look: () => void): () => void {
	const observer = new ResizeObserver(look);
	observer.observe(box);
	for (const child of box.children) observer.observe(child);
	return () => observer.disconnect();
}
