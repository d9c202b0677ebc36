import type { Overrule } from '../../checks/overrule';
import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { CheckOverruleRow } from '../db/rows';
import type { Scope } from './scope';

export type NewOverrule = Pick<
	CheckOverruleRow,
	| 'survey_id'
	| 'capture_id'
	| 'code'
	| 'channel_index'
	| 'sentence'
	| 'reason'
	| 'overruled_by'
	| 'created_at'
>;

type NamedRow = CheckOverruleRow & { by_name: string; back_name: string | null };

function toOverrule(row: NamedRow): Overrule {
	return {
		id: row.id,
		captureId: row.capture_id,
		code: row.code,
		channelIndex: row.channel_index,
		sentence: row.sentence,
		reason: row.reason,
		by: row.by_name,
		at: row.created_at,
		takenBackBy: row.back_name,
		takenBackAt: row.withdrawn_at
	};
}

/** Words against checks, of one practice. None is ever deleted: taking one back is an instant of its own. */
export function checkOverrulesRepository(db: Db, scope: Pick<Scope, 'practiceId'>) {
	const own = () => db('check_overrules').where('check_overrules.practice_id', scope.practiceId);

	return {
		async ofSurvey(surveyId: string): Promise<Overrule[]> {
			const rows: NamedRow[] = await own()
				.where('check_overrules.survey_id', surveyId)
				.join('users as by', 'by.id', 'check_overrules.overruled_by')
				.leftJoin('users as back', 'back.id', 'check_overrules.withdrawn_by')
				.orderBy('check_overrules.created_at', 'desc')
				.orderBy('check_overrules.id')
				.select('check_overrules.*', { by_name: 'by.name', back_name: 'back.name' });
			return rows.map(toOverrule);
		},
		async add(overrule: NewOverrule): Promise<string> {
			const id = newId();
			await db('check_overrules').insert({
				id,
				practice_id: scope.practiceId,
				...overrule,
				withdrawn_at: null,
				withdrawn_by: null
			});
			return id;
		},
		/** returns  false when it was taken back already */
		async takeBack(id: string, userId: string, at: string): Promise<boolean> {
			const changed = await own()
				.where('check_overrules.id', id)
				.whereNull('withdrawn_at')
				.update({ withdrawn_at: at, withdrawn_by: userId });
			return changed === 1;
		}
	};
}
