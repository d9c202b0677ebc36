import type { UncertaintyStatement } from '../../../assessment/assessment';
import { chainUncertainty } from '../../../assessment/uncertainty-statement';
import type { MeasuringChain } from '../../../uncertainty/measuring-chain';
import { chainOf } from '../../../uncertainty/survey-chain';
import type { InstrumentRow, PointRow } from '../../db/rows';

export const STATED_ORDERS = [1, 3, 5, 7, 11, 13, 25, 49];

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

/** The uncertainty of a survey's figures; what is not known of the instrument is said first. */
export function surveyUncertainty(
	instrument: InstrumentRow | null,
	chain: MeasuringChain
): UncertaintyStatement {
	const statement = chainUncertainty(chain);
	if (instrument !== null && instrument.harmonic_class !== 'unknown') return statement;
	const why =
		instrument === null
			? 'No instrument is recorded for this survey; one of class II is assumed.'
			: 'The class of the instrument is not known; class II is assumed.';
	return { ...statement, text: `${why} ${statement.text}` };
}
