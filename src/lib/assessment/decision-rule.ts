import type { DecisionRule, Verdict } from './assessment';

/**
 * The one comparison of a measured value with its limit, on unrounded figures.
 * value, limit  same unit; both finite (a missing value is not judged: see not-assessed)
 * U             expanded uncertainty of the value (k = 2), ≥ 0, same unit; used by the guarded rule only
 * comparator    '<': the limit itself is already an exceedance; '<=': the limit itself is allowed
 * returns       guarded: the four outcomes of ILAC-G8:09/2019, 4.2.3 with guard band w = U; simple: two outcomes.
 *               A bound of the guard band belongs to the side that the comparator gives it, so that with U = 0
 *               both rules agree.
 */
export function judge(
	value: number,
	limit: number,
	U: number,
	comparator: '<' | '<=',
	rule: DecisionRule
): Exclude<Verdict, 'not-assessed'> {
	const keeps = (bound: number) => (comparator === '<' ? value < bound : value <= bound);
	if (rule === 'simple') return keeps(limit) ? 'compliant' : 'exceeds';
	if (keeps(limit - U)) return 'compliant';
	if (keeps(limit)) return 'compliant-inside-uncertainty';
	return keeps(limit + U) ? 'exceeds-inside-uncertainty' : 'exceeds';
}

/** The rule as it is printed with every verdict. */
export const DECISION_RULE_TEXT: Record<DecisionRule, string> = {
	guarded:
		'Guarded acceptance with a guard band equal to the expanded uncertainty (k = 2), four outcomes after ILAC-G8:09/2019, 4.2.3. Values are compared unrounded; the limit is taken as exact.',
	simple:
		'Simple acceptance: the measured value is compared with the limit as it is, unrounded; its uncertainty is shown and not counted.'
};
