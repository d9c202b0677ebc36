import type { SourceChannel } from '../../recording/sample-source';
import { thd_pctOfFundamental } from '../distortion';
import { joinLines } from '../line-groups';
import { ORDER_STRIDE } from '../intervals';
import { wrapDegrees } from '../phasor';
import type { ChannelAnalysis, ChannelMapping } from '../waveform-analysis';
import type { WindowSpectrumDesign } from '../window-spectrum';

/** Per-order matrices and per-window columns of a channel, by their names in ChannelAnalysis. */
const MATRICES = [
	'components',
	'subgroups',
	'groups',
	'interharmonicSubgroups',
	'interharmonicGroups',
	'phases_deg'
] as const;
const COLUMNS = ['rms', 'dc', 'peak', 'thd_pctOfFundamental'] as const;

/** Room for `count` windows of one channel, everything "no data". */
export function emptyChannel(
	channel: SourceChannel,
	mapping: ChannelMapping,
	count: number
): ChannelAnalysis {
	const rows = (length: number) => new Float64Array(length).fill(NaN);
	return {
		mapping,
		name: channel.name,
		unit: mapping.quantity === 'voltage' ? 'V' : 'A',
		rms: rows(count),
		dc: rows(count),
		peak: rows(count),
		components: rows(count * ORDER_STRIDE),
		subgroups: rows(count * ORDER_STRIDE),
		groups: rows(count * ORDER_STRIDE),
		interharmonicSubgroups: rows(count * ORDER_STRIDE),
		interharmonicGroups: rows(count * ORDER_STRIDE),
		phases_deg: rows(count * ORDER_STRIDE),
		thd_pctOfFundamental: rows(count)
	};
}

/** The windows of several blocks of one channel, one after the other. */
export function joinChannels(parts: readonly ChannelAnalysis[]): ChannelAnalysis {
	const first = parts[0]!;
	if (parts.length === 1) return first;
	const joined = { ...first };
	for (const name of [...MATRICES, ...COLUMNS]) joined[name] = joinArrays(parts.map((part) => part[name]));
	return joined;
}

export function joinArrays(parts: readonly Float64Array[]): Float64Array {
	const joined = new Float64Array(parts.reduce((sum, part) => sum + part.length, 0));
	let at = 0;
	for (const part of parts) {
		joined.set(part, at);
		at += part.length;
	}
	return joined;
}

/** What the time domain tells of one window of a channel, in recorded units. */
export interface WindowLevels {
	rms: number;
	peak: number;
}

/**
 * Turns the spectrum of one window into the figures of its row.
 * spectrum  [≥ 2·lineCount] interleaved, convention of numerics/dft; of the recorded values
 * squares   [lineCount] work space
 * row       index of the window in the channel's arrays
 * returns   nothing; phases stay those of the first point of the window until `referPhases`
 */
export function fillWindow(
	channel: ChannelAnalysis,
	row: number,
	spectrum: Float64Array,
	squares: Float64Array,
	design: WindowSpectrumDesign,
	cyclesPerWindow: 10 | 12,
	levels: WindowLevels
): void {
	const { toPrimary } = channel.mapping;
	const size = Math.abs(toPrimary);
	const turned = toPrimary < 0 ? Math.PI : 0;
	const { points, highestOrder, lineCount } = design;
	const scale = 2 * (size / points) ** 2;
	for (let k = 1; k < lineCount; k++) {
		const re = spectrum[2 * k]!;
		const im = spectrum[2 * k + 1]!;
		squares[k] = (re * re + im * im) * scale;
	}
	const mean = (spectrum[0]! / points) * toPrimary;
	squares[0] = mean * mean;
	const at = row * ORDER_STRIDE;
	channel.rms[row] = levels.rms * size;
	channel.peak[row] = levels.peak * size;
	channel.dc[row] = mean;
	joinLines(squares, cyclesPerWindow, highestOrder, design.reachesBeyondHighest, channel, at);
	const { phases_deg } = channel;
	for (let order = 1; order <= highestOrder; order++) {
		const line = 2 * order * cyclesPerWindow;
		phases_deg[at + order] = ((Math.atan2(spectrum[line + 1]!, spectrum[line]!) + turned) * 180) / Math.PI;
	}
	channel.thd_pctOfFundamental[row] = thd_pctOfFundamental(
		channel.subgroups.subarray(at, at + ORDER_STRIDE),
		channel.rms[row]!,
		highestOrder
	);
}

/** Refers the phases of one window to the fundamental of the reference channel: φ_h − h·φ_ref,1. */
export function referPhases(
	channel: ChannelAnalysis,
	row: number,
	reference_deg: number,
	highestOrder: number
): void {
	const at = row * ORDER_STRIDE;
	for (let order = 1; order <= highestOrder; order++) {
		channel.phases_deg[at + order] = wrapDegrees(channel.phases_deg[at + order]! - order * reference_deg);
	}
}
