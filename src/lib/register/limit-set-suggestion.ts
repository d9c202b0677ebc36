import { applicableSets, type ApplicabilityQuestion, type ApplicableSet } from '../limits/applicable-sets';
import type { LimitSet } from '../limits/limit-set';

/** "IEEE Std 519, 2022". */
export function limitSetName(set: Pick<LimitSet, 'standard' | 'edition'>): string {
	return `${set.standard}, ${set.edition}`;
}

/** A set without its tables: all that a choice among sets needs. */
export function withoutTables(set: LimitSet): LimitSet {
	return { ...set, tables: [], notes: [] };
}

/** Low voltage where the form does not tell yet; only the public-network levels depend on it. */
const ASSUMED_VOLTAGE_V = 400;

/** Sets that suit a point, best first, also while its voltage is not entered yet. */
export function suggestLimitSets(
	question: Omit<ApplicabilityQuestion, 'nominalVoltage_V'> & { nominalVoltage_V: number | null },
	limitSets: readonly LimitSet[]
): ApplicableSet[] {
	return applicableSets({ ...question, nominalVoltage_V: question.nominalVoltage_V ?? ASSUMED_VOLTAGE_V }, [
		...limitSets
	]);
}
