export type LegacyEncoding = 'windows-1252' | 'windows-1251' | 'ibm866' | 'gb18030';

interface HighByteCounts {
	high: number;
	/** Bytes in runs that read as pairs of common Chinese characters or symbols (GB 2312 rows 1–9 and 16–55). */
	chinese: number;
	/** Bytes that are letters of the Russian alphabet in Windows-1251 and in code page 866. */
	windowsCyrillic: number;
	dosCyrillic: number;
	longestRun: number;
}

function isCommonChineseLead(byte: number): boolean {
	return (byte >= 0xb0 && byte <= 0xd7) || (byte >= 0xa1 && byte <= 0xa9);
}

function isWindowsCyrillic(byte: number): boolean {
	return byte >= 0xc0 || byte === 0xa8 || byte === 0xb8 || byte === 0xb9;
}

function isDosCyrillic(byte: number): boolean {
	return (byte >= 0x80 && byte <= 0xaf) || (byte >= 0xe0 && byte <= 0xf1) || byte === 0xfc;
}

function isChineseRun(bytes: Uint8Array, start: number, end: number): boolean {
	if ((end - start) % 2 !== 0) return false;
	for (let at = start; at < end; at += 2) {
		if (!isCommonChineseLead(bytes[at] as number) || (bytes[at + 1] as number) < 0xa1) return false;
	}
	return true;
}

function countHighBytes(bytes: Uint8Array): HighByteCounts {
	const counts: HighByteCounts = {
		high: 0,
		chinese: 0,
		windowsCyrillic: 0,
		dosCyrillic: 0,
		longestRun: 0
	};
	for (let start = 0; start < bytes.length; start++) {
		if ((bytes[start] as number) < 0x80) continue;
		let end = start;
		while (end < bytes.length && (bytes[end] as number) >= 0x80) {
			const byte = bytes[end] as number;
			if (isWindowsCyrillic(byte)) counts.windowsCyrillic++;
			if (isDosCyrillic(byte)) counts.dosCyrillic++;
			end++;
		}
		counts.high += end - start;
		counts.longestRun = Math.max(counts.longestRun, end - start);
		if (isChineseRun(bytes, start, end)) counts.chinese += end - start;
		start = end;
	}
	return counts;
}

/**
 * The likeliest 8-bit encoding of a text that is not UTF-8. Western texts set single accented letters between
 * plain ones; Cyrillic and Chinese ones come in longer runs, told apart by the rows of the code table they use.
 * A wrong guess can only garble a name, never a figure: digits and separators are the same in all of them.
 */
export function guessLegacyEncoding(bytes: Uint8Array): LegacyEncoding {
	const counts = countHighBytes(bytes);
	if (counts.high === 0) return 'windows-1252';
	if (counts.chinese >= 0.85 * counts.high) return 'gb18030';
	if (counts.longestRun < 3) return 'windows-1252';
	const likelier = Math.max(counts.windowsCyrillic, counts.dosCyrillic);
	if (likelier < 0.8 * counts.high) return 'windows-1252';
	return counts.windowsCyrillic >= counts.dosCyrillic ? 'windows-1251' : 'ibm866';
}
