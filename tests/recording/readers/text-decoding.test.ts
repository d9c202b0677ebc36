import { describe, expect, it } from 'vitest';
import { decodeText } from '$lib/recording/readers/text-decoding';

/** Bytes of a text in an 8-bit Cyrillic code page, by the platform's own table read backwards. */
function encodeWith(label: string, text: string): Uint8Array {
	const table = new Map<string, number>();
	for (let byte = 0; byte < 256; byte++) table.set(new TextDecoder(label).decode(Uint8Array.of(byte)), byte);
	return Uint8Array.from([...text].map((character) => table.get(character) ?? 0x3f));
}

function utf16le(text: string): Uint8Array {
	return Uint8Array.from([...text].flatMap((c) => [c.charCodeAt(0) & 0xff, c.charCodeAt(0) >> 8]));
}

describe('text of unknown encoding', () => {
	it.each([
		['windows-1251', 'Подстанция Южная,РЕЛЕ-5,1999\r\n1,Ток фазы А'],
		['ibm866', 'Подстанция Южная,РЕЛЕ-5,1999\r\n1,Ток фазы А'],
		['windows-1252', 'Estación Nº 3 Überlandwerk,Gerät,1999\r\nprès de la forêt']
	])('%s', (label, text) => {
		const decoded = decodeText(encodeWith(label, text));
		expect(decoded.encoding).toBe(label);
		expect(decoded.text).toBe(text);
	});

	it('GB18030', () => {
		// 变电站 in GB 2312: B1E4 B5E7 D5BE.
		const bytes = Uint8Array.of(0xb1, 0xe4, 0xb5, 0xe7, 0xd5, 0xbe, 0x2c, 0x31, 0x39, 0x39, 0x39);
		expect(decodeText(bytes)).toEqual({ text: '变电站,1999', encoding: 'gb18030', byteOrderMark: false });
	});

	it('UTF-8 with and without a mark', () => {
		const plain = new TextEncoder().encode('Überlandwerk');
		expect(decodeText(plain)).toEqual({ text: 'Überlandwerk', encoding: 'utf-8', byteOrderMark: false });
		const marked = Uint8Array.of(0xef, 0xbb, 0xbf, ...plain);
		expect(decodeText(marked)).toEqual({ text: 'Überlandwerk', encoding: 'utf-8', byteOrderMark: true });
	});

	it('UTF-16 with and without a mark', () => {
		expect(decodeText(utf16le('Station,R1,1999')).text).toBe('Station,R1,1999');
		expect(decodeText(Uint8Array.of(0xff, 0xfe, ...utf16le('Überland')))).toEqual({
			text: 'Überland',
			encoding: 'utf-16le',
			byteOrderMark: true
		});
	});
});
