import type { SourceChannel } from '../../recording/sample-source';
import type { FlatTops } from '../engine/flat-tops';
import type { QualityRemark } from '../waveform-analysis';

/**
 * Looks for crests that are cut off: the extreme value held for longer than the crest of a wave of that resolution can.
 * Where the file tells the recorder's range, a cut at the range is certain; without it a flat top is only suspect.
 */
export function findClipping(
	channel: SourceChannel,
	tops: FlatTops,
	samplesPerCycle: number
): QualityRemark[] {
	const min = tops.bottom.value;
	const max = tops.top.value;
	const amplitude = Math.max(Math.abs(min), Math.abs(max));
	if (!(max > min) || !(amplitude > 0)) return [];
	const crest = (samplesPerCycle / Math.PI) * Math.sqrt((2 * tops.resolution) / amplitude) + 1;
	const least = Math.max(3, Math.ceil(2 * crest) + 1);
	const runs = tops.top.runs + tops.bottom.runs;
	const longestRun = Math.max(tops.top.longestRun, tops.bottom.longestRun);
	// A block wave rests at its extreme for half of each cycle by nature; that is no sign of clipping.
	if (runs < 2 || longestRun < least || longestRun > 0.3 * samplesPerCycle) return [];
	const range = channel.range;
	const span = range ? range.max - range.min : Infinity;
	const atRange = range !== null && (max >= range.max - 0.001 * span || min <= range.min + 0.001 * span);
	return [
		{
			severity: atRange ? 'blocks' : 'warns',
			code: 'clipped',
			channelIndex: channel.index,
			sentence:
				`${channel.name}: the crest is cut off ${atRange ? 'at the end of the recorder’s range' : 'at a constant value'} ` +
				`(${runs} flat tops, up to ${longestRun} samples long, between ${figure(min)} and ` +
				`${figure(max)} ${channel.baseUnit}). Its harmonics are not those of the installation: ` +
				`measure again with a larger range.`
		}
	];
}

function figure(value: number): string {
	return String(Number(value.toPrecision(5)));
}
