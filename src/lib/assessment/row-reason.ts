import type { LimitTable, StatisticRule } from '../limits/limit-set';
import { formatPctPair } from '../units/format-beside';
import { formatOrdinal } from '../units/format';
import type { Verdict, VerdictRow } from './assessment';
import { everythingFlagged, type PhaseData } from './phase-data';
import type { RuleOutcome } from './rule-outcome';
import { BASIS_WORDS, clauseWords, intervalWords, itemWords, ruleWords } from './wording';

const WHY: Record<Exclude<Verdict, 'not-assessed'>, (U: string) => string> = {
	compliant: () => 'keeps it',
	'compliant-inside-uncertainty': (U) => `keeps it by less than the uncertainty of ${U} points`,
	'exceeds-inside-uncertainty': (U) => `exceeds it by less than the uncertainty of ${U} points`,
	exceeds: () => 'exceeds it'
};

function sentenceCase(text: string): string {
	return text.charAt(0).toUpperCase() + text.slice(1);
}

/**
 * Why a row has its verdict: clause, statistic, value, limit, class of the table, remarks.
 * counted_pct  the uncertainty that the verdict counts, percentage points
 */
export function assessedReason(
	table: LimitTable,
	row: Omit<VerdictRow, 'reason'>,
	origin: string,
	classWhy: string,
	remarks: string[],
	counted_pct: number
): string {
	const { value, reference } = formatPctPair(row.value_pct, row.limit_pct);
	const rule = table.statistics.find((candidate) => candidate.key === row.statisticKey);
	const what = rule === undefined ? sentenceCase(origin) : `${sentenceCase(ruleWords(rule))} (${origin})`;
	const times =
		rule !== undefined && rule.multiplier !== 1 ? ` (${rule.multiplier} times the table’s value)` : '';
	const allowed = row.comparator === '<' ? 'must stay below' : 'may reach';
	const verdict = row.verdict === 'not-assessed' ? '' : WHY[row.verdict](formatUncertainty(counted_pct));
	return [
		`${clauseWords(table.clause, table.title)}: ${what} is ${value} ${BASIS_WORDS[row.basis]};`,
		`it ${allowed} ${reference}${times} and ${verdict}.`,
		classWhy,
		...remarks
	]
		.filter((part) => part !== '')
		.join(' ');
}

/** Uncertainties are printed to two decimals, or to two significant figures where that would read as zero. */
function formatUncertainty(U: number): string {
	return U >= 0.01 || U === 0 ? U.toFixed(2) : U.toPrecision(2);
}

/** Beside a verdict whose value passed through a transformer that nobody knows at this order. */
export function unknownUncertaintyRemark(quantity: VerdictRow['quantity'], counted_pct: number): string {
	return (
		`How the ${quantity} transformer transmits this is not known, so no expanded uncertainty can be stated; ` +
		`the comparison counts the known part of ${formatUncertainty(counted_pct)} points only.`
	);
}

/** Why there is no verdict: the item out of reach, not recorded, or too few intervals of the rule's kind. */
export function notAssessedReason(
	data: PhaseData,
	item: VerdictRow['item'],
	rule: StatisticRule | null,
	outcome: Extract<RuleOutcome, { kind: 'too-few' | 'no-value' }> | null
): string {
	if (rule !== null && outcome?.kind === 'too-few') {
		return (
			`Not assessed: the ${ruleWords(rule)} needs at least ${outcome.needed} valid values; ` +
			`${outcome.validCount} were recorded.`
		);
	}
	if (rule !== null && outcome === null) {
		return `Not assessed: no ${intervalWords(rule.interval_s)} values were recorded, and the rule asks for the ${ruleWords(rule)}.`;
	}
	if (data.highestOrder === 0) return 'Not assessed: no harmonic values were recorded on this phase.';
	if (everythingFlagged(data))
		return 'Not assessed: a dip, swell or interruption lies in every interval, and flagged intervals are left out.';
	const reach = `the recording reaches the ${formatOrdinal(data.highestOrder)} order only`;
	if (item.kind === 'order' && item.order > data.highestOrder) {
		return `Not assessed: the ${formatOrdinal(item.order)} order lies beyond what was sampled or logged; ${reach}.`;
	}
	if (item.kind === 'order') {
		return `Not assessed: no valid value was recorded at the ${formatOrdinal(item.order)} order on this phase.`;
	}
	return `Not assessed: the ${itemWords(item)} needs every order of its sum, and some were not recorded; ${reach}.`;
}
