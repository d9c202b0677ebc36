import { addWindow, noSums, type ChannelSums } from '../harmonics/engine/overall-figures';
import { ORDER_STRIDE } from '../harmonics/intervals';
import type { ChannelMapping, WaveformWindows } from '../harmonics/waveform-analysis';

/** One channel over all windows of a capture. Rows are [ORDER_STRIDE], index = order, NaN = no data. */
export interface ChannelMeans {
	mapping: ChannelMapping;
	/** V or A; rms and levels are roots of the mean squares of the windows, dc is their mean, peak their greatest. */
	rms: number;
	dc: number;
	peak: number;
	components: Float64Array;
	subgroups: Float64Array;
	/** Angles of the first window as the engine refers them; see ChannelAnalysis. */
	firstPhases_deg: Float64Array;
}

/** Takes the windows of a capture together, span by span; flagged ones count like all others. */
export class CaptureMeans {
	windowCount = 0;
	flaggedCount = 0;
	private readonly sums: ChannelSums[];
	private firstPhases_deg: Float64Array[] = [];

	constructor(private readonly mappings: readonly ChannelMapping[]) {
		this.sums = mappings.map(noSums);
	}

	accept(span: WaveformWindows): void {
		if (this.windowCount === 0)
			this.firstPhases_deg = span.channels.map((channel) => channel.phases_deg.slice(0, ORDER_STRIDE));
		span.channels.forEach((channel, m) => {
			for (let w = 0; w < span.windowCount; w++) addWindow(this.sums[m]!, channel, w);
		});
		for (const flag of span.flagged) this.flaggedCount += flag;
		this.windowCount += span.windowCount;
	}

	channels(): ChannelMeans[] {
		return this.mappings.map((mapping, m) => {
			const sums = this.sums[m]!;
			const { squares, counts, count } = sums;
			// No window with data divides zero by zero: NaN, as it should be.
			const row = (level: 'components' | 'subgroups') =>
				squares[level].map((square, order) => Math.sqrt(square / counts[level][order]!));
			return {
				mapping,
				rms: Math.sqrt(sums.square / count),
				dc: sums.dc / count,
				peak: count > 0 ? sums.peak : NaN,
				components: row('components'),
				subgroups: row('subgroups'),
				firstPhases_deg: this.firstPhases_deg[m] ?? new Float64Array(ORDER_STRIDE).fill(NaN)
			};
		});
	}
}
