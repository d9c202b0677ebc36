import type { LimitBasis, StatisticRule } from '../limits/limit-set';
import { formatDuration, formatOrdinal } from '../units/format';
import type { VerdictRow } from './assessment';

/** What a percentage is a percentage of, as it stands in a sentence. */
export const BASIS_WORDS: Record<LimitBasis, string> = {
	'nominal-voltage': 'of nominal voltage',
	fundamental: 'of the fundamental',
	'demand-current': 'of demand current'
};

/** "5th", "total harmonic distortion", "total demand distortion". */
export function itemWords(item: VerdictRow['item']): string {
	if (item.kind === 'order') return formatOrdinal(item.order);
	return item.index === 'TDD' ? 'total demand distortion' : 'total harmonic distortion';
}

export function intervalWords(interval_s: number): string {
	if (interval_s === 3) return '3-second';
	if (interval_s === 600) return '10-minute';
	return formatDuration(interval_s);
}

/** "95th percentile of the week's 10-minute values". */
export function ruleWords(rule: Pick<StatisticRule, 'percentile' | 'period' | 'interval_s'>): string {
	return `${formatOrdinal(rule.percentile)} percentile of the ${rule.period}’s ${intervalWords(rule.interval_s)} values`;
}

/** "clause 5.2" or, where a table has none, its title alone. */
export function clauseWords(clause: string, title: string): string {
	return clause === '' ? title : `Clause ${clause}`;
}
