import type { SurveyFacts } from '../../register/survey-facts';
import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { PointRow, SurveyRow } from '../db/rows';
import type { Scope } from './scope';

export function surveysRepository(db: Db, scope: Scope) {
	const mine = () => {
		const query = db('surveys').where({ practice_id: scope.practiceId });
		return scope.clientId === undefined ? query : query.andWhere({ client_id: scope.clientId });
	};

	return {
		byId: (id: string): Promise<SurveyRow | undefined> => mine().where({ id }).first(),

		countOfPoint: async (pointId: string): Promise<number> => {
			const row = await mine().where({ point_id: pointId }).count<{ n: number }[]>({ n: '*' }).first();
			return row?.n ?? 0;
		},

		async add(entry: {
			point: Pick<PointRow, 'id' | 'client_id' | 'site_id'>;
			number: string;
			title: string;
			engineerId: string;
			instrumentId: string | null;
			notes: string;
			at: string;
		}): Promise<string> {
			const id = newId();
			await db('surveys').insert({
				id,
				practice_id: scope.practiceId,
				client_id: entry.point.client_id,
				site_id: entry.point.site_id,
				point_id: entry.point.id,
				number: entry.number,
				title: entry.title,
				status: 'open',
				engineer_id: entry.engineerId,
				instrument_id: entry.instrumentId,
				decision_rule: 'guarded',
				notes: entry.notes,
				created_at: entry.at,
				updated_at: entry.at
			});
			return id;
		},

		async update(id: string, facts: SurveyFacts, at: string): Promise<void> {
			await mine()
				.where({ id })
				.update({
					title: facts.title,
					instrument_id: facts.instrumentId === '' ? null : facts.instrumentId,
					decision_rule: facts.decisionRule,
					notes: facts.notes,
					updated_at: at
				});
		},

		async setStatus(id: string, status: SurveyRow['status'], at: string): Promise<void> {
			await mine().where({ id }).update({ status, updated_at: at });
		}
	};
}
