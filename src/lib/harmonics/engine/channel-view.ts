import type { CaptureSource } from '../../recording/sample-source';
import { createDecodingKernels } from './decoding-kernels';
import { SampleFeed } from './sample-feed';

/** One channel of a capture, a moving part of it at a time. */
export interface ChannelView {
	/** Samples; position `i` of the capture is `samples[i − base]` after `cover`. */
	readonly samples: Float64Array;
	readonly base: number;
	/** Makes samples [from, to) of the capture available. */
	cover(from: number, to: number): void;
}

/** capacity  samples that one call of `cover` may ask for */
export function viewChannel(source: CaptureSource, channelIndex: number, capacity: number): ChannelView {
	const { samples } = source;
	if (samples.kind === 'memory')
		return { samples: samples.channels[channelIndex]!, base: 0, cover: () => undefined };
	const kernels = createDecodingKernels(1, capacity, samples.layout.rowBytes);
	const feed = new SampleFeed(samples, source.sampleCount, [channelIndex], kernels);
	return {
		samples: kernels.samples[0]!,
		get base() {
			return feed.base;
		},
		cover: (from, to) => feed.cover(from, to)
	};
}
