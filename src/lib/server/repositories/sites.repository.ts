import type { SiteFacts } from '../../register/site-facts';
import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { SiteRow } from '../db/rows';
import type { Scope } from './scope';

function columns(facts: SiteFacts) {
	return {
		name: facts.name,
		address: facts.address,
		utility: facts.utility,
		time_zone: facts.timeZone,
		notes: facts.notes
	};
}

export function sitesRepository(db: Db, scope: Scope) {
	const mine = () => {
		const query = db('sites').where({ practice_id: scope.practiceId });
		return scope.clientId === undefined ? query : query.andWhere({ client_id: scope.clientId });
	};

	return {
		byId: (id: string): Promise<SiteRow | undefined> => mine().where({ id }).first(),

		/** The site, provided it belongs to that client: addresses of pages name both. */
		ofClient: (clientId: string, id: string): Promise<SiteRow | undefined> =>
			mine().where({ client_id: clientId, id }).first(),

		listOfClient: (clientId: string): Promise<SiteRow[]> =>
			mine().where({ client_id: clientId }).orderBy('name'),

		async add(clientId: string, facts: SiteFacts, at: string): Promise<string> {
			const id = newId();
			await db('sites').insert({
				id,
				practice_id: scope.practiceId,
				client_id: clientId,
				...columns(facts),
				created_at: at,
				archived_at: null
			});
			return id;
		},

		async update(id: string, facts: SiteFacts): Promise<void> {
			await mine().where({ id }).update(columns(facts));
		},

		async setArchived(id: string, at: string | null): Promise<void> {
			await mine().where({ id }).update({ archived_at: at });
		}
	};
}
