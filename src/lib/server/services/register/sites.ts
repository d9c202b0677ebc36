import type { Actor } from '../../../access/access';
import type { SiteFacts } from '../../../register/site-facts';
import { requireFound } from '../../app-error';
import { appendAudit } from '../../audit/audit-log';
import { requirePermission } from '../../auth/require-permission';
import { withTransaction } from '../../db/database';
import { loadSitePage } from '../../read-models/site-page';
import { clientsRepository } from '../../repositories/clients.repository';
import { practiceDefaults } from '../../read-models/practice-defaults';
import { scopeOf } from '../../repositories/scope';
import { sitesRepository } from '../../repositories/sites.repository';
import type { ServiceDeps } from '../../service-deps';

export function siteUseCases({ db, clock }: ServiceDeps) {
	return {
		async sitePage(actor: Actor, clientId: string, siteId: string) {
			requirePermission(actor, 'register.read');
			return requireFound(await loadSitePage(db, scopeOf(actor), clientId, siteId), 'site');
		},

		/** The client a new site is for, and the zone to suggest: that of its latest site, else the practice's. */
		async newSite(actor: Actor, clientId: string) {
			requirePermission(actor, 'register.write');
			const scope = scopeOf(actor);
			const client = requireFound(await clientsRepository(db, scope).byId(clientId), 'client');
			const sites = await sitesRepository(db, scope).listOfClient(clientId);
			const latest = sites.toSorted((a, b) => b.created_at.localeCompare(a.created_at))[0];
			const timeZone = latest?.time_zone ?? (await practiceDefaults(db, scope)).timeZone;
			return { client: { id: client.id, name: client.name }, timeZone };
		},

		async createSite(actor: Actor, clientId: string, facts: SiteFacts): Promise<string> {
			requirePermission(actor, 'register.write');
			const now = clock();
			return withTransaction(db, async (trx) => {
				const scope = scopeOf(actor);
				const client = requireFound(await clientsRepository(trx, scope).byId(clientId), 'client');
				const id = await sitesRepository(trx, scope).add(client.id, facts, now.toISOString());
				await appendAudit(
					trx,
					actor,
					{
						action: 'site.created',
						subjectKind: 'site',
						subjectId: id,
						detail: { name: facts.name, client: client.name }
					},
					now
				);
				return id;
			});
		},

		async updateSite(actor: Actor, clientId: string, siteId: string, facts: SiteFacts): Promise<void> {
			requirePermission(actor, 'register.write');
			await withTransaction(db, async (trx) => {
				const sites = sitesRepository(trx, scopeOf(actor));
				const before = requireFound(await sites.ofClient(clientId, siteId), 'site');
				await sites.update(siteId, facts);
				await appendAudit(
					trx,
					actor,
					{
						action: 'site.changed',
						subjectKind: 'site',
						subjectId: siteId,
						detail: { name: facts.name, timeZone: facts.timeZone, timeZoneBefore: before.time_zone }
					},
					clock()
				);
			});
		},

		async setSiteArchived(actor: Actor, clientId: string, siteId: string, archived: boolean): Promise<void> {
			requirePermission(actor, 'register.write');
			const now = clock();
			await withTransaction(db, async (trx) => {
				const sites = sitesRepository(trx, scopeOf(actor));
				const site = requireFound(await sites.ofClient(clientId, siteId), 'site');
				await sites.setArchived(siteId, archived ? now.toISOString() : null);
				await appendAudit(
					trx,
					actor,
					{
						action: archived ? 'site.archived' : 'site.restored',
						subjectKind: 'site',
						subjectId: siteId,
						detail: { name: site.name }
					},
					now
				);
			});
		}
	};
}
