import type { Actor } from '../../../access/access';
import type { ClientFacts } from '../../../register/client-facts';
import { AppError, requireFound } from '../../app-error';
import { appendAudit } from '../../audit/audit-log';
import { requirePermission } from '../../auth/require-permission';
import { withTransaction, type Db } from '../../db/database';
import { listClients, type ClientSort } from '../../read-models/client-list';
import { loadClientPage } from '../../read-models/client-page';
import type { ListQuery } from '../../read-models/list-query';
import { clientsRepository } from '../../repositories/clients.repository';
import { scopeOf } from '../../repositories/scope';
import type { ServiceDeps } from '../../service-deps';

/** Two clients of one name cannot be told apart on a report. */
async function refuseTwin(trx: Db, actor: Actor, name: string, ownId: string | null): Promise<void> {
	const twin = await clientsRepository(trx, scopeOf(actor)).byName(name);
	if (twin && twin.id !== ownId)
		throw new AppError(
			'conflict',
			`There is already a client named “${twin.name}”. Give this one another name.`
		);
}

export function clientUseCases({ db, clock }: ServiceDeps) {
	return {
		async listClients(actor: Actor, query: ListQuery<ClientSort> & { archived: boolean }) {
			requirePermission(actor, 'register.read');
			return listClients(db, scopeOf(actor), query);
		},

		async clientPage(actor: Actor, clientId: string) {
			requirePermission(actor, 'register.read');
			return requireFound(await loadClientPage(db, scopeOf(actor), clientId), 'client');
		},

		async createClient(actor: Actor, facts: ClientFacts): Promise<string> {
			requirePermission(actor, 'register.write');
			const now = clock();
			return withTransaction(db, async (trx) => {
				await refuseTwin(trx, actor, facts.name, null);
				const id = await clientsRepository(trx, scopeOf(actor)).add(facts, now.toISOString());
				await appendAudit(
					trx,
					actor,
					{ action: 'client.created', subjectKind: 'client', subjectId: id, detail: { name: facts.name } },
					now
				);
				return id;
			});
		},

		async updateClient(actor: Actor, clientId: string, facts: ClientFacts): Promise<void> {
			requirePermission(actor, 'register.write');
			await withTransaction(db, async (trx) => {
				const clients = clientsRepository(trx, scopeOf(actor));
				const before = requireFound(await clients.byId(clientId), 'client');
				if (before.archived_at === null) await refuseTwin(trx, actor, facts.name, clientId);
				await clients.update(clientId, facts);
				await appendAudit(
					trx,
					actor,
					{
						action: 'client.changed',
						subjectKind: 'client',
						subjectId: clientId,
						detail: { name: facts.name, before: before.name }
					},
					clock()
				);
			});
		},

		/** An archived client leaves the lists; its surveys and reports stay where they are. */
		async setClientArchived(actor: Actor, clientId: string, archived: boolean): Promise<void> {
			requirePermission(actor, 'register.write');
			const now = clock();
			await withTransaction(db, async (trx) => {
				const clients = clientsRepository(trx, scopeOf(actor));
				const client = requireFound(await clients.byId(clientId), 'client');
				if (!archived) await refuseTwin(trx, actor, client.name, clientId);
				await clients.setArchived(clientId, archived ? now.toISOString() : null);
				await appendAudit(
					trx,
					actor,
					{
						action: archived ? 'client.archived' : 'client.restored',
						subjectKind: 'client',
						subjectId: clientId,
						detail: { name: client.name }
					},
					now
				);
			});
		}
	};
}
