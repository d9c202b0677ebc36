import type { VerdictRow } from '$lib/assessment/assessment';
import type { LimitRowWords } from '$lib/report/limit-row-words';

/** A verdict row with what explains it, as the page is given it. */
export interface VerdictLineView extends VerdictRow {
	statistic: string;
	multiplier: number;
	limitRow: LimitRowWords | null;
}
