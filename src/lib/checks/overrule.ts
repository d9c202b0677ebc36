import type { CaptureCheck } from './capture-check';

/** Fewest characters of a reason: a reader has to learn from it why the finding does not matter. */
export const LEAST_REASON_CHARACTERS = 15;
export const MOST_REASON_CHARACTERS = 1000;

/** An engineer's word against a finding. Taking it back leaves it on record. */
export interface Overrule {
	id: string;
	/** null for a check of the survey as a whole. */
	captureId: string | null;
	code: string;
	channelIndex: number | null;
	/** The finding as it read when it was overruled. */
	sentence: string;
	reason: string;
	by: string;
	at: string;
	takenBackBy: string | null;
	takenBackAt: string | null;
}

/** A check with what was said against it. */
export interface StandingCheck {
	captureId: string | null;
	check: CaptureCheck;
	/** The overrule that counts; null while the finding stands. */
	overrule: Overrule | null;
	/** Earlier ones: taken back, or made about a finding that reads otherwise now. The last one first. */
	earlier: Overrule[];
}

/** Whether a finding can be overruled: passes and mere notes leave nothing to overrule. */
export function canOverrule(check: Pick<CaptureCheck, 'outcome'>): boolean {
	return check.outcome === 'blocks' || check.outcome === 'warns';
}

/**
 * Lays overrules on the checks they were made about. One counts as long as the finding reads as it did: other figures are
 * another finding, and somebody has to look again.
 */
export function withOverrules(
	checks: readonly { captureId: string | null; check: CaptureCheck }[],
	overrules: readonly Overrule[]
): StandingCheck[] {
	return checks.map(({ captureId, check }) => {
		const own = overrules
			.filter(
				(one) =>
					one.captureId === captureId && one.code === check.code && one.channelIndex === check.channelIndex
			)
			.sort((a, b) => b.at.localeCompare(a.at));
		const counting = canOverrule(check)
			? (own.find((one) => one.takenBackAt === null && one.sentence === check.sentence) ?? null)
			: null;
		return { captureId, check, overrule: counting, earlier: own.filter((one) => one !== counting) };
	});
}

/** Findings of a weight that nobody has overruled. */
export function standing(checks: readonly StandingCheck[], outcome: 'blocks' | 'warns'): StandingCheck[] {
	return checks.filter((one) => one.check.outcome === outcome && one.overrule === null);
}
