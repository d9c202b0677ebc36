import type { Assessment, VerdictRow } from '../assessment/assessment';
import { BASIS_WORDS } from '../assessment/wording';
import { formatPctPair } from '../units/format-beside';
import { groupByItem, itemLong, speakingRow } from './verdict-table';

const MOST_FINDINGS = 6;

function sentence(row: VerdictRow, phase: string): string {
	const { value, reference } = formatPctPair(row.value_pct, row.limit_pct);
	const name = itemLong(row.item);
	const head = `${name.charAt(0).toUpperCase()}${name.slice(1)} of ${row.quantity}, phase ${phase}: ${value} ${BASIS_WORDS[row.basis]} against ${reference} allowed`;
	switch (row.verdict) {
		case 'exceeds':
			return `${head}. The limit is exceeded.`;
		case 'exceeds-inside-uncertainty':
			return `${head}. The value lies above the limit by less than the measurement uncertainty: inconclusive.`;
		default:
			return `${head}. The value keeps the limit by less than the measurement uncertainty: inconclusive.`;
	}
}

/** First draft of a report's findings, from what stands out; the engineer edits them. */
export function suggestFindings(
	assessment: Assessment,
	phase: (phase: VerdictRow['phase']) => string
): string[] {
	const findings: string[] = [];
	for (const quantity of ['current', 'voltage'] as const) {
		const rows = assessment.rows.filter(
			(row) => row.quantity === quantity && row.verdict !== 'compliant' && row.verdict !== 'not-assessed'
		);
		const worst = groupByItem(rows)
			.flatMap((group) => speakingRow(group.rows) ?? [])
			.sort((a, b) => (b.utilisation ?? 0) - (a.utilisation ?? 0));
		findings.push(...worst.slice(0, MOST_FINDINGS).map((row) => sentence(row, phase(row.phase))));
		if (worst.length > MOST_FINDINGS)
			findings.push(
				`${worst.length - MOST_FINDINGS} further figures of ${quantity} reach or exceed their limit; they stand in the tables.`
			);
	}
	if (findings.length === 0 && assessment.worst !== null && assessment.verdict === 'compliant')
		findings.push('Every order and total that was judged keeps its limit.');
	findings.push(...(assessment.notes ?? []));
	if (assessment.evidence === 'snapshot' && assessment.worst !== null)
		findings.push('The capture is too short for the percentiles of the rule: the comparison is indicative.');
	findings.push(...assessment.missing);
	return findings;
}
