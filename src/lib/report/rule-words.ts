import type { DecisionRule } from '../assessment/assessment';
import type { LimitBasis, StatisticRule } from '../limits/limit-set';
import { formatOrdinal } from '../units/format';

/** What the percentages of a table are of, after the word "percent": "of demand current I_L". */
export function basisWords(basis: LimitBasis): string {
	switch (basis) {
		case 'demand-current':
			return 'of demand current I_L';
		case 'nominal-voltage':
			return 'of nominal voltage';
		case 'fundamental':
			return 'of the fundamental';
	}
}

function intervalWords(interval_s: number): string {
	if (interval_s === 600) return '10-minute values';
	return interval_s === 3 ? '3-second values' : `values over ${interval_s} s`;
}

/** "weekly 95th percentile of 10-minute values". */
export function statisticWords(rule: Pick<StatisticRule, 'interval_s' | 'percentile' | 'period'>): string {
	const period = rule.period === 'week' ? 'weekly' : 'daily';
	if (rule.percentile === 100) return `${period} maximum of ${intervalWords(rule.interval_s)}`;
	return `${period} ${formatOrdinal(rule.percentile)} percentile of ${intervalWords(rule.interval_s)}`;
}

/** Key that a capture too short for any percentile carries instead of a rule's. */
export const SNAPSHOT_KEY = 'snapshot';
export const SNAPSHOT_WORDS =
	'value of the capture, indicative only: too short for the percentile that the rule asks for';

export function decisionRuleWords(rule: DecisionRule): string {
	return rule === 'guarded'
		? 'Guarded decision: a value whose expanded uncertainty reaches across the limit is reported as inside uncertainty, on whichever side it lies.'
		: 'Simple decision: the value is compared with the limit without regard to its uncertainty, which is stated beside it.';
}
