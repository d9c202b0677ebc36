import { ORDER_STRIDE, type IntervalSeries } from '../harmonics/intervals';
import type { LimitBasis } from '../limits/limit-set';

/** What is read out of each interval: one order, or a total over a run of orders. */
export type LevelItem = { kind: 'order'; order: number } | { kind: 'total'; from: number; to: number };

/** 100 % of a level: a fixed figure (nominal voltage, demand current) or the interval's own fundamental. */
export type LevelBase = { kind: 'fixed'; value: number } | { kind: 'fundamental' };

export interface IntervalLevels {
	/** [n] percent of the base; NaN = no data in that interval. */
	levels_pct: Float64Array;
	/** True when a total leaves out orders that were not recorded, and so is only a lower bound. */
	isLowerBound: boolean;
}

export function levelBaseOf(basis: LimitBasis, fixed: number | null): LevelBase | null {
	if (basis === 'fundamental') return { kind: 'fundamental' };
	return fixed === null || !(fixed > 0) ? null : { kind: 'fixed', value: fixed };
}

/**
 * Levels of one item over all intervals of a series.
 * lowerBound  true: a total sums the orders that are there; false: one missing order makes it NaN
 * returns     percent; NaN where the order, any order of a strict total, or the fundamental is missing or zero
 */
export function intervalLevels(
	series: IntervalSeries,
	item: LevelItem,
	base: LevelBase,
	lowerBound = false
): IntervalLevels {
	const n = series.starts_ms.length;
	const levels_pct = new Float64Array(n);
	const { subgroups } = series;
	let isLowerBound = false;
	for (let i = 0; i < n; i++) {
		const row = i * ORDER_STRIDE;
		const full = base.kind === 'fixed' ? base.value : subgroups[row + 1]!;
		let value: number;
		if (item.kind === 'order') value = subgroups[row + item.order]!;
		else {
			let sum = 0;
			let present = 0;
			for (let order = item.from; order <= item.to; order++) {
				const rms = subgroups[row + order]!;
				if (lowerBound && Number.isNaN(rms)) continue;
				sum += rms * rms;
				present += 1;
			}
			if (present <= item.to - item.from) isLowerBound = true;
			value = present === 0 ? NaN : Math.sqrt(sum);
		}
		levels_pct[i] = full > 0 ? (100 * value) / full : NaN;
	}
	return { levels_pct, isLowerBound };
}

/** Highest order with any value in any of the series; 0 when there is none. Orders above it were out of reach. */
export function highestOrderRecorded(allSeries: IntervalSeries[]): number {
	for (let order = ORDER_STRIDE - 1; order >= 1; order--) {
		for (const { subgroups } of allSeries) {
			for (let at = order; at < subgroups.length; at += ORDER_STRIDE) {
				if (!Number.isNaN(subgroups[at]!)) return order;
			}
		}
	}
	return 0;
}
