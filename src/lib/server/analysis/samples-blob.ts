import { Readable } from 'node:stream';
import { z } from 'zod';
import type { ChannelMapping } from '../../harmonics/waveform-analysis';
import { viewChannel } from '../../harmonics/engine/channel-view';
import type { CaptureSource } from '../../recording/sample-source';

/** Samples that one overview entry stands for. */
export const OVERVIEW_BLOCK = 256;

/**
 * Where the derived samples lie: per channel, one after the other, `sampleCount` float32 primary values, then the
 * least and then the greatest value of each block of `overviewBlock` samples. Little-endian. When the recording
 * has time stamps instead of rates, they follow as `sampleCount` float64 seconds.
 */
export const samplesLayout = z.object({
	sha256: z.string(),
	sampleCount: z.number().int(),
	overviewBlock: z.number().int().positive(),
	channels: z.array(z.object({ channelIndex: z.number().int(), offset_bytes: z.number().int() })),
	/** Cover [0, sampleCount); empty when `timeStamps_offset_bytes` is given. */
	segments: z.array(
		z.object({
			samplingRate_Hz: z.number().positive(),
			fromSample: z.number().int(),
			toSample: z.number().int(),
			/** Time of `fromSample` after sample 0. */
			start_s: z.number()
		})
	),
	timeStamps_offset_bytes: z.number().int().nullable(),
	duration_s: z.number()
});
export type SamplesLayout = z.infer<typeof samplesLayout>;

export function overviewCount(sampleCount: number, block: number): number {
	return Math.ceil(sampleCount / block);
}

/** Bytes one channel takes: its samples and both rows of its overview. */
function channelBytes(sampleCount: number): number {
	return 4 * (sampleCount + 2 * overviewCount(sampleCount, OVERVIEW_BLOCK));
}

function timedSegments(recording: CaptureSource): SamplesLayout['segments'] {
	let start_s = 0;
	return recording.segments.map((segment) => {
		start_s += segment.gapBefore_s ?? 0;
		const timed = {
			samplingRate_Hz: segment.samplingRate_Hz,
			fromSample: segment.fromSample,
			toSample: segment.toSample,
			start_s
		};
		start_s += (segment.toSample - segment.fromSample) / segment.samplingRate_Hz;
		return timed;
	});
}

/** The layout of the blob that `samplesStream` writes for these mappings; its hash is known once it is stored. */
export function layOutSamples(
	recording: CaptureSource,
	mappings: readonly ChannelMapping[]
): Omit<SamplesLayout, 'sha256'> {
	const { sampleCount, timeStamps_s } = recording;
	const each_bytes = channelBytes(sampleCount);
	const segments = timeStamps_s ? [] : timedSegments(recording);
	const last = segments.at(-1);
	const lastStamp_s = timeStamps_s?.[sampleCount - 1];
	return {
		sampleCount,
		overviewBlock: OVERVIEW_BLOCK,
		channels: mappings.map(({ channelIndex }, i) => ({ channelIndex, offset_bytes: i * each_bytes })),
		segments,
		timeStamps_offset_bytes: timeStamps_s ? mappings.length * each_bytes : null,
		duration_s: last
			? last.start_s + (last.toSample - last.fromSample) / last.samplingRate_Hz
			: (lastStamp_s ?? 0)
	};
}

/** Samples written at a time; whole blocks of the overview. */
const CHUNK = 256 * OVERVIEW_BLOCK;

/**
 * One channel as it lies in the blob, piece by piece: samples, then the least and the greatest of each block.
 * A block with nothing but missing samples has NaN as both its ends.
 */
function* channelParts(
	source: CaptureSource,
	{ channelIndex, toPrimary }: ChannelMapping
): Generator<Buffer> {
	const { sampleCount } = source;
	const view = viewChannel(source, channelIndex, CHUNK);
	const blocks = overviewCount(sampleCount, OVERVIEW_BLOCK);
	const least = new Float32Array(blocks);
	const greatest = new Float32Array(blocks);
	for (let from = 0; from < sampleCount; from += CHUNK) {
		const to = Math.min(sampleCount, from + CHUNK);
		view.cover(from, to);
		const { samples, base } = view;
		const out = new Float32Array(to - from);
		for (let blockStart = from; blockStart < to; blockStart += OVERVIEW_BLOCK) {
			const end = Math.min(to, blockStart + OVERVIEW_BLOCK);
			let low = NaN;
			let high = NaN;
			for (let i = blockStart; i < end; i++) {
				const value = Math.fround(samples[i - base]! * toPrimary);
				out[i - from] = value;
				if (value !== value) continue;
				if (!(value >= low)) low = value;
				if (!(value <= high)) high = value;
			}
			least[blockStart / OVERVIEW_BLOCK] = low;
			greatest[blockStart / OVERVIEW_BLOCK] = high;
		}
		yield bytesOf(out);
	}
	yield bytesOf(least);
	yield bytesOf(greatest);
}

function bytesOf(values: Float32Array | Float64Array): Buffer {
	return Buffer.from(values.buffer, values.byteOffset, values.byteLength);
}

/** The blob, channel by channel and piece by piece, so that a capture of any length can be written. */
export function samplesStream(source: CaptureSource, mappings: readonly ChannelMapping[]): Readable {
	function* parts(): Generator<Buffer> {
		for (const mapping of mappings) {
			if (!source.channels[mapping.channelIndex])
				throw new Error(`channel ${mapping.channelIndex} is mapped, but the recording has none`);
			yield* channelParts(source, mapping);
		}
		if (source.timeStamps_s) yield bytesOf(source.timeStamps_s);
	}
	return Readable.from(parts(), { objectMode: true });
}
