import type { UncertaintyStatement } from '../../../assessment/assessment';
import { chainUncertainty } from '../../../assessment/uncertainty-statement';
import type { MeasuringChain } from '../../../uncertainty/measuring-chain';
import type { InstrumentRow } from '../../db/rows';

export const STATED_ORDERS = [1, 3, 5, 7, 11, 13, 25, 49];

/** The uncertainty of a survey's figures; what is not known of its instruments is said first. */
export function surveyUncertainty(
	instruments: readonly InstrumentRow[],
	chain: MeasuringChain
): UncertaintyStatement {
	const statement = chainUncertainty(chain);
	const unknown = instruments.filter((instrument) => instrument.harmonic_class === 'unknown');
	if (instruments.length > 0 && unknown.length === 0) return statement;
	const why =
		instruments.length === 0
			? 'No instrument is recorded for this survey; one of class II is assumed.'
			: instruments.length === 1
				? 'The class of the instrument is not known; class II is assumed.'
				: `The class of ${unknown.map((instrument) => instrument.name).join(' and ')} is not known; class II is assumed.`;
	return { ...statement, text: `${why} ${statement.text}` };
}
