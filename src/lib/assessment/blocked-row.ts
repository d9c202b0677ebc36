import type { LimitTable } from '../limits/limit-set';
import type { LimitAnswer } from '../limits/look-up-limit';
import type { BlockedLevels, VerdictRow } from './assessment';
import { baseRuleOf } from './assess-item';

/** The first finding that forbids a verdict on a conductor; null when there is none. */
export function blockOn(
	blocked: readonly BlockedLevels[],
	quantity: VerdictRow['quantity'],
	phase: VerdictRow['phase']
): BlockedLevels | null {
	return blocked.find((one) => one.quantity === quantity && one.phase === phase) ?? null;
}

const LEAD = 'Not assessed, because the capture cannot be relied on:';

/** Whether a row, also one read back from a stored assessment, was left without a verdict by a finding about its capture. */
export function isBlockedRow({ verdict, reason }: Pick<VerdictRow, 'verdict' | 'reason'>): boolean {
	return verdict === 'not-assessed' && reason.startsWith(LEAD);
}

/** One item on a blocked conductor: no value is shown, because none may be relied on. */
export function blockedRow(
	table: LimitTable,
	item: VerdictRow['item'],
	limit: LimitAnswer,
	{ phase, sentence }: BlockedLevels
): VerdictRow {
	const base = baseRuleOf(table);
	return {
		tableKey: table.key,
		quantity: table.quantity,
		item,
		phase,
		statisticKey: base?.key ?? 'snapshot',
		basis: table.basis,
		value_pct: null,
		limit_pct: limit.limit_pct * (base?.multiplier ?? 1),
		limitRowId: limit.rowId,
		comparator: base?.comparator ?? '<=',
		utilisation: null,
		uncertainty_pct: null,
		evidence: 'snapshot',
		coverage: 0,
		intervalCount: 0,
		flaggedCount: 0,
		worstPeriod: null,
		verdict: 'not-assessed',
		reason: `${LEAD} ${sentence}`
	};
}
