import { worstFirst, type CheckOutcome } from './capture-check';
import type { StandingCheck } from './overrule';

/** A check as a verdict and its report keep it: without its picture, with what was said against it. */
export interface RecordedCheck {
	/** Missing on what was recorded before captures were linked. */
	captureId?: string | null;
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
		captureId,
		capture: captureId === null ? null : nameOf(captureId),
		title: check.title,
		outcome: check.outcome,
		sentence: check.sentence,
		overrule: overrule && { reason: overrule.reason, by: overrule.by, at: overrule.at }
	}));
}

/** One finding, with the captures that share it. */
export interface SharedFinding {
	check: RecordedCheck;
	/** Names, each once; empty for a check of the captures together. */
	captures: string[];
}

/** The same finding over several captures is one; order is that of the first. */
export function sharedFindings(checks: readonly RecordedCheck[]): SharedFinding[] {
	const found = new Map<string, SharedFinding>();
	for (const check of checks) {
		const key = JSON.stringify([check.title, check.outcome, check.sentence, check.overrule?.reason ?? null]);
		const known = found.get(key) ?? { check, captures: [] };
		if (check.capture !== null && !known.captures.includes(check.capture)) known.captures.push(check.capture);
		found.set(key, known);
	}
	return [...found.values()];
}
