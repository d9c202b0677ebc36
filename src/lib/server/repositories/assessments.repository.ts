import type { AssessedPoint, Assessment, VerdictRow } from '../../assessment/assessment';
import type { RecordedCheck } from '../../checks/recorded-check';
import type { MeasuringChain } from '../../uncertainty/measuring-chain';
import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { AssessmentRow, VerdictRow as VerdictRowRow } from '../db/rows';
import type { Scope } from './scope';

/** What went into an assessment, so that it can be made again. */
export interface AssessmentInputRecord {
	point: AssessedPoint;
	siteTimeZone: string;
	limitSet: { id: number; key: string; title: string; sourceSha256: string; reason: string };
	uncertaintyAtOrders: { order: number; voltage_pct: number | null; current_pct: number | null }[];
	/** What the budgets were made from; absent on assessments made before budgets were. */
	measuringChain?: MeasuringChain;
	instrumentId: string | null;
	analysisIds: string[];
	captures: { id: string; name: string; startedAt: string | null; duration_s: number; sha256s: string[] }[];
	/** What the checks of the captures said then; absent on assessments made before there were any. */
	checks?: RecordedCheck[];
}

export interface StoredAssessment {
	row: AssessmentRow;
	input: AssessmentInputRecord;
	assessment: Assessment;
}

const CHUNK = 100;

/** Result as it is stored: what the rows' budgets were made from stands beside it, one entry a row, null = none. */
type StoredResult = Omit<Assessment, 'rows'> & { rowFigures?: (NonNullable<VerdictRow['figure']> | null)[] };

function toRowRow(
	row: VerdictRow,
	ids: { assessment_id: string; practice_id: string }
): Omit<VerdictRowRow, 'id'> {
	return {
		...ids,
		table_key: row.tableKey,
		quantity: row.quantity,
		harmonic_order: row.item.kind === 'order' ? row.item.order : null,
		index_name: row.item.kind === 'total' ? row.item.index : null,
		phase: row.phase,
		statistic_key: row.statisticKey,
		basis: row.basis,
		value_pct: row.value_pct,
		limit_pct: row.limit_pct,
		limit_row_id: row.limitRowId,
		comparator: row.comparator,
		utilisation: row.utilisation,
		uncertainty_pct: row.uncertainty_pct,
		evidence: row.evidence,
		coverage: row.coverage,
		interval_count: row.intervalCount,
		flagged_count: row.flaggedCount,
		worst_period: row.worstPeriod,
		verdict: row.verdict,
		reason: row.reason
	};
}

function fromRowRow(row: VerdictRowRow): VerdictRow {
	return {
		tableKey: row.table_key,
		quantity: row.quantity,
		item:
			row.harmonic_order === null
				? { kind: 'total', index: row.index_name ?? 'THD' }
				: { kind: 'order', order: row.harmonic_order },
		phase: row.phase,
		statisticKey: row.statistic_key,
		basis: row.basis,
		value_pct: row.value_pct,
		limit_pct: row.limit_pct,
		limitRowId: row.limit_row_id,
		comparator: row.comparator,
		utilisation: row.utilisation,
		uncertainty_pct: row.uncertainty_pct,
		evidence: row.evidence,
		coverage: row.coverage,
		intervalCount: row.interval_count,
		flaggedCount: row.flagged_count,
		worstPeriod: row.worst_period,
		verdict: row.verdict,
		reason: row.reason
	};
}

/** Assessments with their rows. One of a survey is current; earlier ones stay for the reports that rest on them. */
export function assessmentsRepository(db: Db, scope: Scope) {
	const own = () => {
		const query = db('assessments').where({ practice_id: scope.practiceId });
		return scope.clientId === undefined ? query : query.andWhere({ client_id: scope.clientId });
	};

	async function withRows(row: AssessmentRow | undefined): Promise<StoredAssessment | null> {
		if (row === undefined) return null;
		const rows: VerdictRowRow[] = await db('verdict_rows')
			.where({ practice_id: scope.practiceId, assessment_id: row.id })
			.orderBy('id');
		const { rowFigures = [], ...result } = JSON.parse(row.result_json) as StoredResult;
		return {
			row,
			input: JSON.parse(row.input_json) as AssessmentInputRecord,
			assessment: {
				...result,
				rows: rows.map((one, i) => {
					const figure = rowFigures[i];
					return figure ? { ...fromRowRow(one), figure } : fromRowRow(one);
				})
			}
		};
	}

	return {
		currentOf: async (surveyId: string): Promise<StoredAssessment | null> =>
			withRows(await own().andWhere({ survey_id: surveyId, is_current: 1 }).first()),

		byId: async (id: string): Promise<StoredAssessment | null> =>
			withRows(await own().andWhere({ id }).first()),

		/** Id and instant of the survey's current assessment, without its rows. */
		currentIdOf: async (surveyId: string): Promise<string | null> =>
			(await own().andWhere({ survey_id: surveyId, is_current: 1 }).first('id'))?.id ?? null,

		/** The current assessment was made again with the same outcome: it stands as of now. */
		async confirmCurrent(id: string, at: string): Promise<void> {
			await own().andWhere({ id }).update({ created_at: at });
		},

		/** Nothing is current any more: the captures that the verdict rested on are gone. */
		async retireCurrent(surveyId: string): Promise<void> {
			await own().andWhere({ survey_id: surveyId, is_current: 1 }).update({ is_current: 0 });
		},

		async addCurrent(entry: {
			clientId: string;
			surveyId: string;
			engineVersion: string;
			input: AssessmentInputRecord;
			assessment: Assessment;
			createdBy: string | null;
			at: string;
		}): Promise<string> {
			const id = newId();
			const { rows, ...result } = entry.assessment;
			await own().andWhere({ survey_id: entry.surveyId, is_current: 1 }).update({ is_current: 0 });
			await db('assessments').insert({
				id,
				practice_id: scope.practiceId,
				client_id: entry.clientId,
				survey_id: entry.surveyId,
				limit_set_id: entry.assessment.limitSetId,
				verdict: result.verdict,
				evidence: result.evidence,
				advisory: result.advisory ? 1 : 0,
				engine_version: entry.engineVersion,
				input_json: JSON.stringify(entry.input),
				result_json: JSON.stringify({
					...result,
					rowFigures: rows.map((row) => row.figure ?? null)
				} satisfies StoredResult),
				is_current: 1,
				created_by: entry.createdBy,
				created_at: entry.at
			});
			const ids = { assessment_id: id, practice_id: scope.practiceId };
			for (let from = 0; from < rows.length; from += CHUNK)
				await db('verdict_rows').insert(rows.slice(from, from + CHUNK).map((row) => toRowRow(row, ids)));
			return id;
		}
	};
}
