import type { BlockedLevels } from '../assessment/assessment';
import type { ChannelEvidence } from '../harmonics/quality/capture-evidence';
import { standing, type StandingCheck } from './overrule';

/** A capture's channels, as far as a verdict rests on them. */
export interface JudgedCapture {
	captureId: string;
	name: string;
	channels: readonly Pick<ChannelEvidence, 'channelIndex' | 'quantity' | 'phase'>[];
}

/**
 * What no verdict may be given on: the conductor of a blocked channel, or every conductor of a blocked capture. Where
 * several captures were made on a conductor, one that is blocked is enough: the others do not make its hours good.
 */
export function blockedLevels(
	checks: readonly StandingCheck[],
	captures: readonly JudgedCapture[]
): BlockedLevels[] {
	return standing(checks, 'blocks').flatMap(({ captureId, check }) => {
		const rested = captures.filter((one) => captureId === null || one.captureId === captureId);
		return rested.flatMap(({ name, channels }) =>
			channels
				.filter(({ channelIndex }) => check.channelIndex === null || check.channelIndex === channelIndex)
				.map(({ quantity, phase }) => ({
					quantity,
					phase,
					sentence: captures.length > 1 ? `${name}: ${check.sentence}` : check.sentence
				}))
		);
	});
}
