import type { Actor } from '../../access/access';
import type { LimitSet } from '../../limits/limit-set';
import { requireFound } from '../app-error';
import { requirePermission } from '../auth/require-permission';
import { listLimitSets, type LimitSetSort } from '../read-models/limit-library';
import type { ListQuery } from '../read-models/list-query';
import { limitSetsRepository } from '../repositories/limit-sets.repository';
import type { ServiceDeps } from '../service-deps';

/** The limit library as the practice reads it: published editions and its own sets. */
export function createLimitLibraryService({ db }: Pick<ServiceDeps, 'db'>) {
	return {
		async list(actor: Actor, query: ListQuery<LimitSetSort>) {
			requirePermission(actor, 'limits.read');
			return listLimitSets(db, actor, query);
		},

		/** One set with all its tables; another practice's set is not found. */
		async set(actor: Actor, limitSetId: number): Promise<LimitSet> {
			requirePermission(actor, 'limits.read');
			return requireFound(await limitSetsRepository(db, actor.practiceId).byId(limitSetId), 'limit set');
		}
	};
}
