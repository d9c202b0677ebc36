import { decodeChannel } from '../numerics/kernels/raw-value';
import type { Recording } from './recording';
import type { CaptureSource } from './sample-source';

/** Bytes of rows read at a time. */
const AT_ONCE_BYTES = 1 << 18;

/** Everything of a source in memory; nothing is copied of what lies there already. */
export function loadSamples({ samples, ...frame }: CaptureSource): Recording {
	const arrays =
		samples.kind === 'memory'
			? samples.channels
			: frame.channels.map(() => new Float64Array(frame.sampleCount));
	if (samples.kind === 'rows') {
		const { layout } = samples;
		const rowsAtOnce = Math.max(1, Math.floor(AT_ONCE_BYTES / layout.rowBytes));
		const block = new Uint8Array(rowsAtOnce * layout.rowBytes);
		const view = new DataView(block.buffer);
		for (let row = 0; row < frame.sampleCount; row += rowsAtOnce) {
			const count = Math.min(rowsAtOnce, frame.sampleCount - row);
			samples.read(row, count, block);
			for (let c = 0; c < arrays.length; c++) decodeChannel(view, layout, c, count, arrays[c]!, row);
		}
	}
	return {
		...frame,
		channels: frame.channels.map((channel, index) => ({ ...channel, samples: arrays[index]! }))
	};
}
