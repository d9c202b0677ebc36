import { ok, type Result } from '../../../result';
import type { RawFormat } from '../../../numerics/kernels/signal-kernels';
import type { CaptureHandle } from '../../capture-handle';
import type { ReadProblem } from '../../recording';
import { refuse } from '../read-problem';
import type { RiffChunk } from './riff-chunks';

/** What the fmt chunk says of the samples, checked. */
export interface WaveFormat {
	channelCount: number;
	samplingRate_Hz: number;
	/** Bytes of one sample of all channels. */
	rowBytes: number;
	format: RawFormat;
	/** value = raw · factor + addition, in parts of full scale. */
	factor: number;
	addition: number;
	/** e.g. "24 bit PCM", "32 bit float". */
	words: string;
	/** Bits in use where they are fewer than the container holds; null otherwise. */
	validBits: number | null;
}

const PCM = 1;
const FLOAT = 3;
const EXTENSIBLE = 0xfffe;
/** Bytes 2 to 15 of the identifiers that extend the old format numbers (Microsoft, multimedia registration). */
const EXTENDED = [0, 0, 0, 0, 0x10, 0, 0x80, 0, 0, 0xaa, 0, 0x38, 0x9b, 0x71];

/** Formats that press samples down; what they drop cannot be had back. From the public list of registered formats. */
const PRESSED: Record<number, string> = {
	2: 'ADPCM',
	6: 'A-law',
	7: 'µ-law',
	0x11: 'IMA ADPCM',
	0x31: 'GSM 6.10',
	0x50: 'MPEG audio',
	0x55: 'MPEG layer 3'
};

const INTEGERS: Record<number, { format: RawFormat; factor: number; addition: number }> = {
	1: { format: 'uint8', factor: 2 ** -7, addition: -1 },
	2: { format: 'int16', factor: 2 ** -15, addition: 0 },
	3: { format: 'int24', factor: 2 ** -23, addition: 0 },
	4: { format: 'int32', factor: 2 ** -31, addition: 0 }
};

const FLOATS: Record<number, { format: RawFormat; factor: number; addition: number }> = {
	4: { format: 'float32', factor: 1, addition: 0 },
	8: { format: 'float64', factor: 1, addition: 0 }
};

/** Reads the fmt chunk; samples that are pressed or of a width that nobody writes are refused. */
export function readWaveFormat(file: CaptureHandle, chunk: RiffChunk): Result<WaveFormat, ReadProblem> {
	const place = `byte ${chunk.start}`;
	const refused = (code: string, sentence: string) =>
		refuse(code, file.name, place, `${file.name}, ${place}: ${sentence}`);
	const bytes = new Uint8Array(Math.min(chunk.end - chunk.start, 40));
	file.read(chunk.start, bytes);
	if (bytes.length < 16)
		return refused(
			'wav-format-short',
			`the description of the samples has ${bytes.length} bytes; at least 16 were expected. The file is damaged; record or export it again.`
		);
	const view = new DataView(bytes.buffer);
	const channelCount = view.getUint16(2, true);
	const samplingRate_Hz = view.getUint32(4, true);
	const rowBytes = view.getUint16(12, true);
	const bits = view.getUint16(14, true);
	const kind = kindOf(bytes, view);
	if (channelCount === 0 || samplingRate_Hz === 0)
		return refused(
			'wav-format',
			`${channelCount} channels at ${samplingRate_Hz} Hz are announced; at least one channel and a sampling rate above 0 were expected.`
		);
	const width = rowBytes / channelCount;
	const known = kind === PCM ? INTEGERS[width] : kind === FLOAT ? FLOATS[width] : undefined;
	if (kind !== PCM && kind !== FLOAT)
		return refused(
			'wav-format-not-read',
			`the samples are written as ${PRESSED[kind] ?? `format number ${kind}`}; plain PCM or floating point was expected. Export the recording again without compression.`
		);
	if (known === undefined || bits === 0 || bits > 8 * width)
		return refused(
			'wav-format',
			`${bits} bits in ${rowBytes} bytes for ${channelCount === 1 ? 'one channel' : `${channelCount} channels`} are announced; PCM of 8, 16, 24 or 32 bits or floating point of 32 or 64 bits was expected.`
		);
	const stated =
		bytes.length >= 20 && view.getUint16(0, true) === EXTENSIBLE ? view.getUint16(18, true) : bits;
	const validBits = stated > 0 && stated < 8 * width ? stated : null;
	return ok({
		channelCount,
		samplingRate_Hz,
		rowBytes,
		...known,
		words: `${8 * width} bit ${kind === PCM ? 'PCM' : 'float'}`,
		validBits: kind === PCM ? validBits : null
	});
}

/** The format number, looked up behind WAVE_FORMAT_EXTENSIBLE where that stands in front. */
function kindOf(bytes: Uint8Array, view: DataView): number {
	const tag = view.getUint16(0, true);
	if (tag !== EXTENSIBLE || bytes.length < 40) return tag;
	const isExtended = EXTENDED.every((byte, index) => bytes[26 + index] === byte);
	return isExtended ? view.getUint16(24, true) : tag;
}
