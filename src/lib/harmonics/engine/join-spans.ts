import type { PhasePower, WaveformWindows } from '../waveform-analysis';
import { joinArrays, joinChannels } from './channel-figures';

/** Spans of one capture, in order of time, as one. */
export function joinSpans(spans: readonly WaveformWindows[]): WaveformWindows {
	const first = spans[0]!;
	if (spans.length === 1) return first;
	const column = (name: 'windowStarts_s' | 'windowLengths_s' | 'frequency_Hz') =>
		joinArrays(spans.map((span) => span[name]));
	return {
		windowCount: spans.reduce((sum, span) => sum + span.windowCount, 0),
		windowStarts_s: column('windowStarts_s'),
		windowLengths_s: column('windowLengths_s'),
		frequency_Hz: column('frequency_Hz'),
		flagged: Uint8Array.from(spans.flatMap((span) => [...span.flagged])),
		resync: Uint8Array.from(spans.flatMap((span) => [...span.resync])),
		channels: first.channels.map((_, c) => joinChannels(spans.map((span) => span.channels[c]!))),
		powers: first.powers.map((_, p) => joinPowers(spans.map((span) => span.powers[p]!)))
	};
}

const POWER_COLUMNS = [
	'activePower_W',
	'fundamentalActivePower_W',
	'fundamentalReactivePower_var',
	'displacementFactor',
	'powerFactor'
] as const;

/** The windows of several parts of one phase, one after the other. */
export function joinPowers(parts: readonly PhasePower[]): PhasePower {
	const joined = { ...parts[0]! };
	for (const name of POWER_COLUMNS) joined[name] = joinArrays(parts.map((part) => part[name]));
	return joined;
}
