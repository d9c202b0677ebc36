import { ORDER_STRIDE, type IntervalSeries } from '../intervals';
import type { TrendMapping } from '../trend-intervals';
import type { CaptureEvidence, ChannelEvidence } from './capture-evidence';

const MOST_STRETCHES = 100;
/** A step this much longer than the spacing of the log is a gap. */
const GAP_STEPS = 1.5;

/**
 * What the checks of a trend log are drawn from.
 * series    those of the log's own spacing, one per quantity and conductor
 */
export function trendEvidence(
	series: readonly IntervalSeries[],
	mappings: readonly TrendMapping[],
	start_ms: number,
	statedFrequency_Hz: number | null
): CaptureEvidence {
	const first = series[0];
	const stretches = first ? stretchesOf(first, start_ms) : [];
	return {
		samplingRate_Hz: null,
		frequency_Hz: first ? median(first.frequency_Hz) : null,
		statedFrequency_Hz,
		stretches: stretches.slice(0, MOST_STRETCHES),
		stretchCount: stretches.length,
		channels: series.map((one) => channelOf(one, mappings))
	};
}

function stretchesOf({ starts_ms, lengths_s }: IntervalSeries, start_ms: number) {
	const found: { from_s: number; to_s: number }[] = [];
	for (let i = 0; i < starts_ms.length; i++) {
		const from_s = (starts_ms[i]! - start_ms) / 1000;
		const last = found.at(-1);
		if (last && from_s - last.to_s <= (GAP_STEPS - 1) * lengths_s[i]!) last.to_s = from_s + lengths_s[i]!;
		else found.push({ from_s, to_s: from_s + lengths_s[i]! });
	}
	return found;
}

function channelOf(series: IntervalSeries, mappings: readonly TrendMapping[]): ChannelEvidence {
	const { quantity, phase, rms, subgroups } = series;
	const column = (order: number) => rms.map((_, i) => subgroups[i * ORDER_STRIDE + order]!);
	const levels = Array.from({ length: ORDER_STRIDE }, (_, order) => median(column(order)));
	const highestOrder = levels.findLastIndex((level) => level !== null);
	const fundamental = levels[1] ?? median(rms);
	return {
		channelIndex: mappings.find((m) => m.quantity === quantity && m.phase === phase)?.seriesIndex ?? 0,
		name: `${quantity} ${phase}`,
		quantity,
		phase,
		rms: median(rms),
		dc: null,
		fundamental: fundamental === null ? null : { rms: fundamental, phase_deg: null },
		floor: [],
		excerpt: null,
		missingOrders: levels.flatMap((level, order) =>
			order >= 2 && order < highestOrder && level === null ? [order] : []
		),
		highestOrder: Math.max(0, highestOrder),
		implausible: implausibleOf(series)
	};
}

/** Values below zero, and harmonics greater than the fundamental of a voltage. */
function implausibleOf({ quantity, rms, subgroups }: IntervalSeries): string[] {
	let negative = 0;
	let aboveFundamental = 0;
	for (let i = 0; i < rms.length; i++) {
		const row = subgroups.subarray(i * ORDER_STRIDE, (i + 1) * ORDER_STRIDE);
		if (rms[i]! < 0 || row.some((value) => value < 0)) negative++;
		if (quantity === 'voltage' && row.some((value, order) => order >= 2 && value > row[1]!))
			aboveFundamental++;
	}
	const of = `of ${rms.length} intervals`;
	return [
		...(negative > 0 ? [`${negative} ${of} hold rms values below zero.`] : []),
		...(aboveFundamental > 0
			? [`In ${aboveFundamental} ${of} a voltage harmonic is greater than the fundamental.`]
			: [])
	];
}

/** Middle value of those that are there; null for none. */
function median(values: Float64Array): number | null {
	const sorted = values.filter((value) => !Number.isNaN(value)).sort();
	return sorted.length === 0 ? null : sorted[Math.floor(sorted.length / 2)]!;
}
