import type { Phase } from '../recording/phase';
import type { Trend, TrendSeries } from '../recording/recording';
import { err, ok, type Result } from '../result';
import { emptySeries } from './interval-series';
import { MAX_ORDER, ORDER_STRIDE, type IntervalKind, type IntervalSeries } from './intervals';

/** A column as the engineer confirmed it. */
export interface TrendMapping {
	/** Index into Trend.series. */
	seriesIndex: number;
	quantity: 'voltage' | 'current';
	phase: Phase;
	/** Factor from the logged value to the primary value; percentages are left alone. */
	toPrimary: number;
}

export interface TrendIntervals {
	series: IntervalSeries[];
	/** What could not be used or had to be derived, each a full sentence. */
	sentences: string[];
}

export interface TrendProblem {
	code: 'no-mapped-columns' | 'interval-not-usable';
	sentence: string;
}

interface Column {
	source: TrendSeries;
	toPrimary: number;
}

/**
 * A trend log as interval series, one per quantity and conductor.
 * start_ms  moment of Trend.start, milliseconds since 1970-01-01 UTC
 * returns   series of kind '3s' or '10min' by the log's spacing; orders without a column stay "no data"
 * note      percentages of the fundamental become absolute with the logged order 1; where only the rms and the orders are
 *           logged, I1 = rms/√(1 + Σ(p_h/100)²) over the logged orders
 */
export function trendToIntervalSeries(
	trend: Trend,
	mappings: readonly TrendMapping[],
	start_ms: number
): Result<TrendIntervals, TrendProblem> {
	if (mappings.length === 0) {
		return err({
			code: 'no-mapped-columns',
			sentence: 'No column is mapped to a conductor. Map at least one column, then analyse again.'
		});
	}
	const interval = intervalKind(trend.interval_s);
	if (!interval) {
		return err({
			code: 'interval-not-usable',
			sentence:
				`The log has one row every ${trend.interval_s} s; statistics of harmonics need 3 s or 10 min (600 s) values. ` +
				`Export the log with one of these intervals.`
		});
	}
	const sentences: string[] = [];
	const frequency = trend.series.find((s) => s.measure.kind === 'frequency');
	const series = groupMappings(mappings).map((group) => {
		const columns = group.members.map((m) => ({
			source: trend.series[m.seriesIndex]!,
			toPrimary: m.toPrimary
		}));
		const out = emptySeries({ ...group, interval }, trend.intervalStarts_s.length);
		out.starts_ms.set(trend.intervalStarts_s.map((s) => start_ms + 1000 * s));
		out.lengths_s.fill(trend.interval_s);
		if (frequency) out.frequency_Hz.set(frequency.values);
		if (trend.flagged) out.flagged.set(trend.flagged);
		fillSeries(out, columns, `${group.quantity} on ${group.phase}`, sentences);
		return out;
	});
	return ok({ series, sentences });
}

function intervalKind(interval_s: number): IntervalKind | null {
	if (Math.abs(interval_s - 3) < 0.2) return '3s';
	return Math.abs(interval_s - 600) < 1 ? '10min' : null;
}

function groupMappings(mappings: readonly TrendMapping[]) {
	const groups: { quantity: 'voltage' | 'current'; phase: Phase; members: TrendMapping[] }[] = [];
	for (const mapping of mappings) {
		let group = groups.find((g) => g.quantity === mapping.quantity && g.phase === mapping.phase);
		if (!group) {
			group = { quantity: mapping.quantity, phase: mapping.phase, members: [] };
			groups.push(group);
		}
		group.members.push(mapping);
	}
	return groups;
}

function fillSeries(
	out: IntervalSeries,
	columns: readonly Column[],
	label: string,
	sentences: string[]
): void {
	const rms = columns.find((c) => c.source.measure.kind === 'rms');
	if (rms) out.rms.set(rms.source.values.map((v) => v * Math.abs(rms.toPrimary)));
	const relative: { order: number; column: Column }[] = [];
	for (const column of columns) {
		const { measure, unit } = column.source;
		if (measure.kind === 'thd') {
			sentences.push(
				`Column “${column.source.name}” (${label}) is not used: distortion is computed from the orders.`
			);
		}
		if (measure.kind !== 'order' || measure.order > MAX_ORDER) continue;
		if (unit === 'percent-of-fundamental') {
			relative.push({ order: measure.order, column });
			continue;
		}
		for (let i = 0; i < column.source.values.length; i++) {
			out.subgroups[i * ORDER_STRIDE + measure.order] = column.source.values[i]! * Math.abs(column.toPrimary);
		}
	}
	if (relative.length > 0) makeAbsolute(out, relative, label, sentences);
}

function makeAbsolute(
	out: IntervalSeries,
	relative: readonly { order: number; column: Column }[],
	label: string,
	sentences: string[]
): void {
	const count = out.rms.length;
	const orders = relative.filter(({ order }) => order > 1);
	const hasFundamental = out.subgroups.some((v, i) => i % ORDER_STRIDE === 1 && !Number.isNaN(v));
	if (!hasFundamental) {
		if (out.rms.every(Number.isNaN)) {
			sentences.push(
				`The percentages of ${label} cannot be made absolute: neither order 1 nor the rms is logged. ` +
					`These orders stand as “no data”; map a column with order 1 or the rms.`
			);
			return;
		}
		sentences.push(
			`Order 1 of ${label} is not logged in absolute terms; it is derived from the rms and the logged orders.`
		);
		for (let i = 0; i < count; i++) {
			let sum = 1;
			for (const { column } of orders) sum += (column.source.values[i]! / 100) ** 2;
			out.subgroups[i * ORDER_STRIDE + 1] = out.rms[i]! / Math.sqrt(sum);
		}
	}
	for (const { order, column } of orders) {
		for (let i = 0; i < count; i++) {
			const fundamental = out.subgroups[i * ORDER_STRIDE + 1]!;
			out.subgroups[i * ORDER_STRIDE + order] = (column.source.values[i]! / 100) * fundamental;
		}
	}
}
