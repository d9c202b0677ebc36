import type { CaptureFile } from '../../src/lib/recording/recording';
import type { InputRandom } from './input-random';

/** Numbers and words that readers of numbers stumble over. */
const ODD_NUMBERS = [
	'999999999999',
	'4294967296',
	'2147483648',
	'-2147483649',
	'65536',
	'-1',
	'0',
	'-0',
	'NaN',
	'Infinity',
	'1e400',
	'1e308',
	'-1e400',
	'1e-400',
	'0x10',
	'1,5',
	'1.5.5',
	'.',
	'-',
	'',
	'99999',
	'00000000000000000000000001',
	'9'.repeat(400)
];

/** Whole numbers of 8, 16 and 32 bits, at the ends of their ranges. */
const ODD_WORDS = [0, 1, 0x7f, 0x80, 0xff, 0x7fff, 0x8000, 0xffff, 0x7fffffff, 0x80000000, 0xffffffff];
const LINE_ENDS = ['\r\n', '\n', '\r', '\n\r', '\r\r\n', '\u0000\n', ' \r\n', '\n\n'];
const NUMBER = /[-+]?\d+(?:[.,]\d+)?(?:[eE][-+]?\d+)?/g;

/** The longest that a mutated file may become: most mutations are told apart on short ones. */
const MOST_BYTES = 1 << 18;

type Mutation = (bytes: Uint8Array, random: InputRandom, others: readonly Uint8Array[]) => Uint8Array;

function joined(...parts: readonly Uint8Array[]): Uint8Array {
	const whole = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
	let at = 0;
	for (const part of parts) {
		whole.set(part, at);
		at += part.length;
	}
	return whole;
}

/** Characters as bytes, one for one, so that text can be edited in files of any encoding. */
const asText = (bytes: Uint8Array) =>
	Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length).toString('latin1');
const asBytes = (text: string) => new Uint8Array(Buffer.from(text, 'latin1'));

function stretch(bytes: Uint8Array, random: InputRandom, most: number): [number, number] {
	const from = random.whole(bytes.length + 1);
	return [from, Math.min(bytes.length, from + 1 + random.whole(most))];
}

function editLines(bytes: Uint8Array, edit: (lines: string[]) => void): Uint8Array {
	const lines = asText(bytes).split('\n');
	edit(lines);
	return asBytes(lines.join('\n'));
}

const MUTATIONS: Record<string, Mutation> = {
	'flip a bit': (bytes, random) => {
		if (bytes.length === 0) return bytes;
		const out = bytes.slice();
		out[random.whole(out.length)]! ^= 1 << random.whole(8);
		return out;
	},
	'replace bytes': (bytes, random) => {
		const out = bytes.slice();
		const [from, to] = stretch(out, random, 8);
		for (let i = from; i < to; i++) out[i] = random.whole(256);
		return out;
	},
	'cut the end': (bytes, random) => bytes.slice(0, random.whole(bytes.length + 1)),
	'cut the beginning': (bytes, random) => bytes.slice(random.whole(Math.min(bytes.length, 64) + 1)),
	'take a block out': (bytes, random) => {
		const [from, to] = stretch(bytes, random, Math.max(8, bytes.length >> 2));
		return joined(bytes.subarray(0, from), bytes.subarray(to));
	},
	'repeat a block': (bytes, random) => {
		const [from, to] = stretch(bytes, random, 512);
		const block = bytes.subarray(from, to);
		const times = 1 + random.whole(random.chance(0.1) ? 64 : 3);
		return joined(bytes.subarray(0, to), ...Array.from({ length: times }, () => block), bytes.subarray(to));
	},
	'splice another file in': (bytes, random, others) => {
		const other = random.pick(others);
		const [from, to] = stretch(other, random, 2048);
		const [at, end] = stretch(bytes, random, 256);
		return joined(
			bytes.subarray(0, at),
			other.subarray(from, to),
			bytes.subarray(random.chance(0.5) ? at : end)
		);
	},
	'an odd number for a number': (bytes, random) => {
		const text = asText(bytes);
		const found = [...text.matchAll(NUMBER)];
		if (found.length === 0) return bytes;
		// Headings hold the counts; samples are many.
		const within = random.chance(0.7) ? Math.min(found.length, 60) : found.length;
		const { index, 0: number } = found[random.whole(within)]!;
		return asBytes(text.slice(0, index) + random.pick(ODD_NUMBERS) + text.slice(index + number.length));
	},
	'an odd number of bytes for a number': (bytes, random) => {
		const width = random.pick([1, 2, 4, 8]);
		if (bytes.length < width) return bytes;
		const out = bytes.slice();
		const last = out.length - width;
		const within = random.chance(0.6) ? Math.min(last, 256) : last;
		const at = random.chance(0.7)
			? Math.floor(random.whole(within + 1) / width) * width
			: random.whole(last + 1);
		const view = new DataView(out.buffer);
		const value = random.pick(ODD_WORDS);
		const little = random.chance(0.9);
		if (width === 1) view.setUint8(at, value & 0xff);
		else if (width === 2) view.setUint16(at, value & 0xffff, little);
		else if (width === 4) view.setUint32(at, value >>> 0, little);
		else view.setFloat64(at, random.pick([NaN, Infinity, -Infinity, 1e308, -1e308, 5e-324, -0]), little);
		return out;
	},
	'other line ends': (bytes, random) => {
		const end = random.pick(LINE_ENDS);
		return asBytes(asText(bytes).replace(/\r?\n/g, (found) => (random.chance(0.5) ? end : found)));
	},
	'another encoding': (bytes, random) => {
		const text = asText(bytes);
		switch (random.whole(4)) {
			case 0:
				return joined(Uint8Array.of(0xff, 0xfe), new Uint8Array(Buffer.from(text, 'utf16le')));
			case 1:
				return joined(Uint8Array.of(0xfe, 0xff), new Uint8Array(Buffer.from(text, 'utf16le').swap16()));
			case 2:
				return joined(Uint8Array.of(0xef, 0xbb, 0xbf), bytes);
			default:
				return asBytes(text.replace(/[a-z]/gi, (letter) => (random.chance(0.1) ? 'é' : letter)));
		}
	},
	'drop, repeat or swap lines': (bytes, random) =>
		editLines(bytes, (lines) => {
			const at = random.whole(lines.length);
			const kind = random.whole(3);
			if (kind === 0) lines.splice(at, 1 + random.whole(3));
			else if (kind === 1) lines.splice(at, 0, ...lines.slice(at, at + 1 + random.whole(3)));
			else {
				const other = random.whole(lines.length);
				[lines[at], lines[other]] = [lines[other]!, lines[at]!];
			}
		}),
	'drop, repeat or swap fields': (bytes, random) =>
		editLines(bytes, (lines) => {
			const at = random.whole(random.chance(0.6) ? Math.min(20, lines.length) : lines.length);
			const separator = /[,;\t]/.exec(lines[at]!)?.[0] ?? ',';
			const fields = lines[at]!.split(separator);
			const field = random.whole(fields.length);
			const kind = random.whole(4);
			if (kind === 0) fields.splice(field, 1);
			else if (kind === 1) fields.splice(field, 0, fields[field]!);
			else if (kind === 2) fields[field] = random.pick(ODD_NUMBERS);
			else fields[field] = fields[random.whole(fields.length)]!;
			lines[at] = fields.join(separator);
		}),
	'a very long line': (bytes, random) =>
		editLines(bytes, (lines) => {
			const at = random.whole(lines.length);
			lines[at] = lines[at]! + random.pick([',', '9', ' ', 'x', '"', ';1']).repeat(1 + random.whole(20_000));
		}),
	'zeros behind': (bytes, random) => joined(bytes, new Uint8Array(random.whole(4096)))
};

const KINDS = Object.keys(MUTATIONS);

/** Changes one to six things about a set of files; often only in one of them. Names may change as well. */
export function mutate(
	files: readonly CaptureFile[],
	random: InputRandom,
	corpus: readonly CaptureFile[]
): CaptureFile[] {
	const out = files.map((file) => ({ ...file }));
	const others = corpus.map(({ bytes }) => bytes);
	const count = 1 + random.whole(random.chance(0.3) ? 6 : 2);
	for (let i = 0; i < count; i++) {
		const file = random.pick(out);
		const changed = MUTATIONS[random.pick(KINDS)]!(file.bytes, random, others);
		file.bytes = changed.length > MOST_BYTES ? changed.slice(0, MOST_BYTES) : changed;
	}
	if (random.chance(0.03)) random.pick(out).name = random.pick(corpus).name;
	if (random.chance(0.03) && out.length > 1) out.splice(random.whole(out.length), 1);
	if (random.chance(0.03)) out.push({ ...random.pick(corpus) });
	if (random.chance(0.02)) out.reverse();
	return out;
}
