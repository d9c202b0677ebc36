import { boundOfSum, coverageOfSum, type SumPart } from '../numerics/stats/sum-coverage';
import type { Contribution, ContributionSource } from './contribution';

/** k of every expanded uncertainty of this product. */
export const COVERAGE_FACTOR = 2;
/** What k = 2 stands for with a normal distribution, rounded as the trade does. */
export const INTENDED_COVERAGE = 0.95;

/** How well one figure is known. All in the unit of the figure. */
export interface Budget {
	contributions: Contribution[];
	/** Sources of error whose size nobody has stated: with any of them there is no expanded uncertainty. */
	notKnown: ContributionSource[];
	/** Combined standard uncertainty of the known contributions. */
	u: number;
	/** Infinity when nothing rests on a few readings. */
	effectiveDegreesOfFreedom: number;
	/** k·u of the known contributions. */
	knownPart: number;
	/** Expanded uncertainty U; null when a source is not known. */
	U: number | null;
}

/**
 * Root sum of squares of independent contributions (JCGM 100:2008, 5.1.2), and their effective degrees of freedom by
 * Welch and Satterthwaite (G.4.1). What is correlated has to be joined into one contribution before.
 */
export function combine(
	contributions: readonly Contribution[],
	notKnown: readonly ContributionSource[] = []
): Budget {
	const u = Math.sqrt(contributions.reduce((sum, one) => sum + one.u ** 2, 0));
	const fourth = contributions.reduce(
		(sum, one) => (one.degreesOfFreedom === null ? sum : sum + one.u ** 4 / one.degreesOfFreedom),
		0
	);
	const knownPart = COVERAGE_FACTOR * u;
	return {
		contributions: [...contributions],
		notKnown: [...notKnown],
		u,
		effectiveDegreesOfFreedom: fourth === 0 ? Infinity : u ** 4 / fourth,
		knownPart,
		U: notKnown.length === 0 ? knownPart : null
	};
}

/** Share of the variance, 0 … 1; 0 where nothing contributes. */
export function shareOfVariance(budget: Budget, contribution: Contribution): number {
	return budget.u === 0 ? 0 : (contribution.u / budget.u) ** 2;
}

function partsOf(budget: Budget): SumPart[] {
	return budget.contributions.map(({ distribution, u, degreesOfFreedom }) =>
		degreesOfFreedom === null
			? { shape: distribution, u }
			: { shape: 'student', u, degreesOfFreedom: Math.max(1, degreesOfFreedom) }
	);
}

/**
 * Probability that the true value lies inside ±k·u when each contribution is spread as its line says (a type A line as
 * Student's t). About 0.954 for many comparable contributions; more where one bound dominates, since a rectangular
 * distribution ends at 1.73·u; less where few readings dominate.
 * returns  0 … 1; 1 for an exact figure. Says nothing about sources that are not known.
 */
export function coverageOf(budget: Budget): number {
	return coverageOfSum(partsOf(budget), budget.knownPart);
}

/** The factor that would give 95 % for this very budget; NaN for an exact figure. */
export function factorFor95(budget: Budget): number {
	return budget.u === 0 ? NaN : boundOfSum(partsOf(budget), INTENDED_COVERAGE) / budget.u;
}
