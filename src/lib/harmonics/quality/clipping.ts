import type { RecordingChannel } from '../../recording/recording';
import type { QualityRemark } from '../waveform-analysis';

interface FlatTops {
	longestRun: number;
	runs: number;
	samples: number;
}

/**
 * Looks for crests that are cut off: the extreme value held for longer than the crest of a wave of that resolution can.
 * Where the file tells the recorder's range, a cut at the range is certain; without it a flat top is only suspect.
 */
export function findClipping(
	channel: RecordingChannel,
	from: number,
	to: number,
	samplesPerCycle: number
): QualityRemark[] {
	const { samples } = channel;
	let min = Infinity;
	let max = -Infinity;
	let resolution = Infinity;
	for (let i = from; i < to; i++) {
		const value = samples[i]!;
		if (value < min) min = value;
		if (value > max) max = value;
		const step = Math.abs(value - (i > from ? samples[i - 1]! : NaN));
		if (step > 0 && step < resolution) resolution = step;
	}
	const amplitude = Math.max(Math.abs(min), Math.abs(max));
	if (!(max > min) || !(amplitude > 0)) return [];
	const crest = (samplesPerCycle / Math.PI) * Math.sqrt((2 * resolution) / amplitude) + 1;
	const least = Math.max(3, Math.ceil(2 * crest) + 1);
	const tops = measureFlatTops(samples, from, to, min, max);
	// A block wave rests at its extreme for half of each cycle by nature; that is no sign of clipping.
	if (tops.runs < 2 || tops.longestRun < least || tops.longestRun > 0.3 * samplesPerCycle) return [];
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
				`(${tops.runs} flat tops, up to ${tops.longestRun} samples long, between ${figure(min)} and ` +
				`${figure(max)} ${channel.baseUnit}). Its harmonics are not those of the installation: ` +
				`measure again with a larger range.`
		}
	];
}

function measureFlatTops(
	samples: Float64Array,
	from: number,
	to: number,
	min: number,
	max: number
): FlatTops {
	const tops: FlatTops = { longestRun: 0, runs: 0, samples: 0 };
	let run = 0;
	for (let i = from; i <= to; i++) {
		const value = i < to ? samples[i]! : NaN;
		if ((value === max || value === min) && (run === 0 || value === samples[i - 1])) {
			run++;
			continue;
		}
		if (run >= 3) {
			tops.runs++;
			tops.samples += run;
			if (run > tops.longestRun) tops.longestRun = run;
		}
		run = value === max || value === min ? 1 : 0;
	}
	return tops;
}

function figure(value: number): string {
	return String(Number(value.toPrecision(5)));
}
