import type { CaptureSource } from '../../recording/sample-source';
import { thd_pctOfFundamental } from '../distortion';
import { MAX_ORDER, ORDER_STRIDE } from '../intervals';
import type { ChannelAnalysis, ChannelMapping } from '../waveform-analysis';
import { emptyChannel } from './channel-figures';
import type { WindowBlock } from './window-analyst';

/** Levels that are taken together by root mean square. */
const LEVELS = [
	'components',
	'subgroups',
	'groups',
	'interharmonicSubgroups',
	'interharmonicGroups'
] as const;

type Level = (typeof LEVELS)[number];

/** Running sums of one channel. */
class ChannelSums {
	count = 0;
	square = 0;
	dc = 0;
	peak = 0;
	/** Per level and order: sum of squares, and number of windows that had the order. */
	readonly squares = sumsFor(LEVELS);
	readonly counts = sumsFor(LEVELS);
	/** Per order: sum of the phasors. */
	readonly re = new Float64Array(ORDER_STRIDE);
	readonly im = new Float64Array(ORDER_STRIDE);

	add(channel: ChannelAnalysis, w: number): void {
		const rms = channel.rms[w]!;
		if (Number.isNaN(rms)) return;
		this.count++;
		this.square += rms * rms;
		this.dc += channel.dc[w]!;
		this.peak = Math.max(this.peak, channel.peak[w]!);
		const at = w * ORDER_STRIDE;
		for (const level of LEVELS) addSquares(this.squares[level], this.counts[level], channel[level], at);
		for (let order = 1; order < ORDER_STRIDE; order++) {
			const value = channel.components[at + order]!;
			const angle = (channel.phases_deg[at + order]! * Math.PI) / 180;
			if (Number.isNaN(value) || Number.isNaN(angle)) continue;
			this.re[order]! += value * Math.cos(angle);
			this.im[order]! += value * Math.sin(angle);
		}
	}
}

function sumsFor(levels: readonly Level[]): Record<Level, Float64Array> {
	return Object.fromEntries(levels.map((level) => [level, new Float64Array(ORDER_STRIDE)])) as Record<
		Level,
		Float64Array
	>;
}

function addSquares(squares: Float64Array, counts: Float64Array, values: Float64Array, at: number): void {
	for (let order = 0; order < ORDER_STRIDE; order++) {
		const value = values[at + order]!;
		if (Number.isNaN(value)) continue;
		squares[order]! += value * value;
		counts[order]!++;
	}
}

/**
 * All windows of a capture taken together: levels by root mean square, dc by mean, peak by maximum, angles as those of the
 * summed phasors. Flagged windows stay out as long as there is one that is not flagged.
 */
export class OverallFigures {
	private readonly unflagged: ChannelSums[];
	private readonly flagged: ChannelSums[];
	private frequencySum = 0;
	private frequencyCount = 0;

	constructor(
		private readonly source: CaptureSource,
		private readonly mappings: readonly ChannelMapping[]
	) {
		this.unflagged = mappings.map(() => new ChannelSums());
		this.flagged = mappings.map(() => new ChannelSums());
	}

	accept(block: WindowBlock, flagged: Uint8Array, samplingRate_Hz: number): void {
		block.windows.forEach((window, w) => {
			const sums = flagged[w] ? this.flagged : this.unflagged;
			block.channels.forEach((channel, m) => sums[m]!.add(channel, w));
			if (!window.measured) return;
			this.frequencySum += window.frequency * samplingRate_Hz;
			this.frequencyCount++;
		});
	}

	meanFrequency_Hz(): number | null {
		return this.frequencyCount > 0 ? this.frequencySum / this.frequencyCount : null;
	}

	/** Every channel as one row. */
	channels(): ChannelAnalysis[] {
		return this.mappings.map((mapping, m) => {
			const clean = this.unflagged[m]!;
			return rowOf(
				emptyChannel(this.source.channels[mapping.channelIndex]!, mapping, 1),
				clean.count > 0 ? clean : this.flagged[m]!
			);
		});
	}
}

function rowOf(row: ChannelAnalysis, sums: ChannelSums): ChannelAnalysis {
	if (sums.count === 0) return row;
	row.rms[0] = Math.sqrt(sums.square / sums.count);
	row.dc[0] = sums.dc / sums.count;
	row.peak[0] = sums.peak;
	let highestOrder = 1;
	for (const level of LEVELS) {
		for (let order = 0; order < ORDER_STRIDE; order++) {
			const count = sums.counts[level][order]!;
			if (count > 0) row[level][order] = Math.sqrt(sums.squares[level][order]! / count);
		}
	}
	for (let order = 1; order <= MAX_ORDER; order++) {
		if (sums.counts.components[order] === 0) continue;
		highestOrder = order;
		const re = sums.re[order]!;
		const im = sums.im[order]!;
		if (re !== 0 || im !== 0) row.phases_deg[order] = (Math.atan2(im, re) * 180) / Math.PI;
	}
	row.thd_pctOfFundamental[0] = thd_pctOfFundamental(row.subgroups, row.rms[0], highestOrder);
	return row;
}
