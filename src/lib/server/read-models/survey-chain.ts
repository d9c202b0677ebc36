import type { MeasuringChain } from '../../uncertainty/measuring-chain';
import { chainOf } from '../../uncertainty/survey-chain';
import type { Db } from '../db/database';
import type { InstrumentRow, PointRow } from '../db/rows';
import { instrumentsRepository } from '../repositories/instruments.repository';
import { pointsRepository } from '../repositories/points.repository';
import type { Scope } from '../repositories/scope';
import { surveysRepository } from '../repositories/surveys.repository';

/** What the register knows of a survey's measuring chain; the rest is assumed on the safe side, and said. */
export function surveyChain(
	instrument: InstrumentRow | null,
	point: Pick<PointRow, 'nominal_frequency_hz' | 'ct_primary_a' | 'vt_primary_v'>
): MeasuringChain {
	const stated = instrument === null ? 'unknown' : instrument.harmonic_class;
	return chainOf({
		nominalFrequency_Hz: point.nominal_frequency_hz,
		instrumentClass: stated === 'unknown' ? null : stated,
		voltageSensorError_pct: instrument?.voltage_sensor_error_pct ?? null,
		currentSensorError_pct: instrument?.current_sensor_error_pct ?? null,
		voltageTransformerPrimary_V: point.vt_primary_v,
		currentTransformerPrimary_A: point.ct_primary_a
	});
}

/** The measuring chain behind a survey as the register states it today. The survey has to be one of the scope. */
export async function loadSurveyChain(db: Db, scope: Scope, surveyId: string): Promise<MeasuringChain> {
	const survey = await surveysRepository(db, scope).byId(surveyId);
	const point = survey && (await pointsRepository(db, scope).byId(survey.point_id));
	if (!survey || !point) throw new Error(`no point behind survey ${surveyId}`);
	const instrument =
		survey.instrument_id === null
			? undefined
			: await instrumentsRepository(db, scope).byId(survey.instrument_id);
	return surveyChain(instrument ?? null, point);
}
