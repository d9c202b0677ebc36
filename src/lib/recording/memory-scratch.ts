import type { SampleScratch } from './sample-scratch';

/** Scratch that is held in memory: for captures that are small, or read whole in any case. */
export function memoryScratch(): SampleScratch {
	return {
		create() {
			let bytes = new Uint8Array(1 << 12);
			let length = 0;
			return {
				append(piece) {
					if (length + piece.length > bytes.length) {
						const grown = new Uint8Array(Math.max(2 * bytes.length, length + piece.length));
						grown.set(bytes.subarray(0, length));
						bytes = grown;
					}
					bytes.set(piece, length);
					length += piece.length;
				},
				seal() {
					const end = length;
					return {
						name: 'samples',
						size_bytes: end,
						read(offset_bytes, into) {
							if (offset_bytes + into.length > end) throw new Error(`samples end at byte ${end}`);
							into.set(bytes.subarray(offset_bytes, offset_bytes + into.length));
						}
					};
				}
			};
		}
	};
}
