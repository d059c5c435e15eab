import type { Evaluation, Readings, Worksheet } from '$lib/worksheets';

/**
 * What a snapshot's hash is over. Everything in it is canonical JSON; long things stand in parts of their own, named by
 * their SHA-256 in hex, so that two attempts share what did not change.
 */
export interface Manifest {
	format: 1;
	report: string;
	attempt: number;
	/** version of the arithmetic */
	engine: string;
	/** ISO 8601, UTC */
	receivedAt: string;
	dueAt: string;
	/** parts */
	worksheet: string;
	readings: string;
	evaluation: string;
	readingsDocument: { id: string; seq: number };
	sections: ManifestSection[];
}
export interface ManifestSection {
	position: number;
	key: string;
	title: string;
	owner: 'author' | 'team';
	document: string;
	seq: number;
	/** part: the text as one JSON string */
	part: string;
}

/** A snapshot, read back and checked against its hashes. */
export interface Snapshot {
	id: string;
	reportId: string;
	attempt: number;
	/** of the manifest, in hex: the one on the receipt */
	sha256: string;
	engine: string;
	receivedAt: Date;
	dueAt: Date;
	sections: { position: number; key: string; title: string; owner: 'author' | 'team'; text: string }[];
	readings: Readings;
	worksheet: Worksheet;
	evaluation: Evaluation;
}
