import type { DecisionRule } from '../assessment/assessment';
import { ruleWords } from '../assessment/wording';
import type { LimitTable } from '../limits/limit-set';

/** Key that a capture too short for any percentile carries instead of a rule's. */
export const SNAPSHOT_KEY = 'snapshot';

/** How a value came about, as a noun: "95th percentile of the week’s 10-minute values". */
export function statisticText(table: Pick<LimitTable, 'statistics'> | undefined, key: string): string {
	const rule = table?.statistics.find((candidate) => candidate.key === key);
	if (rule !== undefined) return ruleWords(rule);
	return 'greatest value of the capture, indicative only';
}

export function decisionRuleWords(rule: DecisionRule): string {
	return rule === 'guarded'
		? 'Guarded decision: a value whose expanded uncertainty reaches across the limit is reported as inside uncertainty, on whichever side it lies.'
		: 'Simple decision: the value is compared with the limit without regard to its uncertainty, which is stated beside it.';
}
