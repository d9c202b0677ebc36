import type { CaptureSource } from '../../recording/sample-source';
import { createDecodingKernels } from './decoding-kernels';
import { SampleFeed } from './sample-feed';

/** Some channels of a capture, a moving part of them at a time. */
export interface ChannelsView {
	/** Per channel samples; position `i` of the capture is `samples[c][i − base]` after `cover`. */
	readonly samples: readonly Float64Array[];
	readonly base: number;
	/** Makes samples [from, to) of the capture available. */
	cover(from: number, to: number): void;
}

/** One channel of a capture; see ChannelsView. */
export interface ChannelView {
	readonly samples: Float64Array;
	readonly base: number;
	cover(from: number, to: number): void;
}

/** capacity  samples that one call of `cover` may ask for */
export function viewChannels(
	source: CaptureSource,
	channelIndexes: readonly number[],
	capacity: number
): ChannelsView {
	const { samples } = source;
	if (samples.kind === 'memory') {
		return {
			samples: channelIndexes.map((index) => samples.channels[index]!),
			base: 0,
			cover: () => undefined
		};
	}
	const kernels = createDecodingKernels(channelIndexes.length, capacity, samples.layout.rowBytes);
	const feed = new SampleFeed(samples, source.sampleCount, channelIndexes, kernels);
	return {
		samples: kernels.samples,
		get base() {
			return feed.base;
		},
		cover: (from, to) => feed.cover(from, to)
	};
}

export function viewChannel(source: CaptureSource, channelIndex: number, capacity: number): ChannelView {
	const view = viewChannels(source, [channelIndex], capacity);
	return {
		samples: view.samples[0]!,
		get base() {
			return view.base;
		},
		cover: (from, to) => view.cover(from, to)
	};
}
