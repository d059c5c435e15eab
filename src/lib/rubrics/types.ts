export interface RubricLevel {
	/** from 0, lowest first */
	level: number;
	title: string;
	text: string;
	/** at most two decimals */
	points: number;
}

export interface RubricCriterion {
	key: string;
	title: string;
	/** what the criterion asks, one sentence */
	asks: string;
	levels: RubricLevel[];
}

export interface Rubric {
	key: string;
	title: string;
	criteria: RubricCriterion[];
}

/** A criterion as marked: a level, and points that may depart from the level's own. */
export interface Score {
	level: number;
	points: number;
}

export interface Total {
	points: number;
	maximum: number;
	/** keys of the criteria without a score */
	missing: string[];
	complete: boolean;
}

/** A course's rule for late reports, as data. */
export interface LateRule {
	/** lateness up to here counts as on time */
	graceMinutes: number;
	/** in order of `upToHours`: the first step that covers the lateness holds; beyond the last step its percentage stays */
	steps: { upToHours: number; percent: number }[];
	/** later than this is not taken; null or absent: always taken */
	refuseAfterHours?: number | null;
}

export interface LatePenalty {
	late: boolean;
	/** from the due time, begun minutes counted; 0 when on time or within the grace */
	minutesLate: number;
	/** share of the points taken off, 0 to 1 */
	deduction: number;
	refused: boolean;
	/** what to tell: 'Late by 2 h: 5 % off by this course's rule.' */
	sentence: string;
}
