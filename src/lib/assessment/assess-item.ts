import type { IntervalSeries } from '../harmonics/intervals';
import type { LimitTable, StatisticRule } from '../limits/limit-set';
import type { LimitAnswer } from '../limits/look-up-limit';
import type { FigureEvidence } from '../uncertainty/figure-budget';
import type { DecisionRule, UncertaintyStatement, VerdictRow } from './assessment';
import { judge } from './decision-rule';
import { rulePeriods } from './evidence';
import { figureOf, percentileEvidence, snapshotEvidence, type FigureSource } from './figure-evidence';
import { intervalLevels, type LevelBase, type LevelItem } from './interval-levels';
import { seriesForInterval, snapshotSeries, type PhaseData } from './phase-data';
import { assessedReason, notAssessedReason, unknownUncertaintyRemark } from './row-reason';
import { ruleOutcome, type PeriodPercentile, type RuleOutcome } from './rule-outcome';
import { snapshotValue, type SnapshotValue } from './snapshot';

/** Everything that stays the same for all items of one table on one phase. */
export interface ItemContext {
	table: LimitTable;
	data: PhaseData;
	base: LevelBase;
	siteTimeZone: string;
	uncertainty: UncertaintyStatement;
	decisionRule: DecisionRule;
}

interface Measured {
	value_pct: number;
	statisticKey: string;
	multiplier: number;
	evidence: VerdictRow['evidence'];
	coverage: number;
	intervalCount: number;
	flaggedCount: number;
	worstPeriod: string | null;
	isLowerBound: boolean;
	/** How the value came about, in words. */
	origin: string;
	remark: string;
	/** What its uncertainty budget is made from. */
	figure: FigureEvidence;
}

export function levelItemOf(item: VerdictRow['item'], orders: { from: number; to: number }): LevelItem {
	return item.kind === 'order' ? item : { kind: 'total', ...orders };
}

/** The rule that compares with the table value itself; it tells whether a table could be judged at all. */
export function baseRuleOf(table: LimitTable): StatisticRule | null {
	return table.statistics.reduce<StatisticRule | null>(
		(base, rule) => (base === null || rule.multiplier < base.multiplier ? rule : base),
		null
	);
}

function comparatorOf(table: LimitTable): '<' | '<=' {
	return baseRuleOf(table)?.comparator ?? '<=';
}

/** All rows of one item (an order or a total) on one phase: one for each rule, or a snapshot, or the reason for none. */
export function assessItem(
	context: ItemContext,
	item: VerdictRow['item'],
	orders: { from: number; to: number },
	limit: LimitAnswer
): VerdictRow[] {
	const strict = measure(context, levelItemOf(item, orders), false);
	if (strict.measured.length > 0) {
		const rows = [
			...strict.measured.map((measured) => judgedRow(context, item, orders, limit, measured)),
			...strict.unmet.map((rule) => missingRow(context, item, limit, rule, strict.outcomes.get(rule.key)))
		];
		return inRuleOrder(context.table, rows);
	}
	if (item.kind === 'total') {
		// A total without some of its orders is a lower bound: it can prove an exceedance and never compliance.
		const bound = measure(context, levelItemOf(item, orders), true);
		const exceeding = bound.measured
			.map((measured) => judgedRow(context, item, orders, limit, measured))
			.filter((row) => row.verdict === 'exceeds');
		if (exceeding.length > 0) return exceeding;
	}
	const base = baseRuleOf(context.table);
	const outcome = base === null ? undefined : strict.outcomes.get(base.key);
	// A short log is told apart from one that lacks the order: only the first can be mended by measuring longer.
	return outcome?.kind === 'too-few'
		? [missingRow(context, item, limit, base, outcome)]
		: [missingRow(context, item, limit, null, undefined)];
}

/** Rows in the order in which the table states its rules; a snapshot stands last. */
function inRuleOrder(table: LimitTable, rows: VerdictRow[]): VerdictRow[] {
	const place = (row: VerdictRow) => {
		const index = table.statistics.findIndex((rule) => rule.key === row.statisticKey);
		return index < 0 ? table.statistics.length : index;
	};
	return rows.sort((a, b) => place(a) - place(b));
}

interface Measurement {
	measured: Measured[];
	/** Rules of the table that stay without a value although another rule has one. */
	unmet: StatisticRule[];
	outcomes: Map<string, RuleOutcome>;
}

function measure(context: ItemContext, item: LevelItem, lowerBound: boolean): Measurement {
	const { table, data } = context;
	const outcomes = new Map<string, RuleOutcome>();
	const measured: Measured[] = [];
	const levels = new Map<IntervalSeries, ReturnType<typeof intervalLevels>>();
	const levelsOf = (series: IntervalSeries) => {
		const known = levels.get(series) ?? intervalLevels(series, item, context.base, lowerBound);
		levels.set(series, known);
		return known;
	};
	for (const rule of table.statistics) {
		const series = seriesForInterval(data, rule.interval_s);
		if (series === null) continue;
		const { levels_pct, isLowerBound } = levelsOf(series);
		const source = { series, levels_pct, item, base: context.base };
		const outcome = ruleOutcome(series, levels_pct, rule, rulePeriods(series, rule, context.siteTimeZone));
		outcomes.set(rule.key, outcome);
		if (outcome.kind === 'evaluated') measured.push(fromRule(rule, outcome, isLowerBound, source));
	}
	const base = baseRuleOf(table);
	if (base === null || !measured.some((one) => one.statisticKey === base.key)) {
		const series = snapshotSeries(data);
		const known = series === null ? null : levelsOf(series);
		const value = series === null || known === null ? null : snapshotValue(series, known.levels_pct);
		if (series !== null && value !== null && known !== null) {
			const source = { series, levels_pct: known.levels_pct, item, base: context.base };
			measured.push(fromSnapshot(value, known.isLowerBound, base, source));
			return { measured, unmet: [], outcomes };
		}
	}
	const unmet = table.statistics.filter((rule) => !measured.some((one) => one.statisticKey === rule.key));
	return { measured, unmet, outcomes };
}

function fromRule(
	rule: StatisticRule,
	outcome: Extract<RuleOutcome, { kind: 'evaluated' }>,
	isLowerBound: boolean,
	source: FigureSource
): Measured {
	const { governing } = outcome;
	return {
		value_pct: governing.value_pct,
		statisticKey: rule.key,
		multiplier: rule.multiplier,
		evidence: governing.complete ? 'weekly' : 'partial',
		coverage: governing.coverage,
		intervalCount: governing.validCount,
		flaggedCount: governing.flaggedCount,
		worstPeriod: rule.period === 'day' ? governing.date : null,
		isLowerBound,
		origin: periodOrigin(rule, governing),
		remark: incompleteRemark(rule, outcome.greaterIncomplete),
		figure: percentileEvidence(source, governing, rule)
	};
}

function periodOrigin(rule: StatisticRule, period: PeriodPercentile): string {
	const when = rule.period === 'day' ? ` on ${period.date}` : ` from ${period.date}`;
	const share = period.complete
		? ''
		: `, which covers ${(100 * period.coverage).toFixed(1)} % of the ${rule.period}`;
	return `${period.validCount} values${when}${share}`;
}

function incompleteRemark(rule: StatisticRule, period: PeriodPercentile | null): string {
	if (period === null) return '';
	return (
		`On the incomplete ${rule.period} of ${period.date} (${(100 * period.coverage).toFixed(1)} % covered) the same ` +
		`percentile was ${period.value_pct.toFixed(2)} %; it is told and not judged.`
	);
}

function fromSnapshot(
	value: SnapshotValue,
	isLowerBound: boolean,
	base: StatisticRule | null,
	source: FigureSource
): Measured {
	const kind = value.interval === '3s' ? '3-second value' : '10/12-cycle value';
	return {
		value_pct: value.value_pct,
		statisticKey: 'snapshot',
		multiplier: 1,
		evidence: 'snapshot',
		coverage: 0,
		intervalCount: value.validCount,
		flaggedCount: value.flaggedCount,
		worstPeriod: null,
		isLowerBound,
		origin: `greatest ${kind} of ${value.validCount}`,
		remark:
			base === null
				? 'This edition states no percentile rule, so the comparison is indicative.'
				: 'Indicative only: the capture is too short for the percentile that the rule asks for.',
		figure: snapshotEvidence(source, value.value_pct)
	};
}

function judgedRow(
	context: ItemContext,
	item: VerdictRow['item'],
	orders: { from: number; to: number },
	limit: LimitAnswer,
	measured: Measured
): VerdictRow {
	const { table, data, decisionRule } = context;
	const limit_pct = limit.limit_pct * measured.multiplier;
	const comparator = comparatorOf(table);
	const { value_pct } = measured;
	const figure = figureOf(table.quantity, orders, value_pct, table.basis, measured.figure);
	const budget = context.uncertainty.budgetOf(figure);
	const verdict = judge(value_pct, limit_pct, budget.knownPart, comparator, decisionRule);
	const row: Omit<VerdictRow, 'reason'> = {
		tableKey: table.key,
		quantity: table.quantity,
		item,
		phase: data.phase,
		statisticKey: measured.statisticKey,
		basis: table.basis,
		value_pct,
		limit_pct,
		limitRowId: limit.rowId,
		comparator,
		utilisation: value_pct / limit_pct,
		uncertainty_pct: budget.U,
		figure: { ...measured.figure, orders },
		evidence: measured.evidence,
		coverage: measured.coverage,
		intervalCount: measured.intervalCount,
		flaggedCount: measured.flaggedCount,
		worstPeriod: measured.worstPeriod,
		verdict
	};
	const remarks = [
		measured.isLowerBound
			? `Orders above the ${data.highestOrder}th or missing ones are not counted and could only add to it.`
			: '',
		measured.remark,
		budget.U === null ? unknownUncertaintyRemark(table.quantity, budget.knownPart) : ''
	];
	return {
		...row,
		reason: assessedReason(table, row, measured.origin, limit.why, remarks, budget.knownPart)
	};
}

function missingRow(
	context: ItemContext,
	item: VerdictRow['item'],
	limit: LimitAnswer,
	rule: StatisticRule | null,
	outcome: RuleOutcome | undefined
): VerdictRow {
	const { table, data } = context;
	const base = rule ?? baseRuleOf(table);
	const kind = outcome?.kind === 'too-few' || outcome?.kind === 'no-value' ? outcome : null;
	return {
		tableKey: table.key,
		quantity: table.quantity,
		item,
		phase: data.phase,
		statisticKey: base?.key ?? 'snapshot',
		basis: table.basis,
		value_pct: null,
		limit_pct: limit.limit_pct * (base?.multiplier ?? 1),
		limitRowId: limit.rowId,
		comparator: comparatorOf(table),
		utilisation: null,
		uncertainty_pct: null,
		evidence: rule === null ? 'snapshot' : 'partial',
		coverage: 0,
		intervalCount: 0,
		flaggedCount: kind?.flaggedCount ?? data.flaggedCount,
		worstPeriod: null,
		verdict: 'not-assessed',
		reason: notAssessedReason(data, item, rule, kind)
	};
}
