/** Somebody not signed in, as far as one can tell: whom limits count and a session remembers. */
export interface Visitor {
	/** network address */
	address: string;
	/** what the browser says of itself */
	client: string;
}
