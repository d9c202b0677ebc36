import type { Actor } from '../../access/access';
import type { ActionFacts } from '../../report/action-facts';
import { suggestActions, type SuggestedAction } from '../../report/suggest-actions';
import { AppError, requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requirePermission } from '../auth/require-permission';
import { withTransaction, type Db } from '../db/database';
import type { ActionRow, SurveyRow } from '../db/rows';
import { actionsRepository } from '../repositories/actions.repository';
import { assessmentsRepository } from '../repositories/assessments.repository';
import { scopeOf } from '../repositories/scope';
import { surveysRepository } from '../repositories/surveys.repository';
import type { ServiceDeps } from '../service-deps';

export interface ActionItem extends ActionFacts {
	id: string;
	status: ActionRow['status'];
	/** Seen by the client: it may be added to, not taken back. */
	published: boolean;
	/** What the client wrote when reporting it done. */
	doneNote: string;
}

function toItem(row: ActionRow): ActionItem {
	return {
		id: row.id,
		title: row.title,
		detail: row.detail,
		priority: row.priority,
		side: row.side,
		responsible: row.responsible,
		dueOn: row.due_on ?? '',
		status: row.status,
		published: row.published_at !== null,
		doneNote: row.done_note
	};
}

/** Recommended actions of a survey, and what its assessment suggests. */
export function createActionsService({ db, clock }: ServiceDeps) {
	async function change<T>(
		actor: Actor,
		surveyId: string,
		action: string,
		work: (trx: Db, survey: SurveyRow) => Promise<{ id: string; detail: Record<string, unknown>; value: T }>
	): Promise<T> {
		const now = clock();
		return withTransaction(db, async (trx) => {
			const survey = requireFound(await surveysRepository(trx, scopeOf(actor)).byId(surveyId), 'survey');
			const done = await work(trx, survey);
			await appendAudit(
				trx,
				actor,
				{ action, subjectKind: 'action', subjectId: done.id, detail: done.detail },
				now
			);
			return done.value;
		});
	}

	async function editable(trx: Db, actor: Actor, surveyId: string, id: string): Promise<ActionRow> {
		const row = requireFound(await actionsRepository(trx, scopeOf(actor)).byId(surveyId, id), 'action');
		if (row.published_at !== null)
			throw new AppError(
				'conflict',
				'The client has this action already. Add a further one, and issue a new revision of the report.'
			);
		return row;
	}

	async function published(
		actions: ReturnType<typeof actionsRepository>,
		surveyId: string,
		id: string
	): Promise<ActionRow> {
		const row = requireFound(await actions.byId(surveyId, id), 'action');
		if (row.published_at === null)
			throw new AppError(
				'conflict',
				'The client does not have this action yet: it goes out with the report.'
			);
		return row;
	}

	return {
		/** Actions in their order, and suggestions that are not among them yet. */
		async page(
			actor: Actor,
			surveyId: string
		): Promise<{ actions: ActionItem[]; suggestions: SuggestedAction[]; assessed: boolean }> {
			requirePermission(actor, 'assessment.read');
			const scope = scopeOf(actor);
			requireFound(await surveysRepository(db, scope).byId(surveyId), 'survey');
			const rows = await actionsRepository(db, scope).ofSurvey(surveyId);
			const stored = await assessmentsRepository(db, scope).currentOf(surveyId);
			const titles = new Set(rows.map((row) => row.title));
			return {
				actions: rows.map(toItem),
				suggestions: stored ? suggestActions(stored.assessment).filter((one) => !titles.has(one.title)) : [],
				assessed: stored !== null
			};
		},

		async add(actor: Actor, surveyId: string, facts: ActionFacts): Promise<string> {
			requirePermission(actor, 'assessment.write');
			return change(actor, surveyId, 'action.added', async (trx, survey) => {
				const id = await actionsRepository(trx, scopeOf(actor)).add(survey, facts, clock().toISOString());
				return { id, detail: { title: facts.title }, value: id };
			});
		},

		/** Takes a suggestion over as it is offered now; it can be edited afterwards. */
		async addSuggested(actor: Actor, surveyId: string, key: string): Promise<string> {
			requirePermission(actor, 'assessment.write');
			const stored = await assessmentsRepository(db, scopeOf(actor)).currentOf(surveyId);
			const offered = stored ? suggestActions(stored.assessment).find((one) => one.key === key) : undefined;
			const { title, detail, priority, side } = requireFound(offered, 'suggestion');
			return change(actor, surveyId, 'action.added', async (trx, survey) => {
				const facts = { title, detail, priority, side, responsible: '', dueOn: '' };
				const id = await actionsRepository(trx, scopeOf(actor)).add(survey, facts, clock().toISOString());
				return { id, detail: { title, suggestion: key }, value: id };
			});
		},

		async update(actor: Actor, surveyId: string, id: string, facts: ActionFacts): Promise<void> {
			requirePermission(actor, 'assessment.write');
			await change(actor, surveyId, 'action.changed', async (trx) => {
				const before = await editable(trx, actor, surveyId, id);
				await actionsRepository(trx, scopeOf(actor)).update(id, facts);
				return { id, detail: { before: before.title, after: facts.title }, value: undefined };
			});
		},

		async remove(actor: Actor, surveyId: string, id: string): Promise<void> {
			requirePermission(actor, 'assessment.write');
			await change(actor, surveyId, 'action.removed', async (trx) => {
				const before = await editable(trx, actor, surveyId, id);
				await actionsRepository(trx, scopeOf(actor)).remove(id);
				return { id, detail: { title: before.title }, value: undefined };
			});
		},

		async move(actor: Actor, surveyId: string, id: string, by: 'up' | 'down'): Promise<void> {
			requirePermission(actor, 'assessment.write');
			await change(actor, surveyId, 'action.moved', async (trx) => {
				const actions = actionsRepository(trx, scopeOf(actor));
				const ids = (await actions.ofSurvey(surveyId)).map((row) => row.id);
				const at = ids.indexOf(id);
				if (at < 0) requireFound(null, 'action');
				const to = at + (by === 'up' ? -1 : 1);
				if (to >= 0 && to < ids.length) ids.splice(to, 0, ...ids.splice(at, 1));
				await actions.order(surveyId, ids);
				return { id, detail: { by }, value: undefined };
			});
		},

		/** Closes an action that the client has: reported done by them, or done by the practice itself. */
		async confirm(actor: Actor, surveyId: string, id: string): Promise<void> {
			requirePermission(actor, 'assessment.write');
			await change(actor, surveyId, 'action.confirmed', async (trx) => {
				const actions = actionsRepository(trx, scopeOf(actor));
				const row = await published(actions, surveyId, id);
				await actions.settle(id, { status: 'confirmed', by: actor.userId, at: clock().toISOString() });
				return { id, detail: { title: row.title, was: row.status }, value: undefined };
			});
		},

		/** Puts an action back to open: what was reported done was not, or not all of it. */
		async reopen(actor: Actor, surveyId: string, id: string): Promise<void> {
			requirePermission(actor, 'assessment.write');
			await change(actor, surveyId, 'action.reopened', async (trx) => {
				const actions = actionsRepository(trx, scopeOf(actor));
				const row = await published(actions, surveyId, id);
				await actions.settle(id, { status: 'open', by: null, at: null });
				return { id, detail: { title: row.title, was: row.status }, value: undefined };
			});
		}
	};
}
