import type { ActionFacts } from '../../report/action-facts';
import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { ActionRow, SurveyRow } from '../db/rows';
import type { Scope } from './scope';

function columns(facts: ActionFacts) {
	return {
		title: facts.title,
		detail: facts.detail,
		priority: facts.priority,
		side: facts.side,
		responsible: facts.responsible,
		due_on: facts.dueOn === '' ? null : facts.dueOn
	};
}

/** Recommended actions of surveys, in their order. The client sees one from the issue of the report that carries it. */
export function actionsRepository(db: Db, scope: Scope) {
	const own = () => {
		const query = db('actions').where({ practice_id: scope.practiceId });
		return scope.clientId === undefined ? query : query.andWhere({ client_id: scope.clientId });
	};
	const ofSurvey = (surveyId: string): Promise<ActionRow[]> =>
		own().andWhere({ survey_id: surveyId }).orderBy(['position', 'created_at']);

	return {
		ofSurvey,
		byId: (surveyId: string, id: string): Promise<ActionRow | undefined> =>
			own().andWhere({ survey_id: surveyId, id }).first(),

		async add(survey: SurveyRow, facts: ActionFacts, at: string): Promise<string> {
			const id = newId();
			const last = (await ofSurvey(survey.id)).at(-1);
			await db('actions').insert({
				id,
				practice_id: scope.practiceId,
				client_id: survey.client_id,
				site_id: survey.site_id,
				survey_id: survey.id,
				position: (last?.position ?? 0) + 1,
				...columns(facts),
				status: 'open',
				created_at: at
			});
			return id;
		},

		async update(id: string, facts: ActionFacts): Promise<void> {
			await own().andWhere({ id }).update(columns(facts));
		},

		async remove(id: string): Promise<void> {
			await own().andWhere({ id }).delete();
		},

		/** Numbers the actions of a survey anew, in the order given. */
		async order(surveyId: string, ids: readonly string[]): Promise<void> {
			for (const [i, id] of ids.entries())
				await own()
					.andWhere({ survey_id: surveyId, id })
					.update({ position: i + 1 });
		},

		async settle(
			id: string,
			to: { status: 'confirmed' | 'open'; by: string | null; at: string | null }
		): Promise<void> {
			await own().andWhere({ id }).update({ status: to.status, confirmed_by: to.by, confirmed_at: to.at });
		},

		async publish(surveyId: string, at: string): Promise<void> {
			await own().andWhere({ survey_id: surveyId }).whereNull('published_at').update({ published_at: at });
		}
	};
}
