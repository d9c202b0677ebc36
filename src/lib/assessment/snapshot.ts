import type { IntervalSeries } from '../harmonics/intervals';

/** The greatest value of a capture too short for any percentile. It is shown as indicative, never as a percentile. */
export interface SnapshotValue {
	value_pct: number;
	interval: '3s' | 'window';
	validCount: number;
	flaggedCount: number;
}

/**
 * Greatest valid level of a series of 3-second values or of 10/12-cycle windows.
 * returns  null when no interval holds a value
 */
export function snapshotValue(series: IntervalSeries, levels_pct: Float64Array): SnapshotValue | null {
	let value_pct = NaN;
	let validCount = 0;
	let flaggedCount = 0;
	for (let i = 0; i < levels_pct.length; i++) {
		const level = levels_pct[i]!;
		if (series.flagged[i] === 1) flaggedCount += 1;
		else if (!Number.isNaN(level)) {
			validCount += 1;
			if (!(level <= value_pct)) value_pct = level;
		}
	}
	if (validCount === 0) return null;
	return { value_pct, interval: series.interval === '3s' ? '3s' : 'window', validCount, flaggedCount };
}
