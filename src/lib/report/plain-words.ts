import type { Assessment, VerdictRow } from '../assessment/assessment';
import { formatPhase, type PhaseNames } from '../recording/phase';
import { formatPctPair } from '../units/format-beside';
import { itemLong } from './verdict-table';

const OF_WHAT: Record<VerdictRow['basis'], string> = {
	'demand-current': 'of your demand current',
	'nominal-voltage': 'of the nominal voltage',
	fundamental: 'of the fundamental'
};

const SPAN: Record<Assessment['evidence'], string> = {
	weekly: 'Over the week measured',
	partial: 'Over the part of the week that was measured',
	snapshot: 'In the short capture taken'
};

function figureSentence(row: VerdictRow, names: PhaseNames): string {
	const { value, reference } = formatPctPair(row.value_pct, row.limit_pct, { decimals: 1 });
	return (
		`For the ${itemLong(row.item)}, ${reference} ${OF_WHAT[row.basis]} is allowed. ` +
		`${SPAN[row.evidence]}, phase ${formatPhase(row.phase, names)} reached ${value}.`
	);
}

/** What the tables of the other quantity say, so that nobody takes one for both. */
function otherQuantity(assessment: Assessment, row: VerdictRow): string {
	const other = row.quantity === 'voltage' ? 'current' : 'voltage';
	const verdicts = assessment.tables
		.filter((table) => table.quantity === other)
		.map((table) => table.verdict);
	if (verdicts.length === 0) return '';
	if (verdicts.every((verdict) => verdict === 'compliant'))
		return other === 'voltage'
			? 'The voltage you receive is within its limits.'
			: 'The current you draw is within its limits.';
	if (verdicts.includes('exceeds')) return `The limits of ${other} are exceeded as well.`;
	if (verdicts.includes('not-assessed')) return `The ${other} could not be judged in full.`;
	return `The ${other} lies close to its limit, too.`;
}

/** Explanation under the plain sentence: the figure, the other quantity, what is missing. */
export function plainExplanation(assessment: Assessment, names: PhaseNames): string {
	const { worst } = assessment;
	if (worst === null) return assessment.missing.join(' ');
	const incomplete =
		assessment.verdict === 'not-assessed' || assessment.missing.length > 0
			? 'Some of what the limits cover could not be judged; the report says what is missing.'
			: '';
	return [figureSentence(worst, names), otherQuantity(assessment, worst), incomplete]
		.filter((part) => part !== '')
		.join(' ');
}
