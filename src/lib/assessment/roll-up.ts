import type { Evidence, Verdict, VerdictRow } from './assessment';

/**
 * How bad each verdict is when rows are laid together. `not-assessed` stands between the exceedances and the
 * compliant ones: it never hides an exceedance, and what was not assessed is never called compliant.
 */
const RANK: Record<Verdict, number> = {
	exceeds: 4,
	'exceeds-inside-uncertainty': 3,
	'not-assessed': 2,
	'compliant-inside-uncertainty': 1,
	compliant: 0
};

/** The verdict that governs; nothing at all is not assessed. */
export function rollUpVerdicts(verdicts: Iterable<Verdict>): Verdict {
	let worst: Verdict | null = null;
	for (const verdict of verdicts) {
		if (worst === null || RANK[verdict] > RANK[worst]) worst = verdict;
	}
	return worst ?? 'not-assessed';
}

/** The row that governs: worst verdict among the assessed, then the greatest utilisation; null when none was assessed. */
export function governingRow(rows: Iterable<VerdictRow>): VerdictRow | null {
	let worst: VerdictRow | null = null;
	for (const row of rows) {
		if (row.verdict === 'not-assessed' || row.utilisation === null) continue;
		if (worst === null) {
			worst = row;
			continue;
		}
		const byVerdict = RANK[row.verdict] - RANK[worst.verdict];
		if (byVerdict > 0 || (byVerdict === 0 && row.utilisation > (worst.utilisation ?? 0))) worst = row;
	}
	return worst;
}

const EVIDENCE_RANK: Record<Evidence, number> = { weekly: 0, partial: 1, snapshot: 2 };

/** The weakest evidence governs what may be claimed; nothing at all is a snapshot. */
export function weakestEvidence(evidences: Iterable<Evidence>): Evidence {
	let weakest: Evidence | null = null;
	for (const evidence of evidences) {
		if (weakest === null || EVIDENCE_RANK[evidence] > EVIDENCE_RANK[weakest]) weakest = evidence;
	}
	return weakest ?? 'snapshot';
}
