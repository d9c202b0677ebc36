import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { ReportRevisionRow, ReportRow, SurveyRow } from '../db/rows';
import type { Scope } from './scope';

export type RevisionChange = Partial<
	Pick<
		ReportRevisionRow,
		| 'status'
		| 'assessment_id'
		| 'summary'
		| 'findings_json'
		| 'prepared_by'
		| 'sent_for_check_at'
		| 'checked_by'
		| 'check_note'
		| 'returned_at'
		| 'issued_at'
		| 'withdrawn_at'
		| 'withdrawn_reason'
		| 'model_json'
		| 'model_sha256'
		| 'data_sha256'
		| 'pdf_sha256'
		| 'pdf_pages'
		| 'edition'
		| 'updated_at'
	>
>;

/** Reports and their revisions. A survey has one report; its corrections are revisions of it. */
export function reportsRepository(db: Db, scope: Scope) {
	const limit = <T extends { practice_id: string; client_id: string }>(
		table: 'reports' | 'report_revisions'
	) => {
		const query = db<T>(table).where('practice_id', scope.practiceId);
		return scope.clientId === undefined ? query : query.andWhere('client_id', scope.clientId);
	};
	const reports = () => limit<ReportRow>('reports');
	const revisions = () => limit<ReportRevisionRow>('report_revisions');

	return {
		ofSurvey: async (surveyId: string): Promise<ReportRow | undefined> =>
			(await reports().andWhere('survey_id', surveyId).orderBy('created_at')).at(0),

		byId: async (id: string): Promise<ReportRow | undefined> => (await reports().andWhere('id', id)).at(0),

		revision: async (id: string): Promise<ReportRevisionRow | undefined> =>
			(await revisions().andWhere('id', id)).at(0),

		/** Oldest first. */
		revisionsOf: async (reportId: string): Promise<ReportRevisionRow[]> =>
			revisions().andWhere('report_id', reportId).orderBy('created_at'),

		async add(survey: SurveyRow, title: string, createdBy: string, at: string): Promise<string> {
			const id = newId();
			await db('reports').insert({
				id,
				practice_id: scope.practiceId,
				client_id: survey.client_id,
				site_id: survey.site_id,
				survey_id: survey.id,
				number: null,
				title,
				created_by: createdBy,
				created_at: at
			});
			return id;
		},

		async addRevision(
			entry: Pick<
				ReportRevisionRow,
				| 'client_id'
				| 'report_id'
				| 'revision'
				| 'assessment_id'
				| 'reason'
				| 'summary'
				| 'findings_json'
				| 'prepared_by'
			>,
			at: string
		): Promise<string> {
			const id = newId();
			await db('report_revisions').insert({
				id,
				practice_id: scope.practiceId,
				...entry,
				status: 'draft',
				created_at: at,
				updated_at: at
			});
			return id;
		},

		async setTitle(reportId: string, title: string): Promise<void> {
			await reports().andWhere('id', reportId).update({ title });
		},

		async setNumber(reportId: string, number: string): Promise<void> {
			await reports().andWhere('id', reportId).whereNull('number').update({ number });
		},

		async change(revisionId: string, change: RevisionChange): Promise<void> {
			await revisions().andWhere('id', revisionId).update(change);
		}
	};
}
