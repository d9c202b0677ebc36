import { ORDER_STRIDE, type IntervalSeries } from '../harmonics/intervals';
import type { LimitBasis, StatisticRule } from '../limits/limit-set';
import type { Figure, FigureEvidence } from '../uncertainty/figure-budget';
import { spreadOfPercentile, spreadOfSingle, type Spread } from '../uncertainty/spread';
import type { VerdictRow } from './assessment';
import type { LevelBase, LevelItem } from './interval-levels';
import type { PeriodPercentile } from './rule-outcome';

/** Intervals that load and composition are taken from; a share of a week's tells as much as all of them. */
const MOST_INTERVALS = 400;

/** What a figure was read from. */
export interface FigureSource {
	series: IntervalSeries;
	/** [n] percent of the base, NaN = no data. */
	levels_pct: Float64Array;
	item: LevelItem;
	base: LevelBase;
}

/** Kept digits: enough for a budget, short enough to be stored with every row. */
function short(value: number, digits = 5): number {
	return Number(value.toPrecision(digits));
}

function shortSpread(spread: Spread | null): Spread | null {
	return spread && { ...spread, u: short(spread.u), degreesOfFreedom: short(spread.degreesOfFreedom) };
}

function validIntervals({ series, levels_pct }: FigureSource, from: number, to: number): number[] {
	const step = Math.max(1, Math.floor((to - from) / MOST_INTERVALS));
	const found: number[] = [];
	for (let i = from; i < to; i += step)
		if (series.flagged[i] !== 1 && !Number.isNaN(levels_pct[i]!)) found.push(i);
	return found;
}

/** Root mean square of the current over the intervals, A; of the fundamental where no rms was recorded. */
function load_A({ series }: FigureSource, intervals: readonly number[]): number | null {
	if (series.quantity !== 'current') return null;
	let squares = 0;
	let count = 0;
	for (const i of intervals) {
		const rms = series.rms[i]!;
		const level = Number.isNaN(rms) ? series.subgroups[i * ORDER_STRIDE + 1]! : rms;
		if (Number.isNaN(level)) continue;
		squares += level * level;
		count += 1;
	}
	return count === 0 ? null : short(Math.sqrt(squares / count));
}

/** Orders of a total as they stand in the mean of the squares, scaled so that together they make the value. */
function composition_pct(
	{ series, item }: FigureSource,
	intervals: readonly number[],
	value_pct: number
): number[] | null {
	if (item.kind === 'order') return null;
	const squares = Array.from({ length: item.to - item.from + 1 }, () => 0);
	for (const i of intervals) {
		for (let order = item.from; order <= item.to; order++) {
			const rms = series.subgroups[i * ORDER_STRIDE + order]!;
			if (!Number.isNaN(rms)) squares[order - item.from]! += rms * rms;
		}
	}
	const total = squares.reduce((sum, square) => sum + square, 0);
	return total > 0 ? squares.map((square) => short(value_pct * Math.sqrt(square / total))) : null;
}

function evidenceOf(
	source: FigureSource,
	from: number,
	to: number,
	value_pct: number,
	spread: Spread | null
): FigureEvidence {
	const intervals = validIntervals(source, from, to);
	const load = load_A(source, intervals);
	return {
		fullScale: source.base.kind === 'fixed' ? source.base.value : load,
		load_A: load,
		spread: shortSpread(spread),
		composition_pct: composition_pct(source, intervals, value_pct)
	};
}

/** Evidence of a period's percentile: its spread is what the missing intervals leave open. */
export function percentileEvidence(
	source: FigureSource,
	period: PeriodPercentile,
	rule: Pick<StatisticRule, 'percentile'>
): FigureEvidence {
	const { series, levels_pct } = source;
	let spread: Spread | null = null;
	if (period.coverage < 1) {
		const values = levels_pct
			.slice(period.from, period.to)
			.filter((level, i) => series.flagged[period.from + i] !== 1 && !Number.isNaN(level));
		spread = spreadOfPercentile(values, rule.percentile / 100, period.coverage);
	}
	return evidenceOf(source, period.from, period.to, period.value_pct, spread);
}

/** Evidence of the greatest value of a capture: its spread is that of a single value. */
export function snapshotEvidence(source: FigureSource, value_pct: number): FigureEvidence {
	const { series, levels_pct } = source;
	const values = levels_pct.filter((_, i) => series.flagged[i] !== 1);
	return evidenceOf(source, 0, levels_pct.length, value_pct, spreadOfSingle(values));
}

/** The figure of a level, as its budget is made for it. */
export function figureOf(
	quantity: VerdictRow['quantity'],
	orders: { from: number; to: number },
	value_pct: number,
	basis: LimitBasis,
	evidence: FigureEvidence
): Figure {
	return {
		quantity,
		orders,
		value_pct,
		basis: basis === 'fundamental' ? 'measured-fundamental' : 'agreed',
		evidence
	};
}

/** The figure of a stored row; null when the row has no value, or was judged before evidence was kept. */
export function figureOfRow(row: VerdictRow): Figure | null {
	const { value_pct, figure } = row;
	if (value_pct === null || figure === undefined) return null;
	return figureOf(row.quantity, figure.orders, value_pct, row.basis, figure);
}
