import { figureOfRow } from '$lib/assessment/figure-evidence';
import {
	coverageOf,
	factorFor95,
	INTENDED_COVERAGE,
	shareOfVariance,
	type Budget
} from '$lib/uncertainty/budget';
import { figureBudget } from '$lib/uncertainty/figure-budget';
import type { MeasuringChain } from '$lib/uncertainty/measuring-chain';
import { distributionWords, SOURCE_WORDS } from '$lib/uncertainty/source-words';
import { formatNumber, formatShare } from '$lib/units/format';
import type { VerdictLineView } from './verdict-line';

/** One contribution as the table shows it. */
export interface BudgetLine {
	name: string;
	note: string;
	distribution: string;
	stated: string;
	/** Its unit, and what the figure changes by for one of it. */
	unit: string;
	u: string;
	share: string;
}

/** Three significant figures: uncertainties span decades. */
function figures(value: number): string {
	if (value === 0) return '0';
	const decimals = Math.min(8, Math.max(0, 2 - Math.floor(Math.log10(Math.abs(value)))));
	return formatNumber(value, { decimals });
}

/**
 * The budget of a row, made anew from what was kept with it.
 * returns  null when nothing was kept, or when today's budget is not the one that the verdict counted
 */
export function budgetOfLine(line: VerdictLineView, chain: MeasuringChain | null): Budget | null {
	const figure = figureOfRow(line);
	if (figure === null || chain === null) return null;
	const budget = figureBudget(chain, figure);
	const same =
		budget.U === null || line.uncertainty_pct === null
			? budget.U === line.uncertainty_pct
			: Math.abs(budget.U - line.uncertainty_pct) <= 1e-9 * budget.U;
	return same ? budget : null;
}

/** Contributions, the greatest first. */
export function budgetLines(budget: Budget): BudgetLine[] {
	return [...budget.contributions]
		.sort((a, b) => b.u - a.u)
		.map((one) => ({
			...SOURCE_WORDS[one.source],
			distribution: distributionWords(one),
			stated: figures(one.stated),
			unit: `${one.statedIn === 'percent of reading' ? '% of reading' : 'points'} · ${figures(one.sensitivity)}`,
			u: figures(one.u),
			share: formatShare(shareOfVariance(budget, one))
		}));
}

/** What U holds: how it is made, how much of the truth lies inside it. */
export function budgetSentence(budget: Budget): string {
	const nu = budget.effectiveDegreesOfFreedom;
	const freedom = Number.isFinite(nu) && nu < 1000 ? `, ${Math.floor(nu)} effective degrees of freedom` : '';
	if (budget.U === null) {
		const sources = budget.notKnown.map((source) => SOURCE_WORDS[source].name.toLowerCase()).join(', ');
		return `No expanded uncertainty: ${sources} not known. The known part is k·u = 2 · ${figures(budget.u)} = ${figures(budget.knownPart)} points${freedom}.`;
	}
	const made = `U = k·u = 2 · ${figures(budget.u)} = ${figures(budget.U)} points${freedom}.`;
	if (budget.u === 0) return made;
	const coverage = coverageOf(budget);
	const share = coverage > 0.9995 ? 'practically all' : `${formatNumber(100 * coverage, { decimals: 1 })} %`;
	const holds = `With these distributions ±U holds ${share} of the true values; k = ${formatNumber(factorFor95(budget))} would hold 95 %.`;
	return coverage < INTENDED_COVERAGE - 0.015
		? `${made} ${holds} Too few readings: k = 2 is short here.`
		: `${made} ${holds}`;
}
