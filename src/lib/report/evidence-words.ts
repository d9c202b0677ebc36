import type { Assessment } from '../assessment/assessment';
import { EVIDENCE_WORDS } from '../assessment/verdict-words';
import { formatNumber, formatShare } from '../units/format';

export interface IntervalCounts {
	/** Valid and flagged intervals behind the governing figure. */
	intervalCount: number;
	flaggedCount: number;
	coverage: number;
}

/** Counts behind the figure that governs; null when nothing was assessed. */
export function governingCounts(assessment: Assessment): IntervalCounts | null {
	const { worst } = assessment;
	return worst === null
		? null
		: { intervalCount: worst.intervalCount, flaggedCount: worst.flaggedCount, coverage: worst.coverage };
}

/** "weekly, everything the rule asks for was measured. 1,008 intervals, 6 flagged." */
export function evidenceText(assessment: Assessment): string {
	const counts = governingCounts(assessment);
	const { word, meaning } = EVIDENCE_WORDS[assessment.evidence];
	if (counts === null) return `${word}; nothing could be assessed.`;
	const share =
		assessment.evidence === 'partial' && assessment.worst?.evidence === 'partial'
			? `, ${formatShare(counts.coverage)} of the period covered`
			: '';
	const count = (n: number) => formatNumber(n, { decimals: 0 });
	const answered = assessment.evidence === 'partial' && assessment.worst?.evidence === 'weekly';
	const what = answered
		? 'the governing rule was answered in full, other rules of the standard were not'
		: meaning;
	return `${word}, ${what}${share}. ${count(counts.intervalCount)} intervals behind the governing figure, ${count(counts.flaggedCount)} flagged.`;
}
