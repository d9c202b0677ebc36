import { utf16Of } from '../text-decoding';
import type { SampleScratch } from '../../sample-scratch';
import { headOf, type DataPart } from './data-part';

const BLOCK_BYTES = 1 << 16;

/**
 * The same text in an encoding whose digits, separators and line ends are single bytes: UTF-16 is rewritten into scratch, a
 * byte-order mark is passed over, and everything else stays as it is.
 */
export function asEightBitText(part: DataPart, scratch: SampleScratch): DataPart {
	const { file, start, end } = part;
	const head = headOf(part, 512);
	const wide = utf16Of(head);
	if (wide === null) {
		const isMarked = head[0] === 0xef && head[1] === 0xbb && head[2] === 0xbf;
		return isMarked ? { ...part, start: start + 3 } : part;
	}
	const decoder = new TextDecoder(wide);
	const encoder = new TextEncoder();
	const into = scratch.create();
	const block = new Uint8Array(BLOCK_BYTES);
	for (let at = start; at < end; at += BLOCK_BYTES) {
		const piece = block.subarray(0, Math.min(BLOCK_BYTES, end - at));
		file.read(at, piece);
		into.append(encoder.encode(decoder.decode(piece, { stream: true })));
	}
	into.append(encoder.encode(decoder.decode()));
	const sealed = into.seal();
	return { ...part, file: { ...sealed, name: file.name }, start: 0, end: sealed.size_bytes };
}
