import { applicableSets } from '../../limits/applicable-sets';
import type { LimitSet } from '../../limits/limit-set';
import type { PointFacts } from '../../register/point-facts';
import { countryOfTimeZone } from '../../register/time-zones';
import type { Db } from '../db/database';
import { limitSetsRepository } from '../repositories/limit-sets.repository';
import type { Scope } from '../repositories/scope';

/** The point's own limit set, or the one that suits it best, with the reason. */
export async function limitSetOfPoint(
	db: Db,
	scope: Scope,
	facts: PointFacts,
	siteTimeZone: string
): Promise<{ limitSet: LimitSet; reason: string } | null> {
	const sets = limitSetsRepository(db, scope.practiceId);
	if (facts.limitSetId !== null) {
		const chosen = await sets.byId(facts.limitSetId);
		return chosen === null ? null : { limitSet: chosen, reason: facts.limitSetReason };
	}
	const best = applicableSets({ ...facts, country: countryOfTimeZone(siteTimeZone) }, await sets.list())[0];
	return best === undefined ? null : { limitSet: best.limitSet, reason: best.reason };
}
