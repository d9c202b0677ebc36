import { ok, type Result } from '../result';
import { handleOf, type CaptureHandle } from './capture-handle';
import { incompleteGroupSentence } from './group-capture-files';
import { loadSamples } from './load-samples';
import { memoryScratch } from './memory-scratch';
import { sortComtradeFiles } from './readers/comtrade/comtrade-files';
import { openComtrade } from './readers/comtrade/read-comtrade';
import type { LayoutGuess } from './readers/delimited-text/guess-layout';
import {
	guessTableOf,
	openDelimitedText,
	readDelimitedText,
	type DelimitedTextOptions
} from './readers/delimited-text/read-delimited-text';
import { openPqdif } from './readers/pqdif/open-pqdif';
import { looksLikePqdif } from './readers/pqdif/record-chain';
import { refuse } from './readers/read-problem';
import { openWav } from './readers/wav/read-wav';
import type { CaptureContent, CaptureFile, CapturePart, ReadProblem, Trend } from './recording';
import type { SampleScratch } from './sample-scratch';
import type { CaptureSource } from './sample-source';

/** First bytes of files that are no captures, or of formats that are not read, with what to do instead. */
const OTHER_FORMATS: { bytes: number[]; words: string }[] = [
	{
		bytes: [0x50, 0x4b, 0x03, 0x04],
		words: 'a packed archive or a spreadsheet workbook; unpack it, or save the sheet as CSV'
	},
	{ bytes: [0xd0, 0xcf, 0x11, 0xe0], words: 'an office document; save the table as CSV' },
	{ bytes: [0x25, 0x50, 0x44, 0x46], words: 'a PDF document; export the samples as COMTRADE or CSV' },
	{ bytes: [0x1f, 0x8b], words: 'a gzip archive; unpack it' },
	{ bytes: [0x89, 0x50, 0x4e, 0x47], words: 'a picture; upload the samples themselves' },
	{ bytes: [0xff, 0xd8, 0xff], words: 'a picture; upload the samples themselves' }
];

/**
 * Reads one capture, one file or a set that belongs together. The format is told from the content; a name only
 * decides where content cannot (a data file without its configuration).
 */
export function readCapture(
	files: CaptureFile[],
	options: DelimitedTextOptions = {}
): Result<CaptureContent, ReadProblem> {
	const waveform = openWaveform(files.map(handleOf), memoryScratch());
	if (waveform !== null) return waveform.ok ? ok(loadSamples(waveform.value)) : waveform;
	const pqdif = openOnePqdif(files.map(handleOf), {});
	if (pqdif !== null) return pqdif.ok ? ok(firstContent(pqdif.value)) : pqdif;
	return refusalOf(files.map(headOfBytes)) ?? readDelimitedText(files, options);
}

/** The start of a file, by which its format is told. */
interface FileHead {
	name: string;
	bytes: Uint8Array;
}

const HEAD_BYTES = 4096;

function headOfBytes({ name, bytes }: CaptureFile): FileHead {
	return { name, bytes: bytes.subarray(0, HEAD_BYTES) };
}

function headOfHandle(handle: CaptureHandle): FileHead {
	const bytes = new Uint8Array(Math.min(handle.size_bytes, HEAD_BYTES));
	handle.read(0, bytes);
	return { name: handle.name, bytes };
}

/** Why files are no delimited text; null where they may be. */
function refusalOf(heads: readonly FileHead[]): Result<never, ReadProblem> | null {
	const [first] = heads;
	if (first === undefined)
		return refuse('no-files', '', null, 'No file was given; a capture of one file or a set was expected.');
	const incomplete = incompleteGroupSentence(heads.map(({ name }) => name));
	if (incomplete !== null && !isTableByName(first))
		return refuse('capture-incomplete', leftAlone(heads, incomplete), null, incomplete);
	for (const head of heads) {
		const other = OTHER_FORMATS.find(({ bytes }) => bytes.every((byte, at) => head.bytes[at] === byte));
		if (other !== undefined)
			return refuse(
				'format-not-read',
				head.name,
				'byte 0',
				`${head.name} begins (byte 0) like ${other.words}. COMTRADE (CFG with DAT, or CFF), PQDIF, WAV or delimited text was expected.`
			);
	}
	return null;
}

/** A waveform whose samples are fetched when they are needed, or a trend log. */
export type OpenedCapture = CaptureSource | Trend;

export interface OpenOptions extends DelimitedTextOptions {
	/** Key of the part wanted, as `openCaptureParts` named it; the first part where absent. */
	part?: string;
	/** Where decoded samples go; they are held in memory where absent. */
	scratch?: SampleScratch;
}

/**
 * Opens everything that the files hold, without keeping more of it in memory than the format forces. One file can hold
 * several recordings and trends; each becomes a capture of its own.
 */
export function openCaptureParts(
	files: readonly CaptureHandle[],
	options: OpenOptions = {}
): Result<CapturePart<OpenedCapture>[], ReadProblem> {
	const pqdif = openOnePqdif(files, options);
	if (pqdif !== null) return pqdif;
	const single = openSingle(files, options);
	return single.ok ? ok([{ key: '', title: '', content: single.value }]) : single;
}

/** Opens one part of what the files hold. */
export function openCapture(
	files: readonly CaptureHandle[],
	options: OpenOptions = {}
): Result<OpenedCapture, ReadProblem> {
	const parts = openCaptureParts(files, options);
	if (!parts.ok) return parts;
	const { part: wanted } = options;
	const part =
		wanted === undefined ? parts.value[0] : parts.value.find((candidate) => candidate.key === wanted);
	if (part !== undefined) return ok(part.content);
	const name = files[0]?.name ?? '';
	return refuse(
		'part-missing',
		name,
		null,
		`${name} no longer yields the part “${wanted ?? ''}” that this capture was made from. Upload the file again.`
	);
}

/** The parts of a PQDIF file, which always comes alone; null for any other. */
function openOnePqdif(
	[only, ...others]: readonly CaptureHandle[],
	{ scratch, part }: OpenOptions
): ReturnType<typeof openPqdif> {
	if (only === undefined || others.length > 0) return null;
	return openPqdif(only, scratch ?? memoryScratch(), part);
}

/** The first part in memory. */
function firstContent([first]: readonly CapturePart<OpenedCapture>[]): CaptureContent {
	const { content } = first!;
	return content.kind === 'trend' ? content : loadSamples(content);
}

/** Formats whose samples are rows of bytes, in their file or in scratch; null for any other. */
function openWaveform(
	files: readonly CaptureHandle[],
	scratch: SampleScratch
): Result<CaptureSource, ReadProblem> | null {
	const comtrade = openComtrade(files, scratch);
	if (comtrade !== null) return comtrade;
	const [only, ...others] = files;
	return only !== undefined && others.length === 0 ? openWav(only) : null;
}

/** Formats that hold one recording or one trend. */
function openSingle(
	files: readonly CaptureHandle[],
	options: OpenOptions
): Result<OpenedCapture, ReadProblem> {
	const waveform = openWaveform(files, options.scratch ?? memoryScratch());
	if (waveform !== null) return waveform;
	return refusalOf(files.map(headOfHandle)) ?? openDelimitedText(files, options);
}

/** Name of the file that a sentence about an incomplete group begins with. */
function leftAlone(files: readonly FileHead[], sentence: string): string {
	return files.find(({ name }) => sentence.startsWith(`${name} `))?.name ?? '';
}

/** A ".dat" with headings is a table of its own; rows of bare numbers, or binary, belong to a configuration. */
function isTableByName({ name, bytes }: FileHead): boolean {
	if (!/\.dat$/i.test(name)) return false;
	const head = new TextDecoder('windows-1252').decode(bytes.subarray(0, 200));
	return /^\s*["#%A-Za-z]/.test(head) && !head.includes('\u0000');
}

/** How a table of text seems to be written, with its headings; null for files of other formats. */
export function guessTable(files: readonly CaptureHandle[]): (LayoutGuess & { headings: string[] }) | null {
	const [first] = files;
	if (first === undefined || sortComtradeFiles(files) !== null || looksLikePqdif(first)) return null;
	return refusalOf(files.map(headOfHandle)) === null ? guessTableOf(first) : null;
}
