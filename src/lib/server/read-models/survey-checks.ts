import { nominalVoltageOn_V } from '../../assessment/judged-phases';
import { blockedLevels, type JudgedCapture } from '../../checks/blocked-levels';
import type { CaptureSubject, CheckedPoint, OrderLimits } from '../../checks/capture-subject';
import { checkCapture } from '../../checks/check-capture';
import { withOverrules, type StandingCheck } from '../../checks/overrule';
import { recordChecks, type RecordedCheck } from '../../checks/recorded-check';
import { checkDays, checkSequence } from '../../checks/survey-checks';
import { MAX_ORDER } from '../../harmonics/intervals';
import { nominalVoltagesByPhase_V } from '../../harmonics/nominal-voltages';
import type { BlockedLevels } from '../../assessment/assessment';
import type { LimitSet } from '../../limits/limit-set';
import { selectTables } from '../../limits/select-table';
import { toAssessedPoint } from '../../register/assessed-point';
import { parseSummary } from '../analysis/analysis-summary';
import { readingBasis } from '../analysis/reading-basis';
import { parseSettings } from '../analysis/capture-settings';
import type { Db } from '../db/database';
import type { AnalysisRow, CaptureRow } from '../db/rows';
import { analysesRepository } from '../repositories/analyses.repository';
import { calibrationsRepository, toCertificateSpan } from '../repositories/calibrations.repository';
import { capturesRepository } from '../repositories/captures.repository';
import { checkOverrulesRepository } from '../repositories/check-overrules.repository';
import { instrumentsRepository } from '../repositories/instruments.repository';
import type { Scope } from '../repositories/scope';
import { captureSurvey, type CaptureSurvey, type StoredFacts } from './capture-list';
import { limitSetOfPoint } from './point-limit-set';

/** Every check of a survey's analysed captures, with what was said against each. */
export interface SurveyChecks {
	/** In the order of upload; those without an analysis are left out. */
	captures: { id: string; name: string; checks: StandingCheck[] }[];
	/** Checks of the captures together. */
	together: StandingCheck[];
	/** What no verdict may be given on. */
	blocked: BlockedLevels[];
}

function orderLimits(
	set: LimitSet | null,
	survey: CaptureSurvey,
	quantity: 'voltage' | 'current'
): OrderLimits | null {
	const point = toAssessedPoint(survey.facts);
	const basis = readingBasis(set, point, quantity, MAX_ORDER);
	if (basis.limits_pct === null) return null;
	return {
		limits_pct: basis.limits_pct,
		words: basis.words,
		base: (phase) => {
			if (basis.basis === 'demand-current') return point.demandCurrent_A;
			return basis.basis === 'fundamental' ? null : nominalVoltageOn_V(point, phase);
		}
	};
}

function checkedPoint(survey: CaptureSurvey, limitSet: LimitSet | null): CheckedPoint {
	const { facts, timeZone } = survey;
	return {
		nominalVoltages_V: nominalVoltagesByPhase_V(facts.system, facts.nominalVoltage_V),
		demandCurrent_A: toAssessedPoint(facts).demandCurrent_A,
		phaseNames: facts.phaseNames,
		timeZone,
		limits: {
			voltage: orderLimits(limitSet, survey, 'voltage'),
			current: orderLimits(limitSet, survey, 'current')
		}
	};
}

/** Instruments by id with their certificates. */
async function instrumentsById(db: Db, scope: Scope, ids: readonly string[]) {
	const found = new Map<string, NonNullable<CaptureSubject['instrument']>>();
	const certificates = await calibrationsRepository(db, scope).ofInstruments(ids);
	for (const id of ids) {
		const row = await instrumentsRepository(db, scope).byId(id);
		if (!row) continue;
		found.set(id, {
			name: row.name,
			certificates: certificates.filter((one) => one.instrument_id === id).map(toCertificateSpan)
		});
	}
	return found;
}

function subjectOf(
	capture: CaptureRow,
	analysis: AnalysisRow,
	survey: CaptureSurvey,
	instrument: CaptureSubject['instrument']
): CaptureSubject {
	const summary = parseSummary(analysis.summary_json);
	const facts = JSON.parse(capture.facts_json) as StoredFacts;
	return {
		captureId: capture.id,
		name: capture.name,
		kind: summary.kind,
		evidence: summary.evidence ?? null,
		remarks: summary.quality,
		readerRemarks: facts.remarks,
		nominalFrequency_Hz: survey.facts.nominalFrequency_Hz,
		statedStart: facts.start,
		start_ms: Date.parse(capture.started_at ?? capture.created_at),
		duration_s: capture.duration_s,
		uploaded_ms: Date.parse(capture.created_at),
		instrument
	};
}

/** The conductors that a capture's channels or columns were mapped to. */
function judgedCapture(capture: CaptureRow): JudgedCapture {
	const settings = capture.mappings_json === null ? null : parseSettings(capture.mappings_json);
	const channels =
		settings === null
			? []
			: settings.kind === 'waveform'
				? settings.channels
				: firstColumns(settings.columns).map((column) => ({ ...column, channelIndex: column.seriesIndex }));
	return { captureId: capture.id, name: capture.name, channels };
}

/** One column a conductor: the one that its checks are named after. */
function firstColumns<C extends { quantity: string; phase: string }>(columns: readonly C[]): C[] {
	return columns.filter(
		(one, at) =>
			columns.findIndex(({ quantity, phase }) => quantity === one.quantity && phase === one.phase) === at
	);
}

/** returns  null when the survey is not of this practice */
export async function surveyChecks(db: Db, scope: Scope, surveyId: string): Promise<SurveyChecks | null> {
	const survey = await captureSurvey(db, scope, surveyId);
	if (!survey) return null;
	const chosen = await limitSetOfPoint(db, scope, survey.facts, survey.timeZone);
	const point = checkedPoint(survey, chosen?.limitSet ?? null);
	const analyses = await analysesRepository(db, scope).currentOfSurvey(surveyId);
	const rows = await capturesRepository(db, scope).ofSurvey(surveyId);
	const surveyRow = await db('surveys')
		.where({ practice_id: scope.practiceId, id: surveyId })
		.first('instrument_id');
	const instrumentOf = (capture: CaptureRow) => capture.instrument_id ?? surveyRow?.instrument_id ?? null;
	const instruments = await instrumentsById(db, scope, [
		...new Set(rows.map(instrumentOf).filter((id) => id !== null))
	]);
	const analysed = rows.flatMap((capture) => {
		const analysis = analyses.find((one) => one.capture_id === capture.id);
		if (!analysis) return [];
		const instrument = instruments.get(instrumentOf(capture) ?? '') ?? null;
		return [{ capture, subject: subjectOf(capture, analysis, survey, instrument) }];
	});
	const subjects = analysed.map(({ subject }) => subject);
	const rules = chosen
		? selectTables(chosen.limitSet, survey.facts.nominalVoltage_V / 1000).flatMap(
				({ table }) => table.statistics
			)
		: [];
	const overrules = await checkOverrulesRepository(db, scope).ofSurvey(surveyId);
	const captures = subjects.map((subject) => ({
		id: subject.captureId,
		name: subject.name,
		checks: withOverrules(
			checkCapture(subject, point).map((check) => ({ captureId: subject.captureId, check })),
			overrules
		)
	}));
	const together = withOverrules(
		[...checkSequence(subjects, point), ...checkDays(subjects, rules, point)].map((check) => ({
			captureId: null,
			check
		})),
		overrules
	);
	return {
		captures,
		together,
		blocked: blockedLevels(
			[...captures.flatMap(({ checks }) => checks), ...together],
			analysed.map(({ capture }) => judgedCapture(capture))
		)
	};
}

/** What an assessment keeps of them. */
export function recordedChecks({ captures, together }: SurveyChecks): RecordedCheck[] {
	const names = new Map(captures.map(({ id, name }) => [id, name]));
	return recordChecks(
		[...captures.flatMap(({ checks }) => checks), ...together],
		(id) => names.get(id) ?? ''
	);
}
