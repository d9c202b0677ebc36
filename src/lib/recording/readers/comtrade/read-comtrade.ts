import type { Result } from '../../../result';
import { loadFile, type CaptureHandle } from '../../capture-handle';
import type { CaptureFile, ReadProblem, ReadRemark, Recording } from '../../recording';
import type { CaptureSource } from '../../sample-source';
import { note, refuse, warning } from '../read-problem';
import { asciiCompatibleBytes, decodeText, ENCODING_NAMES } from '../text-decoding';
import { buildRecording } from './build-recording';
import { looksLikeCff, splitCff } from './cff';
import type { ComtradeData, ComtradeHeader } from './comtrade-header';
import { readAsciiData } from './dat-ascii';
import { readBinaryData } from './dat-binary';
import { openBinaryData } from './open-binary';
import { parseCfg } from './parse-cfg';

/** The data bytes with their place in their file. */
interface DataPart {
	file: string;
	bytes: Uint8Array;
	firstLine: number;
	firstByte: number;
}

function stemOf(name: string): string {
	return name.replace(/\.[^.]*$/, '').toLowerCase();
}

function hasExtension(file: { name: string }, extension: string): boolean {
	return file.name.toLowerCase().endsWith(extension);
}

/** Second line "8,4A,4D": what tells a configuration from every other text. */
export function looksLikeCfg(bytes: Uint8Array): boolean {
	const { text } = decodeText(bytes.subarray(0, 4096));
	const second = text.split(/\r\n|\n|\r/).filter((line) => line.trim() !== '')[1] ?? '';
	return /^\s*\d+\s*,\s*\d+\s*[AD]\s*,\s*\d+\s*[AD]\b/i.test(second);
}

/**
 * Reads a waveform in the common format for transient data exchange (IEEE C37.111-1991, -1999, -2013):
 * a configuration with its data file, or one combined file. Never throws on bad bytes.
 */
export function readComtrade(files: CaptureFile[]): Result<Recording, ReadProblem> {
	const combined = files.find((file) => looksLikeCff(file.bytes) || hasExtension(file, '.cff'));
	if (combined !== undefined) return readCombined(combined);
	const configuration =
		files.find((file) => hasExtension(file, '.cfg')) ?? files.find((file) => looksLikeCfg(file.bytes));
	if (configuration === undefined) return configurationMissing(files);
	if (configuration.bytes.length === 0)
		return refuse(
			'file-empty',
			configuration.name,
			null,
			`${configuration.name} is empty (0 bytes); a configuration was expected.`
		);
	const { header, remarks } = readConfiguration(configuration.name, configuration.bytes, 1);
	if (!header.ok) return header;
	const data = dataFileFor(configuration, files);
	if (data === undefined) {
		const stem = configuration.name.replace(/\.[^.]*$/, '');
		return refuse(
			'dat-missing',
			configuration.name,
			null,
			`${configuration.name} came without its data file; add ${stem}.dat and upload both together.`
		);
	}
	const part = { file: data.name, bytes: data.bytes, firstLine: 1, firstByte: 0 };
	return readParts(header.value, part, remarks);
}

/**
 * A configuration with binary data at stated rates, without reading the data; null where the files are anything else, or
 * nothing but their content can tell.
 */
export function openComtrade(files: readonly CaptureHandle[]): Result<CaptureSource, ReadProblem> | null {
	const configuration = files.find((file) => hasExtension(file, '.cfg'));
	if (configuration === undefined || configuration.size_bytes === 0) return null;
	const data = dataFileFor(configuration, files);
	if (data === undefined || data.size_bytes === 0) return null;
	const { bytes } = loadFile(configuration);
	if (looksLikeCff(bytes)) return null;
	const { header, remarks } = readConfiguration(configuration.name, bytes, 1);
	if (!header.ok || header.value.dataFormat === 'ASCII' || header.value.rates.length === 0) return null;
	const head = new Uint8Array(Math.min(data.size_bytes, SNIFFED_BYTES));
	data.read(0, head);
	return isNumericText(head) ? null : openBinaryData(header.value, data, remarks);
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

function dataFileFor<File extends { name: string }>(
	configuration: File,
	files: readonly File[]
): File | undefined {
	const others = files.filter((file) => file !== configuration && !/\.(hdr|inf|cfg)$/i.test(file.name));
	const sameStem = others.filter((file) => stemOf(file.name) === stemOf(configuration.name));
	return (
		sameStem.find((file) => hasExtension(file, '.dat')) ??
		sameStem[0] ??
		others.find((file) => hasExtension(file, '.dat')) ??
		others[0]
	);
}

function readConfiguration(
	file: string,
	bytes: Uint8Array,
	firstLine: number
): { header: Result<ComtradeHeader, ReadProblem>; remarks: ReadRemark[] } {
	const { text, encoding, byteOrderMark } = decodeText(bytes);
	const remarks: ReadRemark[] = [];
	if (encoding !== 'utf-8')
		remarks.push(
			note(
				'text-encoding',
				`${file} is not written in UTF-8; its names were read as ${ENCODING_NAMES[encoding]}.`
			)
		);
	else if (byteOrderMark)
		remarks.push(
			note('byte-order-mark', `${file} begins with a byte-order mark, which the format does not provide for.`)
		);
	return { header: parseCfg(file, text, firstLine), remarks };
}

function readCombined(file: CaptureFile): Result<Recording, ReadProblem> {
	const { bytes, wasUtf16 } = asciiCompatibleBytes(file.bytes);
	const sections = splitCff(file.name, bytes);
	if (!sections.ok) return sections;
	const { configuration, data } = sections.value;
	const { header, remarks } = readConfiguration(file.name, configuration.bytes, configuration.firstLine);
	if (!header.ok) return header;
	remarks.unshift(...sections.value.remarks);
	if (wasUtf16) remarks.push(note('text-encoding', `${file.name} is written in UTF-16.`));
	if (data.format !== null && data.format !== header.value.dataFormat) {
		remarks.push(
			warning(
				'data-format-disagrees',
				`${file.name}, line ${header.value.dataFormatLine} says ${header.value.dataFormat}, but line ${data.firstLine - 1} introduces ${data.format} data; ${data.format} was used.`
			)
		);
		header.value.dataFormat = data.format;
	}
	return readParts(header.value, { ...data, file: file.name }, remarks);
}

function readParts(
	header: ComtradeHeader,
	part: DataPart,
	remarks: ReadRemark[]
): Result<Recording, ReadProblem> {
	if (part.bytes.length === 0)
		return refuse(
			'file-empty',
			part.file,
			`byte ${part.firstByte}`,
			`${part.file} holds no data (0 bytes from byte ${part.firstByte} on); ${header.dataFormat} samples were expected there.`
		);
	const data = header.dataFormat === 'ASCII' ? readText(header, part) : readBinary(header, part, remarks);
	if (!data.ok) return data;
	return buildRecording(part.file, header, data.value, remarks);
}

function readText(header: ComtradeHeader, part: DataPart): Result<ComtradeData, ReadProblem> {
	const { bytes } = asciiCompatibleBytes(part.bytes);
	const binaryAt = firstBinaryByte(bytes);
	if (binaryAt !== null)
		return refuse(
			'dat-not-text',
			part.file,
			`byte ${part.firstByte + binaryAt}`,
			`${part.file}, byte ${part.firstByte + binaryAt}: text was expected, because ${header.file}, line ${header.dataFormatLine} announces ASCII data, but the bytes are not text. Correct that line (BINARY, BINARY32 or FLOAT32) or export the capture again.`
		);
	return readAsciiData(part.file, bytes, part.firstLine, header);
}

/** Text where binary is announced is read only if its numbers keep the limits that the configuration states. */
function readBinary(
	header: ComtradeHeader,
	part: DataPart,
	remarks: ReadRemark[]
): Result<ComtradeData, ReadProblem> {
	const format = header.dataFormat as Exclude<typeof header.dataFormat, 'ASCII'>;
	if (!isNumericText(part.bytes))
		return readBinaryData(part.file, part.bytes, part.firstByte, header, format);
	const found = `${part.file} holds text, although ${header.file}, line ${header.dataFormatLine} announces ${format} data`;
	const data = readAsciiData(part.file, part.bytes, part.firstLine, header);
	if (!data.ok || !keepsLimits(header, data.value))
		return refuse(
			'dat-is-text',
			part.file,
			`byte ${part.firstByte}`,
			`${found}, and its numbers do not fit the stated channels and limits. Correct that line or export the capture again.`
		);
	remarks.push(
		warning('dat-is-text', `${found}; it was read as ASCII, since its numbers keep the stated limits.`)
	);
	header.dataFormat = 'ASCII';
	return data;
}

function keepsLimits(header: ComtradeHeader, data: ComtradeData): boolean {
	return data.raw.every((values, channel) => {
		const { minimum, maximum } = header.analogues[channel] as {
			minimum: number | null;
			maximum: number | null;
		};
		if (minimum === null || maximum === null) return false;
		return values.every((value) => Number.isNaN(value) || (value >= minimum && value <= maximum));
	});
}

const SNIFFED_BYTES = 4096;

function firstBinaryByte(bytes: Uint8Array): number | null {
	for (let at = 0; at < Math.min(bytes.length, SNIFFED_BYTES); at++) {
		const byte = bytes[at] as number;
		if (byte < 0x20 && byte !== 0x09 && byte !== 0x0a && byte !== 0x0d && byte !== 0x1a) return at;
	}
	return null;
}

/** Nothing but digits, signs, separators and line ends in the first bytes: no binary sample looks like that. */
function isNumericText(bytes: Uint8Array): boolean {
	if (bytes.length < 8) return false;
	for (let at = 0; at < Math.min(bytes.length, SNIFFED_BYTES); at++) {
		const byte = bytes[at] as number;
		const isDigit = byte >= 0x30 && byte <= 0x39;
		const isMark =
			byte === 0x2b || byte === 0x2c || byte === 0x2d || byte === 0x2e || byte === 0x45 || byte === 0x65;
		const isBlank = byte === 0x20 || byte === 0x09 || byte === 0x0a || byte === 0x0d;
		if (!isDigit && !isMark && !isBlank) return false;
	}
	return true;
}
