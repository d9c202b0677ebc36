import type { CaptureHandle } from '../capture-handle';
import { decodeText, utf16Of, type TextEncodingName } from './text-decoding';

/** Bytes asked for at a time. */
const BLOCK_BYTES = 1 << 20;
/** Bytes from the top in which encoding, headings and layout must show. */
export const HEAD_BYTES = 262_144;
/** A line longer than this is no row of a table. */
const LONGEST_LINE_BYTES = 8 << 20;

export interface TextHead {
	/** Lines of the first part of the file, in ASCII-compatible bytes decoded to text; the last one may be cut off. */
	lines: string[];
	encoding: TextEncodingName;
	/** Byte offset of a zero byte, which no text has; null for text. */
	binaryAt: number | null;
	/** Whether the whole file is in `lines`. */
	isWhole: boolean;
}

/** A text file as lines of bytes, whatever its length; UTF-16 is turned into UTF-8 on the way. */
export interface TextBlocks {
	name: string;
	size_bytes: number;
	head(): TextHead;
	/**
	 * Every line in turn: the bytes [start, end) of a buffer that is used again, and the line's number from 1.
	 * Ends early where the callback returns false.
	 * returns  false where a line was longer than any table has
	 */
	eachLine(onLine: (bytes: Uint8Array, start: number, end: number, line: number) => boolean): boolean;
}

export function textBlocks(file: CaptureHandle, told: TextEncodingName | null): TextBlocks {
	const first = new Uint8Array(Math.min(file.size_bytes, HEAD_BYTES));
	file.read(0, first);
	const wide = told === 'utf-16le' || told === 'utf-16be' ? told : told === null ? utf16Of(first) : null;
	const hasMark = first[0] === 0xef && first[1] === 0xbb && first[2] === 0xbf;

	/** ASCII-compatible pieces of the file from its first character on. */
	function* pieces(piece_bytes: number): Generator<Uint8Array> {
		const decoder = wide === null ? null : new TextDecoder(wide);
		const encoder = new TextEncoder();
		for (let at = wide === null && hasMark ? 3 : 0; at < file.size_bytes; at += piece_bytes) {
			const bytes = new Uint8Array(Math.min(piece_bytes, file.size_bytes - at));
			file.read(at, bytes);
			yield decoder === null ? bytes : encoder.encode(decoder.decode(bytes, { stream: true }));
		}
	}

	return {
		name: file.name,
		size_bytes: file.size_bytes,
		head() {
			let bytes = pieces(HEAD_BYTES).next().value ?? new Uint8Array(0);
			const isWhole = file.size_bytes <= HEAD_BYTES;
			if (!isWhole) {
				let end = bytes.length;
				while (end > 0 && bytes[end - 1] !== 0x0a && bytes[end - 1] !== 0x0d) end--;
				if (end > 0) bytes = bytes.subarray(0, end);
			}
			const zeroAt = bytes.subarray(0, 4096).indexOf(0);
			const decoded =
				wide !== null || told === null
					? decodeText(bytes)
					: { text: new TextDecoder(told).decode(bytes), encoding: told };
			return {
				lines: decoded.text.split(/\r\n|\n|\r/),
				encoding: wide ?? decoded.encoding,
				binaryAt: zeroAt < 0 ? null : zeroAt,
				isWhole
			};
		},
		eachLine(onLine) {
			let buffer = new Uint8Array(0);
			let line = 1;
			let skipsLineFeed = false;
			for (const piece of pieces(BLOCK_BYTES)) {
				if (buffer.length > LONGEST_LINE_BYTES) return false;
				const bytes = joined(buffer, piece);
				let start = 0;
				for (let at = buffer.length; at < bytes.length; at++) {
					const byte = bytes[at] as number;
					if (byte > 0x0d) continue;
					if (byte === 0x0a && skipsLineFeed && at === start) {
						skipsLineFeed = false;
						start = at + 1;
						continue;
					}
					if (byte !== 0x0a && byte !== 0x0d) continue;
					if (!onLine(bytes, start, at, line++)) return true;
					skipsLineFeed = byte === 0x0d;
					start = at + 1;
				}
				buffer = bytes.slice(start);
			}
			if (buffer.length > LONGEST_LINE_BYTES) return false;
			if (buffer.length > 0) onLine(buffer, 0, buffer.length, line);
			return true;
		}
	};
}

function joined(one: Uint8Array, other: Uint8Array): Uint8Array {
	if (one.length === 0) return other;
	const bytes = new Uint8Array(one.length + other.length);
	bytes.set(one);
	bytes.set(other, one.length);
	return bytes;
}
