/** Where to go after signing in: an address of `origin`, else the start. */
export function localPathOf(origin: string, next: string | null | undefined): string {
	if (!next?.startsWith('/') || !URL.canParse(next, origin)) return '/now';
	const url = new URL(next, origin);
	// '/.//elsewhere' is an address of ours whose path, sent alone, names another host.
	return url.origin === origin && !url.pathname.startsWith('//')
		? url.pathname + url.search + url.hash
		: '/now';
}
