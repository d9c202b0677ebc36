import type { Actor } from '../../../access/access';
import type { PointFacts } from '../../../register/point-facts';
import { AppError, requireFound } from '../../app-error';
import { appendAudit } from '../../audit/audit-log';
import { requirePermission } from '../../auth/require-permission';
import { withTransaction, type Db } from '../../db/database';
import { loadPointPage } from '../../read-models/point-page';
import { practiceDefaults } from '../../read-models/practice-defaults';
import { loadSiteHead } from '../../read-models/site-page';
import { limitSetsRepository } from '../../repositories/limit-sets.repository';
import { pointsRepository } from '../../repositories/points.repository';
import { scopeOf } from '../../repositories/scope';
import type { ServiceDeps } from '../../service-deps';
import { queueReassessment } from '../assessments/queue-reassessment';

/** A limit set of another practice is no limit set. */
async function requireLimitSet(trx: Db, actor: Actor, limitSetId: number | null): Promise<void> {
	if (limitSetId === null) return;
	requireFound(await limitSetsRepository(trx, actor.practiceId).byId(limitSetId), 'limit set');
}

export function pointUseCases({ db, clock, jobs }: ServiceDeps) {
	return {
		async pointPage(actor: Actor, clientId: string, siteId: string, pointId: string) {
			requirePermission(actor, 'register.read');
			return requireFound(await loadPointPage(db, scopeOf(actor), { clientId, siteId, pointId }), 'point');
		},

		/** What the point's form needs besides the point: where it lies, the practice's phase names, limit sets. */
		async pointForm(actor: Actor, clientId: string, siteId: string) {
			requirePermission(actor, 'register.read');
			const scope = scopeOf(actor);
			const site = requireFound(await loadSiteHead(db, scope, clientId, siteId), 'site');
			const limitSets = await limitSetsRepository(db, scope.practiceId).list();
			return { site, limitSets, phaseNames: (await practiceDefaults(db, scope)).phaseNames };
		},

		async createPoint(actor: Actor, clientId: string, siteId: string, facts: PointFacts): Promise<string> {
			requirePermission(actor, 'register.write');
			const now = clock();
			return withTransaction(db, async (trx) => {
				const scope = scopeOf(actor);
				const site = requireFound(await loadSiteHead(trx, scope, clientId, siteId), 'site');
				await requireLimitSet(trx, actor, facts.limitSetId);
				const id = await pointsRepository(trx, scope).add(
					{ id: site.id, client_id: site.client.id },
					facts,
					now.toISOString()
				);
				await appendAudit(
					trx,
					actor,
					{
						action: 'point.created',
						subjectKind: 'point',
						subjectId: id,
						detail: { name: facts.name, site: site.name }
					},
					now
				);
				return id;
			});
		},

		/** The audit keeps the facts before and after: a verdict rests on them. */
		async updatePoint(
			actor: Actor,
			clientId: string,
			siteId: string,
			pointId: string,
			facts: PointFacts
		): Promise<void> {
			requirePermission(actor, 'register.write');
			const now = clock();
			await withTransaction(db, async (trx) => {
				const scope = scopeOf(actor);
				const page = await loadPointPage(trx, scope, { clientId, siteId, pointId });
				const before = requireFound(page, 'point').facts;
				await requireLimitSet(trx, actor, facts.limitSetId);
				await pointsRepository(trx, scope).update(pointId, facts, now.toISOString());
				await queueReassessment(trx, jobs, actor.practiceId, { pointId });
				await appendAudit(
					trx,
					actor,
					{
						action: 'point.changed',
						subjectKind: 'point',
						subjectId: pointId,
						detail: { before, after: facts }
					},
					now
				);
			});
		},

		async setPointArchived(
			actor: Actor,
			clientId: string,
			siteId: string,
			pointId: string,
			archived: boolean
		): Promise<void> {
			requirePermission(actor, 'register.write');
			const now = clock();
			await withTransaction(db, async (trx) => {
				const scope = scopeOf(actor);
				const page = requireFound(await loadPointPage(trx, scope, { clientId, siteId, pointId }), 'point');
				if (archived && page.surveys.some((survey) => survey.status === 'open'))
					throw new AppError('conflict', 'A survey is open at this point. Close the survey first.');
				await pointsRepository(trx, scope).setArchived(pointId, archived ? now.toISOString() : null);
				await appendAudit(
					trx,
					actor,
					{
						action: archived ? 'point.archived' : 'point.restored',
						subjectKind: 'point',
						subjectId: pointId,
						detail: { name: page.facts.name }
					},
					now
				);
			});
		}
	};
}
