/** What the database said, without the query and its parameters: those hold what people wrote, which stays out of the log. */
export function causeOf(problem: unknown): unknown {
	return (problem as { cause?: unknown } | null)?.cause ?? problem;
}
