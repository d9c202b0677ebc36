import type { RecordingFrame } from '../../recording/sample-source';
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

/** Running sums of one channel over windows with data. Plain data: it crosses to other threads. */
export interface ChannelSums {
	count: number;
	square: number;
	dc: number;
	peak: number;
	/** Per level and order: sum of squares, and number of windows that had the order. */
	squares: Record<Level, Float64Array>;
	counts: Record<Level, Float64Array>;
	/** Per order: sum of the phasors. */
	re: Float64Array;
	im: Float64Array;
}

export function noSums(): ChannelSums {
	const rows = () =>
		Object.fromEntries(LEVELS.map((level) => [level, new Float64Array(ORDER_STRIDE)])) as Record<
			Level,
			Float64Array
		>;
	return {
		count: 0,
		square: 0,
		dc: 0,
		peak: 0,
		squares: rows(),
		counts: rows(),
		re: new Float64Array(ORDER_STRIDE),
		im: new Float64Array(ORDER_STRIDE)
	};
}

/** Adds window `w` of a channel; one without data adds nothing. */
export function addWindow(sums: ChannelSums, channel: ChannelAnalysis, w: number): void {
	const rms = channel.rms[w]!;
	if (Number.isNaN(rms)) return;
	sums.count++;
	sums.square += rms * rms;
	sums.dc += channel.dc[w]!;
	sums.peak = Math.max(sums.peak, channel.peak[w]!);
	const at = w * ORDER_STRIDE;
	for (const level of LEVELS) addSquares(sums.squares[level], sums.counts[level], channel[level], at);
	for (let order = 1; order < ORDER_STRIDE; order++) {
		const value = channel.components[at + order]!;
		const angle = (channel.phases_deg[at + order]! * Math.PI) / 180;
		if (Number.isNaN(value) || Number.isNaN(angle)) continue;
		sums.re[order]! += value * Math.cos(angle);
		sums.im[order]! += value * Math.sin(angle);
	}
}

function addSums(sums: ChannelSums, more: ChannelSums): void {
	sums.count += more.count;
	sums.square += more.square;
	sums.dc += more.dc;
	sums.peak = Math.max(sums.peak, more.peak);
	for (const level of LEVELS) {
		addRow(sums.squares[level], more.squares[level]);
		addRow(sums.counts[level], more.counts[level]);
	}
	addRow(sums.re, more.re);
	addRow(sums.im, more.im);
}

function addRow(row: Float64Array, more: Float64Array): void {
	for (let order = 0; order < ORDER_STRIDE; order++) row[order]! += more[order]!;
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
		private readonly source: RecordingFrame,
		private readonly mappings: readonly ChannelMapping[]
	) {
		this.unflagged = mappings.map(noSums);
		this.flagged = mappings.map(noSums);
	}

	/** A block without flags, as most are, brings its sums with it; in others each window goes where its flag says. */
	accept(block: WindowBlock, flagged: Uint8Array, samplingRate_Hz: number): void {
		if (!flagged.includes(1)) block.sums.forEach((sums, m) => addSums(this.unflagged[m]!, sums));
		else {
			block.windows.forEach((_, w) => {
				const sums = flagged[w] ? this.flagged : this.unflagged;
				block.channels.forEach((channel, m) => addWindow(sums[m]!, channel, w));
			});
		}
		for (const window of block.windows) {
			if (!window.measured) continue;
			this.frequencySum += window.frequency * samplingRate_Hz;
			this.frequencyCount++;
		}
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
