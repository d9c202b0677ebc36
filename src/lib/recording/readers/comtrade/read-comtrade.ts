import type { Result } from '../../../result';
import { handleOf, type CaptureHandle } from '../../capture-handle';
import { loadSamples } from '../../load-samples';
import { memoryScratch } from '../../memory-scratch';
import type { CaptureFile, ReadProblem, ReadRemark, Recording } from '../../recording';
import type { CaptureSource } from '../../sample-source';
import type { SampleScratch } from '../../sample-scratch';
import { note, refuse, warning } from '../read-problem';
import { decodeText, ENCODING_NAMES, utf16Of } from '../text-decoding';
import { buildSource } from './build-recording';
import { splitCff } from './cff';
import { sortComtradeFiles } from './comtrade-files';
import type { ComtradeData, ComtradeHeader } from './comtrade-header';
import { readAsciiData } from './dat-ascii';
import { readBinaryData } from './dat-binary';
import { headOf, type DataPart } from './data-part';
import { readNotes, type TextPart } from './note-texts';
import { parseCfg } from './parse-cfg';
import { asEightBitText } from './wide-text';

/** A configuration longer than this is none: 999 999 channels of 60 characters would fit. */
const LONGEST_CONFIGURATION_BYTES = 1 << 26;

const SNIFFED_BYTES = 4096;

/** As openComtrade, with every sample in memory. Never throws on bad bytes. */
export function readComtrade(files: CaptureFile[]): Result<Recording, ReadProblem> {
	const opened = openComtrade(files.map(handleOf));
	if (opened === null) return configurationMissing(files);
	return opened.ok ? { ok: true, value: loadSamples(opened.value) } : opened;
}

/**
 * Opens a waveform in the common format for transient data exchange (IEEE C37.111-1991, -1999, -2013): a configuration with
 * its data file, or one combined file. Binary samples stay where they are; text is decoded into `scratch`, in memory
 * where none is given.
 * returns  null where none of the files looks like a configuration
 */
export function openComtrade(
	files: readonly CaptureHandle[],
	scratch: SampleScratch = memoryScratch()
): Result<CaptureSource, ReadProblem> | null {
	const sorted = sortComtradeFiles(files);
	if (sorted === null) return null;
	if (sorted.combined !== undefined) return openCombined(sorted.combined, sorted.texts, scratch);
	const configuration = sorted.configuration!;
	const whole = { file: configuration, start: 0, end: configuration.size_bytes, firstLine: 1 };
	const { header, remarks } = readConfiguration(whole);
	if (!header.ok) return header;
	const { data } = sorted;
	if (data === undefined) {
		const stem = configuration.name.replace(/\.[^.]*$/, '');
		return refuse(
			'dat-missing',
			configuration.name,
			null,
			`${configuration.name} came without its data file; add ${stem}.dat and upload both together.`
		);
	}
	const part = { file: data, start: 0, end: data.size_bytes, firstLine: 1 };
	return openParts(header.value, part, sorted.texts.map(wholeText), remarks, scratch);
}

function wholeText(file: CaptureHandle): TextPart {
	const kind = file.name.slice(file.name.lastIndexOf('.') + 1).toUpperCase();
	return { kind, file, start: 0, end: file.size_bytes };
}

function configurationMissing(files: CaptureFile[]): Result<Recording, ReadProblem> {
	const name = files[0]?.name ?? '';
	const stem = name.replace(/\.[^.]*$/, '');
	return refuse(
		'cfg-missing',
		name,
		null,
		`${name} came without its configuration; add ${stem}.cfg and upload both together.`
	);
}

function readConfiguration({ file, start, end, firstLine }: DataPart): {
	header: Result<ComtradeHeader, ReadProblem>;
	remarks: ReadRemark[];
} {
	const remarks: ReadRemark[] = [];
	const size_bytes = end - start;
	if (size_bytes === 0 || size_bytes > LONGEST_CONFIGURATION_BYTES) {
		const sentence =
			size_bytes === 0
				? `${file.name} is empty (0 bytes); a configuration was expected.`
				: `${file.name}: ${size_bytes} bytes are too many for a configuration (at most ${LONGEST_CONFIGURATION_BYTES} were expected).`;
		const code = size_bytes === 0 ? 'file-empty' : 'cfg-too-long';
		return { header: refuse(code, file.name, null, sentence), remarks };
	}
	const bytes = new Uint8Array(size_bytes);
	file.read(start, bytes);
	const { text, encoding, byteOrderMark } = decodeText(bytes);
	if (encoding !== 'utf-8')
		remarks.push(
			note(
				'text-encoding',
				`${file.name} is not written in UTF-8; its names were read as ${ENCODING_NAMES[encoding]}.`
			)
		);
	else if (byteOrderMark)
		remarks.push(
			note(
				'byte-order-mark',
				`${file.name} begins with a byte-order mark, which the format does not provide for.`
			)
		);
	return { header: parseCfg(file.name, text, firstLine), remarks };
}

function openCombined(
	written: CaptureHandle,
	texts: readonly CaptureHandle[],
	scratch: SampleScratch
): Result<CaptureSource, ReadProblem> {
	const head = headOf({ file: written, start: 0, end: written.size_bytes, firstLine: 1 }, SNIFFED_BYTES);
	const isWide = utf16Of(head) !== null;
	const file = isWide
		? asEightBitText({ file: written, start: 0, end: written.size_bytes, firstLine: 1 }, scratch).file
		: written;
	const sections = splitCff(file);
	if (!sections.ok) return sections;
	const { configuration, data } = sections.value;
	const { header, remarks } = readConfiguration({ file, ...configuration });
	if (!header.ok) return header;
	remarks.unshift(...sections.value.remarks);
	if (isWide) remarks.push(note('text-encoding', `${file.name} is written in UTF-16.`));
	if (data.format !== null && data.format !== header.value.dataFormat) {
		remarks.push(
			warning(
				'data-format-disagrees',
				`${file.name}, line ${header.value.dataFormatLine} says ${header.value.dataFormat}, but line ${data.firstLine - 1} introduces ${data.format} data; ${data.format} was used.`
			)
		);
		header.value.dataFormat = data.format;
	}
	const notes = [...sections.value.texts.map((text) => ({ ...text, file })), ...texts.map(wholeText)];
	return openParts(header.value, { file, ...data }, notes, remarks, scratch);
}

function openParts(
	header: ComtradeHeader,
	part: DataPart,
	texts: readonly TextPart[],
	remarks: ReadRemark[],
	scratch: SampleScratch
): Result<CaptureSource, ReadProblem> {
	if (part.end === part.start)
		return refuse(
			'file-empty',
			part.file.name,
			`byte ${part.start}`,
			`${part.file.name} holds no data (0 bytes from byte ${part.start} on); ${header.dataFormat} samples were expected there.`
		);
	const data =
		header.dataFormat === 'ASCII'
			? openText(header, part, scratch)
			: openBinary(header, part, remarks, scratch);
	if (!data.ok) return data;
	const source = buildSource(part.file.name, header, data.value, remarks);
	if (!source.ok) return source;
	const notes = readNotes(texts, source.value.remarks);
	return { ok: true, value: notes.length === 0 ? source.value : { ...source.value, notes } };
}

function openText(
	header: ComtradeHeader,
	written: DataPart,
	scratch: SampleScratch
): Result<ComtradeData, ReadProblem> {
	const part = asEightBitText(written, scratch);
	const binaryAt = firstBinaryByte(headOf(part, SNIFFED_BYTES));
	if (binaryAt !== null)
		return refuse(
			'dat-not-text',
			part.file.name,
			`byte ${part.start + binaryAt}`,
			`${part.file.name}, byte ${part.start + binaryAt}: text was expected, because ${header.file}, line ${header.dataFormatLine} announces ASCII data, but the bytes are not text. Correct that line (BINARY, BINARY32 or FLOAT32) or export the capture again.`
		);
	return readAsciiData(part, header, scratch);
}

/** Text where binary is announced is read only if its numbers keep the limits that the configuration states. */
function openBinary(
	header: ComtradeHeader,
	part: DataPart,
	remarks: ReadRemark[],
	scratch: SampleScratch
): Result<ComtradeData, ReadProblem> {
	const format = header.dataFormat as Exclude<typeof header.dataFormat, 'ASCII'>;
	if (!isNumericText(headOf(part, SNIFFED_BYTES))) return readBinaryData(part, header, format);
	const found = `${part.file.name} holds text from byte ${part.start} on, although ${header.file}, line ${header.dataFormatLine} announces ${format} data`;
	const data = readAsciiData(part, header, scratch);
	if (!data.ok || !data.value.keepsLimits)
		return refuse(
			'dat-is-text',
			part.file.name,
			`byte ${part.start}`,
			`${found}, and its numbers do not fit the stated channels and limits. Correct that line or export the capture again.`
		);
	remarks.push(
		warning('dat-is-text', `${found}; it was read as ASCII, since its numbers keep the stated limits.`)
	);
	header.dataFormat = 'ASCII';
	return data;
}

function firstBinaryByte(bytes: Uint8Array): number | null {
	for (let at = 0; at < bytes.length; at++) {
		const byte = bytes[at] as number;
		if (byte < 0x20 && byte !== 0x09 && byte !== 0x0a && byte !== 0x0d && byte !== 0x1a) return at;
	}
	return null;
}

/** Nothing but digits, signs, separators and line ends in the first bytes: no binary sample looks like that. */
function isNumericText(bytes: Uint8Array): boolean {
	if (bytes.length < 8) return false;
	for (let at = 0; at < bytes.length; at++) {
		const byte = bytes[at] as number;
		const isDigit = byte >= 0x30 && byte <= 0x39;
		const isMark =
			byte === 0x2b || byte === 0x2c || byte === 0x2d || byte === 0x2e || byte === 0x45 || byte === 0x65;
		const isBlank = byte === 0x20 || byte === 0x09 || byte === 0x0a || byte === 0x0d;
		if (!isDigit && !isMark && !isBlank) return false;
	}
	return true;
}
