import { worstFirst, type CheckOutcome } from './capture-check';
import type { StandingCheck } from './overrule';

/** A check as a verdict and its report keep it: without its picture, with what was said against it. */
export interface RecordedCheck {
	/** Name of the capture; null for a check of the captures together. */
	capture: string | null;
	title: string;
	outcome: CheckOutcome;
	sentence: string;
	overrule: { reason: string; by: string; at: string } | null;
}

/** Worst first. nameOf  names a capture by its id */
export function recordChecks(
	checks: readonly StandingCheck[],
	nameOf: (captureId: string) => string
): RecordedCheck[] {
	return worstFirst(checks).map(({ captureId, check, overrule }) => ({
		capture: captureId === null ? null : nameOf(captureId),
		title: check.title,
		outcome: check.outcome,
		sentence: check.sentence,
		overrule: overrule && { reason: overrule.reason, by: overrule.by, at: overrule.at }
	}));
}
