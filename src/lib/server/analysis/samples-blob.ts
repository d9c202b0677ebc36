import { Readable } from 'node:stream';
import { z } from 'zod';
import type { ChannelMapping } from '../../harmonics/waveform-analysis';
import type { Recording } from '../../recording/recording';

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

function timedSegments(recording: Recording): SamplesLayout['segments'] {
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
	recording: Recording,
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

/** One channel as it lies in the blob. A block with nothing but missing samples has NaN as both its ends. */
export function channelSamples(samples: Float64Array, toPrimary: number): Buffer {
	const n = samples.length;
	const blocks = overviewCount(n, OVERVIEW_BLOCK);
	const out = new Float32Array(n + 2 * blocks);
	for (let i = 0; i < n; i++) out[i] = samples[i]! * toPrimary;
	for (let block = 0; block < blocks; block++) {
		let least = NaN;
		let greatest = NaN;
		const end = Math.min(n, (block + 1) * OVERVIEW_BLOCK);
		for (let i = block * OVERVIEW_BLOCK; i < end; i++) {
			const value = out[i]!;
			if (!(value >= least)) least = Number.isNaN(value) ? least : value;
			if (!(value <= greatest)) greatest = Number.isNaN(value) ? greatest : value;
		}
		out[n + block] = least;
		out[n + blocks + block] = greatest;
	}
	return Buffer.from(out.buffer);
}

/** The blob, channel by channel, so that only one channel's copy is held at a time. */
export function samplesStream(recording: Recording, mappings: readonly ChannelMapping[]): Readable {
	function* parts(): Generator<Buffer> {
		for (const mapping of mappings) {
			const channel = recording.channels[mapping.channelIndex];
			if (!channel) throw new Error(`channel ${mapping.channelIndex} is mapped, but the recording has none`);
			yield channelSamples(channel.samples, mapping.toPrimary);
		}
		const { timeStamps_s } = recording;
		if (timeStamps_s)
			yield Buffer.from(timeStamps_s.buffer, timeStamps_s.byteOffset, timeStamps_s.byteLength);
	}
	return Readable.from(parts(), { objectMode: true });
}
