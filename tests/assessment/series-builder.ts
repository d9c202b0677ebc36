import { ORDER_STRIDE, type IntervalKind, type IntervalSeries } from '$lib/harmonics/intervals';
import type { AssessedPoint, UncertaintyStatement } from '$lib/assessment/assessment';
import type { Phase } from '$lib/recording/phase';
import { combine } from '$lib/uncertainty/budget';
import { certified } from '$lib/uncertainty/contribution';

const SECONDS: Record<IntervalKind, number> = { window: 0.2, '3s': 3, '10min': 600, '2h': 7200 };

export interface SeriesPlan {
	quantity: 'voltage' | 'current';
	phase: Phase;
	interval: IntervalKind;
	count: number;
	/** UTC instant of the first interval. */
	start?: string;
	/** rms of one order in interval i; undefined orders are 0, NaN is no data. */
	level: (order: number, i: number) => number;
	flagged?: (i: number) => boolean;
	/** Orders above it are NaN. */
	highestOrder?: number;
}

export function makeSeries(plan: SeriesPlan): IntervalSeries {
	const { count } = plan;
	const length_s = SECONDS[plan.interval];
	const start_ms = Date.parse(plan.start ?? '2026-03-02T00:00:00Z');
	const series: IntervalSeries = {
		quantity: plan.quantity,
		phase: plan.phase,
		interval: plan.interval,
		starts_ms: Float64Array.from({ length: count }, (_, i) => start_ms + i * length_s * 1000),
		lengths_s: new Float64Array(count).fill(length_s),
		rms: new Float64Array(count),
		frequency_Hz: new Float64Array(count).fill(60),
		subgroups: new Float64Array(count * ORDER_STRIDE),
		flagged: Uint8Array.from({ length: count }, (_, i) => (plan.flagged?.(i) === true ? 1 : 0))
	};
	for (let i = 0; i < count; i++) {
		let squares = 0;
		for (let order = 0; order < ORDER_STRIDE; order++) {
			const reach = order <= (plan.highestOrder ?? ORDER_STRIDE);
			const rms = reach ? plan.level(order, i) : NaN;
			series.subgroups[i * ORDER_STRIDE + order] = rms;
			if (reach) squares += rms * rms;
		}
		series.rms[i] = Math.sqrt(squares);
	}
	return series;
}

/** A level function from a few orders: 100 % at the fundamental, percents of `full` elsewhere. */
export function spectrum(full: number, percents: Record<number, number>): (order: number) => number {
	return (order) => (order === 1 ? full : ((percents[order] ?? 0) * full) / 100);
}

export const WEEK_10MIN = 1008;
export const DAY_3S = 28_800;

/** 480 V four-wire point, demand current 1000 A, short-circuit ratio 35: 7 % at the 5th, TDD 8 %. */
export const POINT: AssessedPoint = {
	kind: 'pcc',
	system: 'four-wire',
	nominalVoltage_V: 480,
	nominalFrequency_Hz: 60,
	demandCurrent_A: 1000,
	shortCircuitCurrent_A: 35_000
};

/** U = the same share of every reading. */
function shareOfReading(text: string, share_pct: number): UncertaintyStatement {
	return {
		text,
		voltage_pctOfReading: () => share_pct,
		current_pctOfReading: () => share_pct,
		budgetOf: ({ value_pct }) =>
			combine([
				certified(
					{
						source: 'instrument-certificate',
						stated: share_pct,
						statedIn: 'percent of reading',
						sensitivity: value_pct / 100
					},
					2
				)
			])
	};
}

export const EXACT = shareOfReading('none counted', 0);
export const FIVE_PERCENT = shareOfReading('five percent of reading', 5);
