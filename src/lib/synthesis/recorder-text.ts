import type { TextEncoding, TextHabits } from './comtrade-writer-header';

/** Lines as a recorder with these habits writes them. */
export function writeLines(lines: readonly string[], habits: TextHabits = {}): Uint8Array {
	const { lineEnd = '\r\n', encoding = 'utf-8', padded = false, endMark = false } = habits;
	const ends = lineEnd === 'mixed' ? ['\r\n', '\n', '\r'] : [lineEnd];
	const text = lines.map((line, index) => {
		const isMarker = line.startsWith('---');
		const written = padded && !isMarker ? `${line.replaceAll(',', '  , ')}   ` : line;
		return written + ends[index % ends.length]!;
	});
	return encodeText(text.join('') + (endMark ? '\u001a' : ''), encoding);
}

function encodeText(text: string, encoding: TextEncoding): Uint8Array {
	switch (encoding) {
		case 'utf-8':
			return new TextEncoder().encode(text);
		case 'utf-8 with mark':
			return new TextEncoder().encode(`\ufeff${text}`);
		case 'utf-16le':
		case 'utf-16be':
			return encodeWide(`\ufeff${text}`, encoding === 'utf-16le');
		default:
			return encodeByTable(text, encoding);
	}
}

function encodeWide(text: string, littleEndian: boolean): Uint8Array {
	const bytes = new Uint8Array(2 * text.length);
	const view = new DataView(bytes.buffer);
	for (let at = 0; at < text.length; at++) view.setUint16(2 * at, text.charCodeAt(at), littleEndian);
	return bytes;
}

const tables = new Map<string, Map<string, number[]>>();

/** The way back of an old code table: what each of its bytes, or pairs of bytes, stands for. */
function tableOf(encoding: string): Map<string, number[]> {
	const known = tables.get(encoding);
	if (known !== undefined) return known;
	const table = new Map<string, number[]>();
	const decoder = new TextDecoder(encoding);
	const note = (...bytes: number[]) => {
		const letter = decoder.decode(Uint8Array.from(bytes));
		if ([...letter].length === 1 && letter !== '\ufffd' && !table.has(letter)) table.set(letter, bytes);
	};
	for (let byte = 0; byte < 0x80; byte++) note(byte);
	for (let byte = 0x80; byte < 0x100; byte++) {
		if (encoding !== 'gb18030') note(byte);
		else for (let second = 0xa1; second < 0xff; second++) note(byte, second);
	}
	tables.set(encoding, table);
	return table;
}

function encodeByTable(text: string, encoding: string): Uint8Array {
	const table = tableOf(encoding);
	return Uint8Array.from([...text].flatMap((letter) => table.get(letter) ?? [0x3f]));
}
