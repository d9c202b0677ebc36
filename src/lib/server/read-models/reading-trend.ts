import type { AssessedPoint } from '../../assessment/assessment';
import { intervalLevels, type LevelItem } from '../../assessment/interval-levels';
import type { IntervalKind } from '../../harmonics/intervals';
import { percentileNearestRank } from '../../numerics/stats/percentile-nearest-rank';
import type { Phase } from '../../recording/phase';
import { phaseBase, type ReadingBasis } from '../analysis/reading-basis';
import { decodeSeries } from '../analysis/series-codec';
import type { AssessedColumns } from '../repositories/analyses.repository';

/** More points than this are thinned before they travel: each keeps the greatest of its stretch. */
const MOST_POINTS = 1500;

export interface TrendContext {
	point: AssessedPoint;
	basis: ReadingBasis;
	label: (phase: Phase) => string;
	highestOrder: number;
}

export interface IntervalTrend {
	interval: IntervalKind;
	order: number | 'total';
	limit_pct: number | null;
	/** Intervals in one point: more than one where the trend was thinned to its greatest values. */
	intervalsPerPoint: number;
	series: { phase: Phase; label: string; times_ms: number[]; values: (number | null)[] }[];
	flagged: { from_ms: number; to_ms: number }[];
}

export interface PercentileTable {
	interval: IntervalKind | null;
	validCount: number;
	flaggedCount: number;
	phases: { phase: Phase; label: string }[];
	/** Percent of the basis; null = no data. */
	rows: {
		item: number | 'total';
		limit_pct: number | null;
		phases: { p95: number | null; p99: number | null; greatest: number | null }[];
	}[];
}

/** Intervals from which on a line shows a course. */
const FEWEST_FOR_A_COURSE = 12;

/** Longer kinds say more, up to those that limits are stated for: two-hour values are shown where they are asked for. */
const RANK: Record<IntervalKind, number> = { '2h': 0, window: 1, '3s': 2, '10min': 3 };
const printable = (value: number): number | null =>
	Number.isFinite(value) ? Number(value.toPrecision(7)) : null;

function itemOf(order: number | 'total', highestOrder: number): LevelItem {
	return order === 'total' ? { kind: 'total', from: 2, to: highestOrder } : { kind: 'order', order };
}

function limitOf(order: number | 'total', basis: ReadingBasis): number | null {
	return order === 'total' ? basis.totalLimit_pct : (basis.limits_pct?.[order] ?? null);
}

/** Percentages of one item over all intervals of a row; all NaN where the phase has no base. */
function levels_pct(row: AssessedColumns, order: number | 'total', context: TrendContext): Float64Array {
	const base = phaseBase(context.basis.basis, context.point, row.phase);
	if (!base) return new Float64Array(row.interval_count).fill(NaN);
	return intervalLevels(decodeSeries(row), itemOf(order, context.highestOrder), base, true).levels_pct;
}

/** The same with flagged intervals left out: they are shown as flagged, and no figure is taken from them. */
function validLevels_pct(row: AssessedColumns, order: number | 'total', context: TrendContext): Float64Array {
	return levels_pct(row, order, context).map((level, i) => (row.flagged[i] === 1 ? NaN : level));
}

/** Greatest valid value of each stretch of `step` intervals: thinning must not lose a peak. */
function thinned(values: Float64Array, step: number): (number | null)[] {
	const out: (number | null)[] = [];
	for (let from = 0; from < values.length; from += step) {
		let greatest = NaN;
		for (let i = from; i < Math.min(values.length, from + step); i++)
			if (!(values[i]! <= greatest) && !Number.isNaN(values[i]!)) greatest = values[i]!;
		out.push(printable(greatest));
	}
	return out;
}

/** Stretches of flagged intervals, joined where they adjoin. */
function flaggedStretches(row: AssessedColumns): IntervalTrend['flagged'] {
	const { starts_ms, lengths_s, flagged } = decodeSeries(row);
	const stretches: IntervalTrend['flagged'] = [];
	for (let i = 0; i < flagged.length; i++) {
		if (flagged[i] !== 1) continue;
		const to_ms = starts_ms[i]! + 1000 * lengths_s[i]!;
		const last = stretches.at(-1);
		if (last && starts_ms[i]! - last.to_ms < 1) last.to_ms = to_ms;
		else stretches.push({ from_ms: starts_ms[i]!, to_ms });
	}
	return stretches;
}

/** One order over time on every phase of the chosen quantity; null when no kind holds two intervals. */
export function intervalTrend(
	rows: readonly AssessedColumns[],
	kinds: readonly IntervalKind[],
	context: TrendContext & { asked: { order: number | 'total'; interval: IntervalKind | null } }
): IntervalTrend | null {
	const { asked } = context;
	const usable = kinds
		.filter((kind) => rows.some((row) => row.interval === kind && row.interval_count >= 2))
		.sort((a, b) => RANK[b] - RANK[a]);
	const countOf = (kind: IntervalKind) => rows.find((row) => row.interval === kind)?.interval_count ?? 0;
	// The longest kind says most, but a handful of points is no course over time.
	const judged = usable.filter((kind) => kind !== '2h');
	const usual = judged.find((kind) => countOf(kind) >= FEWEST_FOR_A_COURSE) ?? judged.at(-1);
	const interval = usable.find((kind) => kind === asked.interval) ?? usual;
	const chosen = rows.filter((row) => row.interval === interval);
	const first = chosen[0];
	if (interval === undefined || !first) return null;
	const intervalsPerPoint = Math.ceil(first.interval_count / MOST_POINTS);
	return {
		interval,
		order: asked.order,
		limit_pct: limitOf(asked.order, context.basis),
		intervalsPerPoint,
		series: chosen.map((row) => ({
			phase: row.phase,
			label: context.label(row.phase),
			times_ms: Array.from(decodeSeries(row).starts_ms).filter((_, i) => i % intervalsPerPoint === 0),
			values: thinned(validLevels_pct(row, asked.order, context), intervalsPerPoint)
		})),
		flagged: flaggedStretches(first)
	};
}

/** 95th and 99th percentiles of the valid values of each order, of the longest intervals there are. */
export function percentileTable(rows: readonly AssessedColumns[], context: TrendContext): PercentileTable {
	const longest = [...rows].sort((a, b) => RANK[b.interval] - RANK[a.interval])[0];
	const chosen = rows.filter((row) => row.interval === longest?.interval);
	const flaggedCount = longest ? longest.flagged.reduce((sum, flag) => sum + flag, 0) : 0;
	const items: (number | 'total')[] = ['total'];
	for (let order = 2; order <= context.highestOrder; order++) items.push(order);
	return {
		interval: longest?.interval ?? null,
		validCount: (longest?.interval_count ?? 0) - flaggedCount,
		flaggedCount,
		phases: chosen.map((row) => ({ phase: row.phase, label: context.label(row.phase) })),
		rows: items.map((item) => ({
			item,
			limit_pct: limitOf(item, context.basis),
			phases: chosen.map((row) => {
				const valid = levels_pct(row, item, context)
					.filter((level, i) => row.flagged[i] !== 1 && !Number.isNaN(level))
					.sort();
				if (valid.length === 0) return { p95: null, p99: null, greatest: null };
				return {
					p95: printable(percentileNearestRank(valid, 0.95)),
					p99: printable(percentileNearestRank(valid, 0.99)),
					greatest: printable(valid.at(-1) ?? NaN)
				};
			})
		}))
	};
}
