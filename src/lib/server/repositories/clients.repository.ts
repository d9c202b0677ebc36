import type { ClientFacts } from '../../register/client-facts';
import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { ClientRow } from '../db/rows';
import type { Scope } from './scope';

function columns(facts: ClientFacts) {
	return {
		name: facts.name,
		contact_name: facts.contactName,
		contact_email: facts.contactEmail,
		contact_phone: facts.contactPhone,
		address: facts.address,
		notes: facts.notes
	};
}

/** Client organisations of one practice. */
export function clientsRepository(db: Db, scope: Scope) {
	const mine = () => {
		const query = db('clients').where({ practice_id: scope.practiceId });
		return scope.clientId === undefined ? query : query.andWhere({ id: scope.clientId });
	};

	return {
		byId: (id: string): Promise<ClientRow | undefined> => mine().where({ id }).first(),

		/** A name is told apart by letters and digits, not by case. */
		byName: (name: string): Promise<ClientRow | undefined> =>
			mine().whereRaw('lower(name) = lower(?)', [name]).whereNull('archived_at').first(),

		async add(facts: ClientFacts, at: string): Promise<string> {
			const id = newId();
			await db('clients').insert({
				id,
				practice_id: scope.practiceId,
				...columns(facts),
				created_at: at,
				archived_at: null
			});
			return id;
		},

		async update(id: string, facts: ClientFacts): Promise<void> {
			await mine().where({ id }).update(columns(facts));
		},

		async setArchived(id: string, at: string | null): Promise<void> {
			await mine().where({ id }).update({ archived_at: at });
		}
	};
}
