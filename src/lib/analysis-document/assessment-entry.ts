import { assess } from '../assessment/assess';
import type { AssessedPoint, Assessment, UncertaintyStatement, VerdictRow } from '../assessment/assessment';
import { chainUncertainty } from '../assessment/uncertainty-statement';
import type { IntervalSeries } from '../harmonics/intervals';
import type { LimitSet } from '../limits/limit-set';
import { toAssessedPoint } from '../register/assessed-point';
import { chainOf } from '../uncertainty/survey-chain';
import type { MeasuredPointFacts } from './analysis-request';
import type { AssessmentEntry } from './document-schema';
import type { PointFile } from './point-file';
import { rounded } from './rounded';

/** The limits that a point is judged by. */
export interface ChosenLimits {
	limitSet: LimitSet;
	/** Why this limit set. */
	reason: string;
}

/** The facts that choose tables and rows, and a sentence for each that was not stated. */
export function assessedPointOf(
	facts: PointFile,
	measured: Pick<MeasuredPointFacts, 'system' | 'nominalFrequency_Hz'>
): { point: AssessedPoint; assumptions: string[] } {
	const assumptions: string[] = [];
	if (facts.kind === null)
		assumptions.push('The point file does not state "kind"; a point of common coupling was taken.');
	if (facts.system === null)
		assumptions.push(`The point file does not state "system"; the channels point to ${measured.system}.`);
	if (facts.nominalFrequency_Hz === null)
		assumptions.push(
			`The point file does not state "nominalFrequency_Hz"; ${measured.nominalFrequency_Hz} Hz was taken.`
		);
	for (const key of facts.unknownKeys)
		assumptions.push(`"${key}" in the point file means nothing here and was left alone.`);
	const point = toAssessedPoint({
		kind: facts.kind ?? 'pcc',
		system: facts.system ?? measured.system,
		nominalVoltage_V: facts.nominalVoltage_V,
		nominalFrequency_Hz: facts.nominalFrequency_Hz ?? measured.nominalFrequency_Hz,
		demand: facts.demand ?? entered(facts.demandCurrent_A, 'entered', 'demandCurrent_A'),
		shortCircuit:
			facts.shortCircuit ?? entered(facts.shortCircuitCurrent_A, 'current', 'shortCircuitCurrent_A')
	});
	return { point, assumptions };
}

function entered<Method extends string, Key extends string>(
	current_A: number | null,
	method: Method,
	key: Key
) {
	if (current_A === null) return { method: 'unknown' as const };
	return { method, [key]: current_A, source: '' } as { method: Method; source: string } & Record<Key, number>;
}

function uncertaintyOf(facts: PointFile, nominalFrequency_Hz: 50 | 60): UncertaintyStatement {
	const statement = chainUncertainty(
		chainOf({
			nominalFrequency_Hz,
			instrumentClass: facts.instrumentClass,
			voltageSensorError_pct: facts.voltageSensorError_pct,
			currentSensorError_pct: facts.currentSensorError_pct,
			voltageTransformerPrimary_V: facts.voltageTransformer?.primary ?? null,
			currentTransformerPrimary_A: facts.currentTransformer?.primary ?? null
		})
	);
	if (facts.instrumentClass !== null) return statement;
	return {
		...statement,
		text: `The point file does not state "instrumentClass"; class II is assumed. ${statement.text}`
	};
}

/** Judges the intervals of a capture at a point. */
export function assessmentEntry(
	facts: PointFile,
	{ limitSet, reason }: ChosenLimits,
	measured: MeasuredPointFacts,
	series: IntervalSeries[]
): AssessmentEntry {
	const { point, assumptions } = assessedPointOf(facts, measured);
	const assessment = assess({
		point,
		limitSet,
		series,
		siteTimeZone: facts.timeZone ?? measured.timeZone,
		uncertainty: uncertaintyOf(facts, point.nominalFrequency_Hz),
		decisionRule: facts.decisionRule ?? 'guarded',
		...(facts.tables === null ? {} : { tableKeys: facts.tables })
	});
	return entryOf(assessment, {
		limitSet: { key: limitSet.key, title: assessment.limitSetTitle, reason },
		point: {
			...point,
			name: facts.name,
			demandCurrent_A: rounded(point.demandCurrent_A),
			shortCircuitCurrent_A: rounded(point.shortCircuitCurrent_A)
		},
		assumptions
	});
}

function entryOf(
	assessment: Assessment,
	rest: Pick<AssessmentEntry, 'limitSet' | 'point' | 'assumptions'>
): AssessmentEntry {
	return {
		verdict: assessment.verdict,
		evidence: assessment.evidence,
		rows: assessment.rows.map(rowEntry),
		...rest,
		decisionRule: assessment.decisionRule,
		advisory: assessment.advisory,
		uncertainty: assessment.uncertaintyText,
		missing: assessment.missing,
		notes: assessment.notes ?? []
	};
}

function rowEntry(row: VerdictRow): AssessmentEntry['rows'][number] {
	return {
		table: row.tableKey,
		quantity: row.quantity,
		order: row.item.kind === 'order' ? row.item.order : row.item.index,
		phase: row.phase,
		statistic: row.statisticKey,
		value_percent: rounded(row.value_pct),
		limit_percent: rounded(row.limit_pct),
		utilisation: rounded(row.utilisation),
		verdict: row.verdict,
		basis: row.basis,
		comparator: row.comparator,
		uncertainty_percent: rounded(row.uncertainty_pct),
		evidence: row.evidence,
		coverage: rounded(row.coverage) ?? 0,
		intervalCount: row.intervalCount,
		flaggedCount: row.flaggedCount,
		worstPeriod: row.worstPeriod,
		reason: row.reason
	};
}
