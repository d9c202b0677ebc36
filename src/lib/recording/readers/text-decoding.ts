import { guessLegacyEncoding, type LegacyEncoding } from './legacy-encoding';

export type TextEncodingName = 'utf-8' | 'utf-16le' | 'utf-16be' | LegacyEncoding;

export interface DecodedText {
	text: string;
	encoding: TextEncodingName;
	/** Whether a byte-order mark stood in front; it is not part of the text. */
	byteOrderMark: boolean;
}

/** How the encodings are called in sentences. */
export const ENCODING_NAMES: Record<TextEncodingName, string> = {
	'utf-8': 'UTF-8',
	'utf-16le': 'UTF-16',
	'utf-16be': 'UTF-16 (big-endian)',
	'windows-1252': 'ISO 8859-1',
	'windows-1251': 'Windows-1251',
	ibm866: 'code page 866',
	gb18030: 'GB18030'
};

/** Bytes looked at when the encoding has to be guessed. */
const GUESS_LENGTH = 65_536;

/** UTF-16 by its mark, or by zero bytes on one side of nearly every pair; null for everything else. */
export function utf16Of(bytes: Uint8Array): 'utf-16le' | 'utf-16be' | null {
	if (bytes[0] === 0xff && bytes[1] === 0xfe) return 'utf-16le';
	if (bytes[0] === 0xfe && bytes[1] === 0xff) return 'utf-16be';
	const length = Math.min(bytes.length, 512) & ~1;
	if (length < 8) return null;
	let evenZeros = 0;
	let oddZeros = 0;
	for (let at = 0; at < length; at += 2) {
		if (bytes[at] === 0) evenZeros++;
		if (bytes[at + 1] === 0) oddZeros++;
	}
	const pairs = length / 2;
	if (oddZeros > 0.8 * pairs && evenZeros < 0.05 * pairs) return 'utf-16le';
	if (evenZeros > 0.8 * pairs && oddZeros < 0.05 * pairs) return 'utf-16be';
	return null;
}

function hasUtf8Mark(bytes: Uint8Array): boolean {
	return bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf;
}

function isUtf8(bytes: Uint8Array): boolean {
	try {
		new TextDecoder('utf-8', { fatal: true }).decode(bytes);
		return true;
	} catch {
		return false;
	}
}

/** Text of a header file, whatever its age: marks first, then UTF-8 if valid, then the likeliest 8-bit encoding. */
export function decodeText(bytes: Uint8Array): DecodedText {
	const wide = utf16Of(bytes);
	if (wide !== null) {
		const byteOrderMark = bytes[0] === 0xff || bytes[0] === 0xfe;
		return { text: new TextDecoder(wide).decode(bytes), encoding: wide, byteOrderMark };
	}
	const encoding: TextEncodingName = isUtf8(bytes)
		? 'utf-8'
		: guessLegacyEncoding(bytes.subarray(0, GUESS_LENGTH));
	return { text: new TextDecoder(encoding).decode(bytes), encoding, byteOrderMark: hasUtf8Mark(bytes) };
}

/**
 * The same bytes in an encoding whose digits, separators and line ends are single ASCII bytes, so that
 * large tables can be parsed without making a string of them. Only UTF-16 has to be rewritten.
 */
export function asciiCompatibleBytes(bytes: Uint8Array): { bytes: Uint8Array; wasUtf16: boolean } {
	const wide = utf16Of(bytes);
	if (wide !== null)
		return { bytes: new TextEncoder().encode(new TextDecoder(wide).decode(bytes)), wasUtf16: true };
	return { bytes: hasUtf8Mark(bytes) ? bytes.subarray(3) : bytes, wasUtf16: false };
}
