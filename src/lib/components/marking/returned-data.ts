import type { RemarkShape, ReplyShape } from '$lib/contracts/marking';
import type { Evaluation } from '$lib/worksheets';
import type { SheetSection } from './sheet-data';

export type ReturnedRemark = RemarkShape & { replies: ReplyShape[] };

/** One's own report, back with its marks. Points in hundredths. */
export interface ReturnedData {
	report: string;
	title: string;
	returnedAt: string;
	sections: SheetSection[];
	evaluation: Evaluation;
	sha256: string;
	criteria: {
		id: string;
		title: string;
		levels: { level: number; text: string; points: number }[];
		level: number | null;
	}[];
	remarks: ReturnedRemark[];
	mark: { points: number; deduction: number; maximum: number; reason: string };
}
