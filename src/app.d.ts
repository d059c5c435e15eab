import type { Viewer } from '$lib/server/auth';

declare global {
	namespace App {
		interface Error {
			message: string;
			/** stands in the log beside what happened */
			id?: string;
		}
		interface Locals {
			viewer: Viewer | null;
			/** SHA-256 of the session's secret, to end this session */
			session: Uint8Array | null;
			requestId: string;
		}
		interface PageData {
			viewer?: Viewer | null;
			/** the one line of navigation */
			trail?: { label: string; href: string; current?: boolean }[];
			/** the sheets of a work: readings, workings, report... */
			sheets?: { label: string; href: string; current?: boolean }[];
			/** more places for "Go to…" */
			goTo?: { label: string; href: string; under?: string }[];
		}
	}
}
