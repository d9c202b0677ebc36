import { ORDER_STRIDE, type IntervalKind, type IntervalSeries } from '../harmonics/intervals';
import type { Phase } from '../recording/phase';
import { highestOrderRecorded } from './interval-levels';
import { mergeSeries } from './merge-series';

/** All that was recorded of one quantity on one phase, one series for each interval kind. */
export interface PhaseData {
	quantity: 'voltage' | 'current';
	phase: Phase;
	byKind: Map<IntervalKind, IntervalSeries>;
	/** Highest order with any value; orders above it were out of the recording's reach. */
	highestOrder: number;
	flaggedCount: number;
}

/** Groups interval series by quantity and phase, merging those of several captures. */
export function collectPhaseData(series: IntervalSeries[]): PhaseData[] {
	const groups = new Map<string, IntervalSeries[]>();
	for (const one of series) {
		// No rule reads two-hour values; they are there to be looked at.
		if (one.interval === '2h') continue;
		if (one.subgroups.length !== one.starts_ms.length * ORDER_STRIDE)
			throw new Error('an interval series has a matrix of the wrong length');
		const key = `${one.quantity}/${one.phase}/${one.interval}`;
		groups.set(key, [...(groups.get(key) ?? []), one]);
	}
	const found = new Map<string, PhaseData>();
	for (const parts of groups.values()) {
		const merged = mergeSeries(parts);
		const key = `${merged.quantity}/${merged.phase}`;
		const data = found.get(key) ?? {
			quantity: merged.quantity,
			phase: merged.phase,
			byKind: new Map<IntervalKind, IntervalSeries>(),
			highestOrder: 0,
			flaggedCount: 0
		};
		data.byKind.set(merged.interval, merged);
		found.set(key, data);
	}
	for (const data of found.values()) {
		const all = [...data.byKind.values()];
		data.highestOrder = highestOrderRecorded(all);
		data.flaggedCount = all.reduce(
			(most, one) =>
				Math.max(
					most,
					one.flagged.reduce((count, flag) => count + flag, 0)
				),
			0
		);
	}
	return [...found.values()];
}

/** The series a rule reads: 3 s or ten minutes; null when no series has that spacing. */
export function seriesForInterval(data: PhaseData, interval_s: number): IntervalSeries | null {
	const kind = interval_s === 3 ? '3s' : interval_s === 600 ? '10min' : null;
	return kind === null ? null : (data.byKind.get(kind) ?? null);
}

function hasUnflagged(series: IntervalSeries): boolean {
	return series.flagged.some((flag) => flag === 0);
}

/** Whether a dip, swell or interruption lies in every interval of the recording. */
export function everythingFlagged(data: PhaseData): boolean {
	const all = [...data.byKind.values()].filter((one) => one.flagged.length > 0);
	return all.length > 0 && !all.some(hasUnflagged);
}

/**
 * The series that a snapshot reads: 3-second values, or single windows where there are none without a flag (an event
 * of a second flags three seconds, and the windows beside it still tell something); null for neither.
 */
export function snapshotSeries(data: PhaseData): IntervalSeries | null {
	const threeSecond = data.byKind.get('3s');
	const windows = data.byKind.get('window') ?? null;
	if (threeSecond !== undefined && hasUnflagged(threeSecond)) return threeSecond;
	if (windows !== null && windows.starts_ms.length > 0) return windows;
	return threeSecond ?? null;
}
