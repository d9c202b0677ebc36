import { decimateMinMax } from '../../charts/decimate-min-max';
import type { BlobStore } from '../storage/blob-store';
import { overviewCount, type SamplesLayout } from './samples-blob';
import { bufferToFloat32, bufferToFloat64 } from './series-codec';

export interface WaveformRange {
	from_s: number;
	to_s: number;
	/** About so many points a channel; more samples than that are given as least and greatest of each stretch. */
	points: number;
}

export interface WaveformSlice {
	from_s: number;
	to_s: number;
	/** Length of the whole capture. */
	duration_s: number;
	/** Samples a channel has in the range. */
	sampleCount: number;
	/** True when the points are the least and greatest of stretches of samples. */
	decimated: boolean;
	/** Interleaved [seconds, value, …] in primary V or A; null breaks the line where samples are missing. */
	channels: { channelIndex: number; points: (number | null)[] }[];
}

/** Sample index ↔ time after sample 0. */
interface SampleClock {
	timeOf(index: number): number;
	/** First sample at or after that time. */
	indexAt(time_s: number): number;
}

function segmentClock(layout: SamplesLayout): SampleClock {
	return {
		timeOf(index) {
			const segment = layout.segments.find((s) => index < s.toSample) ?? layout.segments.at(-1);
			return segment ? segment.start_s + (index - segment.fromSample) / segment.samplingRate_Hz : NaN;
		},
		indexAt(time_s) {
			for (const segment of layout.segments) {
				const inside = Math.ceil((time_s - segment.start_s) * segment.samplingRate_Hz - 1e-6);
				const index = segment.fromSample + Math.max(0, inside);
				if (index < segment.toSample) return index;
			}
			return layout.sampleCount;
		}
	};
}

function stampClock(stamps_s: Float64Array): SampleClock {
	return {
		timeOf: (index) => stamps_s[index] ?? NaN,
		indexAt(time_s) {
			let low = 0;
			let high = stamps_s.length;
			while (low < high) {
				const middle = (low + high) >> 1;
				if (stamps_s[middle]! < time_s) low = middle + 1;
				else high = middle;
			}
			return low;
		}
	};
}

async function clockOf(blobs: BlobStore, layout: SamplesLayout): Promise<SampleClock> {
	if (layout.timeStamps_offset_bytes === null) return segmentClock(layout);
	return stampClock(
		bufferToFloat64(
			await blobs.readSlice(layout.sha256, layout.timeStamps_offset_bytes, 8 * layout.sampleCount)
		)
	);
}

/** A sample range of a stored channel: `from` inclusive, `to` exclusive. */
interface SampleRange {
	from: number;
	to: number;
}

/** Points from the stored overview: least and greatest of equal stretches, drawn at the start and middle of each. */
async function overviewPoints(
	blobs: BlobStore,
	layout: SamplesLayout,
	offset_bytes: number,
	range: SampleRange,
	stretches: number,
	clock: SampleClock
): Promise<Float64Array> {
	const block = layout.overviewBlock;
	const first = Math.floor(range.from / block);
	const count = Math.ceil(range.to / block) - first;
	const row_bytes = 4 * overviewCount(layout.sampleCount, block);
	const base_bytes = offset_bytes + 4 * layout.sampleCount + 4 * first;
	const least = bufferToFloat32(await blobs.readSlice(layout.sha256, base_bytes, 4 * count));
	const greatest = bufferToFloat32(await blobs.readSlice(layout.sha256, base_bytes + row_bytes, 4 * count));
	const timeOf = (at: number) => clock.timeOf(Math.min((first + at) * block, layout.sampleCount - 1));
	const points = new Float64Array(4 * stretches);
	for (let k = 0; k < stretches; k++) {
		const from = Math.floor((k * count) / stretches);
		const to = Math.floor(((k + 1) * count) / stretches);
		let low = NaN;
		let high = NaN;
		for (let i = from; i < to; i++) {
			if (!(least[i]! >= low) && !Number.isNaN(least[i]!)) low = least[i]!;
			if (!(greatest[i]! <= high) && !Number.isNaN(greatest[i]!)) high = greatest[i]!;
		}
		points.set([timeOf(from), low, timeOf((from + to) / 2), high], 4 * k);
	}
	return points;
}

async function samplePoints(
	blobs: BlobStore,
	layout: SamplesLayout,
	offset_bytes: number,
	range: SampleRange,
	stretches: number,
	clock: SampleClock
): Promise<Float64Array> {
	const length_bytes = 4 * (range.to - range.from);
	const bytes = await blobs.readSlice(layout.sha256, offset_bytes + 4 * range.from, length_bytes);
	const samples = Float64Array.from(bufferToFloat32(bytes));
	return decimateMinMax(samples, 0, samples.length, stretches, (i) => clock.timeOf(range.from + i));
}

/**
 * Samples of a stretch of time from the derived samples, raw where they are few, as least and greatest of equal
 * stretches where they are many. Long stretches are answered from the overview, so that few bytes are read.
 * `channelIndexes`: the channels wanted; one that was not mapped is left out.
 */
export async function readWaveformSlice(
	blobs: BlobStore,
	layout: SamplesLayout,
	asked: WaveformRange,
	channelIndexes: readonly number[]
): Promise<WaveformSlice> {
	const clock = await clockOf(blobs, layout);
	const from = Math.min(clock.indexAt(asked.from_s), layout.sampleCount);
	const to = Math.max(from, Math.min(clock.indexAt(asked.to_s), layout.sampleCount));
	const stretches = Math.max(1, Math.floor(asked.points / 2));
	// Below a few blocks a stretch the overview would be coarser than the picture.
	const read = to - from >= 4 * stretches * layout.overviewBlock ? overviewPoints : samplePoints;
	const channels: WaveformSlice['channels'] = [];
	for (const { channelIndex, offset_bytes } of layout.channels) {
		if (!channelIndexes.includes(channelIndex)) continue;
		const points = await read(blobs, layout, offset_bytes, { from, to }, stretches, clock);
		channels.push({
			channelIndex,
			points: Array.from(points, (value) => (Number.isFinite(value) ? Number(value.toPrecision(9)) : null))
		});
	}
	return {
		from_s: asked.from_s,
		to_s: asked.to_s,
		duration_s: layout.duration_s,
		sampleCount: to - from,
		decimated: to - from > 2 * stretches,
		channels
	};
}
