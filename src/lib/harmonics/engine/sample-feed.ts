import type { RowLayout, SignalKernels } from '../../numerics/kernels/signal-kernels';
import type { SampleSource } from '../../recording/sample-source';

/**
 * Keeps a moving stretch of a capture in the kernels' buffers.
 * Positions of the capture minus `base` are positions in the buffers.
 */
export class SampleFeed {
	/** Sample of the capture at the start of the buffers. */
	base = 0;
	private held = 0;
	private readonly layout: RowLayout | null;

	/**
	 * channelIndexes  channels of the capture, in the order of the kernels' channels
	 * sampleCount     samples that the capture has
	 */
	constructor(
		private readonly source: SampleSource,
		private readonly sampleCount: number,
		private readonly channelIndexes: readonly number[],
		private readonly kernels: SignalKernels
	) {
		this.layout = source.kind === 'rows' ? layoutOf(source.layout, channelIndexes) : null;
	}

	/** Forgets what is held, so that the next stretch begins a buffer whatever was asked for before. */
	restart(): void {
		this.held = 0;
	}

	/** Makes samples [from, to) of the capture available; at most as many as the buffers hold. */
	cover(from: number, to: number): void {
		const { capacity } = this.kernels.shape;
		if (to - from > capacity) throw new RangeError(`${to - from} samples do not fit ${capacity}`);
		if (from >= this.base && to <= this.base + this.held) return;
		const kept = from >= this.base ? Math.max(0, this.base + this.held - from) : 0;
		if (kept > 0 && from > this.base) this.kernels.slide(from - this.base, kept);
		this.base = from;
		this.held = kept;
		const end = Math.min(this.sampleCount, from + capacity);
		this.load(from + kept, end);
		this.held = end - from;
	}

	private load(from: number, to: number): void {
		const { source, kernels } = this;
		if (source.kind === 'memory') {
			this.channelIndexes.forEach((index, c) =>
				kernels.samples[c]!.set(source.channels[index]!.subarray(from, to), from - this.base)
			);
			return;
		}
		const atOnce = Math.floor(kernels.raw.length / source.layout.rowBytes);
		for (let row = from; row < to; row += atOnce) {
			const count = Math.min(atOnce, to - row);
			source.read(row, count, kernels.raw);
			kernels.decodeRows(this.layout!, count, row - this.base);
		}
	}
}

function layoutOf(whole: RowLayout, channelIndexes: readonly number[]): RowLayout {
	const pick = (values: readonly number[]) => channelIndexes.map((index) => values[index]!);
	return {
		...whole,
		offsets: pick(whole.offsets),
		factors: pick(whole.factors),
		additions: pick(whole.additions)
	};
}
