import type { UncertaintyStatement } from '../../../assessment/assessment';
import { chainUncertainty } from '../../../assessment/uncertainty-statement';
import type { MeasuringChain } from '../../../uncertainty/measuring-chain';
import type { InstrumentRow } from '../../db/rows';

export const STATED_ORDERS = [1, 3, 5, 7, 11, 13, 25, 49];

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
