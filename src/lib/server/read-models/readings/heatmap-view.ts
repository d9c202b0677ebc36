import { intervalLevels } from '../../../assessment/interval-levels';
import type { AssessedPoint } from '../../../assessment/assessment';
import { ORDER_STRIDE, type IntervalKind } from '../../../harmonics/intervals';
import type { Phase } from '../../../recording/phase';
import { phaseBase, type ReadingBasis } from '../../analysis/reading-basis';
import { decodeSeries } from '../../analysis/series-codec';
import type { AssessedColumns } from '../../repositories/analyses.repository';
import { figure, type Figure } from './reading-figure';

/** What a cell shows: percent of the fundamental, or percent of the limit that its order has. */
export type HeatScale = 'fundamental' | 'limit';

export interface HeatmapReadings {
	kind: 'heatmap';
	interval: IntervalKind;
	kinds: IntervalKind[];
	phase: Phase;
	phases: { phase: Phase; label: string }[];
	scale: HeatScale;
	/** Whether any order has a limit here; without one only the fundamental can be the scale. */
	hasLimits: boolean;
	orders: number[];
	intervalCount: number;
	/** More than one where a cell is the greatest of several intervals. */
	intervalsPerCell: number;
	/** [columns] start of each column's stretch, and the end of the last. */
	starts_ms: number[];
	end_ms: number;
	/** [orders][columns] percent; null = flagged, missing, or an order without a limit. */
	cells: Figure[][];
	/** [columns] true where every interval of the stretch is flagged. */
	masked: boolean[];
	flaggedCount: number;
	/** Instant of sample 0 or of the first interval. */
	start_ms: number;
}

export interface HeatmapContext {
	point: AssessedPoint;
	basis: ReadingBasis;
	label: (phase: Phase) => string;
	highestOrder: number;
	start_ms: number;
	asked: { phase: Phase | null; scale: HeatScale | null; interval: IntervalKind | null };
}

/** Columns that a screen can tell apart. */
const MOST_COLUMNS = 360;
/** Columns from which on there is a course to see. */
const FEWEST = 12;
const FINEST_LAST: readonly IntervalKind[] = ['10min', '3s', 'window', '2h'];

/**
 * Orders × time of one conductor. Each cell is the greatest unflagged value of its stretch: thinning must not lose a peak.
 * rows  of one quantity, in the order of conductors
 * returns  null where the capture has no intervals of that quantity
 */
export function heatmapReadings(
	rows: readonly AssessedColumns[],
	context: HeatmapContext
): HeatmapReadings | null {
	const { asked, basis } = context;
	const count = (kind: IntervalKind) => rows.find((row) => row.interval === kind)?.interval_count ?? 0;
	const kinds = FINEST_LAST.filter((kind) => count(kind) > 0);
	const interval =
		kinds.find((kind) => kind === asked.interval) ?? kinds.find((kind) => count(kind) >= FEWEST) ?? kinds[0];
	const own = rows.filter((row) => row.interval === interval);
	const row = own.find(({ phase }) => phase === asked.phase) ?? own[0];
	if (interval === undefined || !row) return null;
	const hasLimits = basis.limits_pct?.some((limit) => limit !== null) ?? false;
	const scale = hasLimits ? (asked.scale ?? 'limit') : 'fundamental';
	const orders = Array.from({ length: context.highestOrder - 1 }, (_, i) => i + 2);
	const { starts_ms, lengths_s, flagged } = decodeSeries(row);
	const intervalsPerCell = Math.ceil(starts_ms.length / MOST_COLUMNS);
	const columns = Math.ceil(starts_ms.length / intervalsPerCell);
	const stretch = (column: number): [number, number] => [
		column * intervalsPerCell,
		Math.min(starts_ms.length, (column + 1) * intervalsPerCell)
	];
	const greatest = (values: Float64Array): Figure[] =>
		Array.from({ length: columns }, (_, column) => {
			const [from, to] = stretch(column);
			let found = NaN;
			for (let i = from; i < to; i++)
				if (flagged[i] !== 1 && !Number.isNaN(values[i]!) && !(values[i]! <= found)) found = values[i]!;
			return figure(found);
		});
	const levels = orders.map((order) => levelsOf(row, order, scale, context));
	return {
		kind: 'heatmap',
		interval,
		kinds: [...kinds],
		phase: row.phase,
		phases: own.map(({ phase }) => ({ phase, label: context.label(phase) })),
		scale,
		hasLimits,
		orders,
		intervalCount: starts_ms.length,
		intervalsPerCell,
		starts_ms: Array.from({ length: columns }, (_, column) => starts_ms[stretch(column)[0]]!),
		end_ms: starts_ms.at(-1)! + 1000 * lengths_s.at(-1)!,
		cells: levels.map(greatest),
		masked: Array.from({ length: columns }, (_, column) => {
			const [from, to] = stretch(column);
			return flagged.subarray(from, to).every((flag) => flag === 1);
		}),
		flaggedCount: flagged.reduce((sum, flag) => sum + flag, 0),
		start_ms: context.start_ms
	};
}

function levelsOf(
	row: AssessedColumns,
	order: number,
	scale: HeatScale,
	{ point, basis }: HeatmapContext
): Float64Array {
	const series = decodeSeries(row);
	if (scale === 'fundamental')
		return series.rms.map(
			(_, i) => (100 * series.subgroups[i * ORDER_STRIDE + order]!) / series.subgroups[i * ORDER_STRIDE + 1]!
		);
	const limit_pct = basis.limits_pct?.[order] ?? null;
	const base = phaseBase(basis.basis, point, row.phase);
	if (limit_pct === null || limit_pct === 0 || !base) return new Float64Array(row.interval_count).fill(NaN);
	const { levels_pct } = intervalLevels(series, { kind: 'order', order }, base, true);
	return levels_pct.map((level) => (100 * level) / limit_pct);
}
