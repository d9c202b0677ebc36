import type { CaptureSource } from '../../recording/sample-source';
import { createDecodingKernels } from './decoding-kernels';
import { SampleFeed } from './sample-feed';

/**
 * Samples [from, to) of some channels.
 * returns  [channels][to − from]; views of the capture's own arrays where those lie in memory: do not write
 */
export function readStretch(
	source: CaptureSource,
	channelIndexes: readonly number[],
	from: number,
	to: number
): Float64Array[] {
	const { samples, sampleCount } = source;
	if (samples.kind === 'memory')
		return channelIndexes.map((index) => samples.channels[index]!.subarray(from, to));
	const kernels = createDecodingKernels(channelIndexes.length, to - from, samples.layout.rowBytes);
	new SampleFeed(samples, sampleCount, channelIndexes, kernels).cover(from, to);
	return [...kernels.samples];
}
