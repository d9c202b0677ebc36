import type { PointFacts } from './point-facts';

/** A fact that a point still lacks. */
export interface PointGap {
	fact: 'limit-set' | 'demand-current' | 'short-circuit-current';
	/** A few words for the survey's rail. */
	short: string;
	/** What is missing and what it is needed for. */
	sentence: string;
}

/** What the point still lacks before its verdict can say all it should; most needed first. */
export function pointGaps(facts: Pick<PointFacts, 'limitSetId' | 'demand' | 'shortCircuit'>): PointGap[] {
	const gaps: PointGap[] = [];
	if (facts.limitSetId === null)
		gaps.push({
			fact: 'limit-set',
			short: 'no limit set chosen',
			sentence:
				'No limit set is chosen. Until one is, the verdict takes the published one that suits best, and names it.'
		});
	if (facts.demand.method === 'unknown')
		gaps.push({
			fact: 'demand-current',
			short: 'needs a demand current',
			sentence:
				'The demand current I_L is not known. Current limits are percentages of it, so current is not assessed.'
		});
	if (facts.shortCircuit.method === 'unknown')
		gaps.push({
			fact: 'short-circuit-current',
			short: 'needs a short-circuit current',
			sentence:
				'The short-circuit current I_sc is not known. I_sc/I_L chooses the row of current limits, so current is not assessed.'
		});
	return gaps;
}
