import type { UncertaintyStatement } from '../../../assessment/assessment';
import { classUncertainty } from '../../../assessment/uncertainty-statement';
import type { InstrumentRow } from '../../db/rows';

export const STATED_ORDERS = [1, 3, 5, 7, 11, 13, 25, 49];

/** The uncertainty of a survey's measuring chain; what is not known about it is assumed on the safe side, and said. */
export function surveyUncertainty(
	instrument: InstrumentRow | null,
	ctPrimary_A: number | null
): UncertaintyStatement {
	const known = instrument !== null && instrument.harmonic_class !== 'unknown';
	const statement = classUncertainty({
		instrumentClass: instrument !== null && instrument.harmonic_class === 'I' ? 'I' : 'II',
		voltageTransformerClass_pct: instrument?.voltage_sensor_error_pct ?? null,
		currentTransformerClass_pct: instrument?.current_sensor_error_pct ?? null,
		currentRange_A: ctPrimary_A
	});
	if (known) return statement;
	const why =
		instrument === null
			? 'No instrument is recorded for this survey; one of class II is assumed.'
			: 'The class of the instrument is not known; class II is assumed.';
	return { ...statement, text: `${why} ${statement.text}` };
}
