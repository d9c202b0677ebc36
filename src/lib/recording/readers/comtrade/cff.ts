import { ok, type Result } from '../../../result';
import type { CaptureHandle } from '../../capture-handle';
import type { ReadProblem, ReadRemark } from '../../recording';
import { quoted, refuse, warning } from '../read-problem';
import type { ComtradeDataFormat } from './comtrade-header';

/** One section of a combined file: bytes [start, end), and the number of its first line. */
export interface CffSection {
	start: number;
	end: number;
	firstLine: number;
}

/** The parts of a combined file, each with its place in it. */
export interface CffSections {
	configuration: CffSection;
	/** `format` as the section's own line says; null when it does not. */
	data: CffSection & { format: ComtradeDataFormat | null };
	/** Sections for people: INF and HDR, where they are there. */
	texts: (CffSection & { kind: string })[];
	remarks: ReadRemark[];
}

interface Marker {
	kind: string;
	format: ComtradeDataFormat | null;
	byteCount: number | null;
	isRegular: boolean;
	text: string;
	line: number;
	/** First byte of the marker's line, and first byte after it. */
	start: number;
	end: number;
}

const MARKER =
	/^(-{2,})\s*file\s*type\s*(:?)\s*(CFG|INF|HDR|DAT)\b\s*(ASCII|BINARY32|BINARY|FLOAT32)?\s*(?::\s*(\d+))?\s*(-{2,})$/i;

/** Section lines are short; longer lines need not be looked at. */
const LONGEST_MARKER = 120;

/** Bytes looked through at a time. */
const BLOCK_BYTES = 1 << 16;

/** Whether the bytes begin like a combined file. */
export function looksLikeCff(bytes: Uint8Array): boolean {
	const head = new TextDecoder('windows-1252').decode(bytes.subarray(0, 200));
	return /^(?:ï»¿)?\s*-{2,}\s*file\s*type\b/i.test(head);
}

/**
 * Finds the sections of a combined file by their lines ("--- file type: CFG ---", "--- file type: DAT BINARY: 160000 ---"),
 * without holding the file in memory. Lines with the colon missing or too few dashes are understood and remarked on.
 */
export function splitCff(file: CaptureHandle): Result<CffSections, ReadProblem> {
	const markers = findMarkers(file);
	const configuration = markers.find(({ kind }) => kind === 'CFG');
	const data = markers.find(({ kind }) => kind === 'DAT');
	if (configuration === undefined || data === undefined) {
		const missing = configuration === undefined ? 'CFG' : 'DAT';
		return refuse(
			'cff-section-missing',
			file.name,
			null,
			`${file.name} has no line “--- file type: ${missing} ---”; a combined file needs a CFG and a DAT section.`
		);
	}
	const odd = markers.filter(({ isRegular }) => !isRegular);
	const remarks = odd.length === 0 ? [] : [oddMarkers(file.name, odd)];
	const sectionOf = (marker: Marker): CffSection => ({
		start: marker.end,
		end: markers.find(({ start }) => start > marker.start)?.start ?? file.size_bytes,
		firstLine: marker.line + 1
	});
	return ok({
		configuration: sectionOf(configuration),
		data: {
			...sectionOf(data),
			...(data.byteCount === null ? {} : { end: announcedEnd(file, data, sectionOf(data).end, remarks) }),
			format: data.format
		},
		texts: markers
			.filter(({ kind }) => kind === 'INF' || kind === 'HDR')
			.map((marker) => ({ ...sectionOf(marker), kind: marker.kind })),
		remarks
	});
}

function oddMarkers(file: string, odd: Marker[]): ReadRemark {
	const { line, kind, text } = odd[0]!;
	const others = odd.slice(1).map((marker) => `the ${marker.kind} section on line ${marker.line}`);
	const more = others.length === 0 ? '' : `, and likewise ${others.join(', ')}`;
	return warning(
		'cff-odd-section-line',
		`${file}, line ${line}: “--- file type: ${kind} ---” was expected, but ${quoted(text)} was found; it was taken as the ${kind} section${more}.`
	);
}

/** The byte count of the DAT line decides where the data end, as far as the file reaches. */
function announcedEnd(file: CaptureHandle, data: Marker, end: number, remarks: ReadRemark[]): number {
	const announced = data.byteCount ?? 0;
	const present = end - data.end;
	if (announced <= present) return data.end + announced;
	const share = `${Number(((100 * (announced - present)) / announced).toPrecision(3))} %`;
	remarks.push(
		warning(
			'dat-truncated',
			`${file.name}, line ${data.line} announces ${announced} bytes of data, but only ${present} follow; ${announced - present} bytes (${share}) are missing.`
		)
	);
	return end;
}

/**
 * Walks the lines as far as the data section; beyond it only where the section's own line tells how long it is, or where
 * no configuration has come yet. Binary data are never looked into.
 */
function findMarkers(file: CaptureHandle): Marker[] {
	const markers: Marker[] = [];
	const decoder = new TextDecoder('windows-1252');
	const lines = new LineWalk(file);
	for (let line = lines.next(); line !== null; line = lines.next()) {
		if (line.head[0] !== 0x2d || line.end - line.start > LONGEST_MARKER + 2) continue;
		const text = decoder.decode(line.head).trim();
		const marker = markerOf(text, line.number, line.start, line.end);
		if (marker === null) continue;
		markers.push(marker);
		if (marker.kind !== 'DAT') continue;
		const isBinary = marker.format !== null && marker.format !== 'ASCII';
		const hasConfiguration = markers.some(({ kind }) => kind === 'CFG');
		if (marker.byteCount !== null && marker.end + marker.byteCount < file.size_bytes)
			lines.jumpTo(marker.end + marker.byteCount);
		else if (hasConfiguration || isBinary) break;
	}
	return markers;
}

/** Lines of a file, one after the other; only their first bytes are kept. */
class LineWalk {
	private number = 1;
	private position: number;
	private readonly block = new Uint8Array(BLOCK_BYTES);
	private blockStart = 0;
	private blockLength = 0;

	constructor(private readonly file: CaptureHandle) {
		const isMarked = this.byteAt(0) === 0xef && this.byteAt(1) === 0xbb && this.byteAt(2) === 0xbf;
		this.position = isMarked ? 3 : 0;
	}

	/** Line numbers lose their meaning after bytes that are no text; the next line counts on from here. */
	jumpTo(position: number): void {
		this.position = position;
	}

	next(): { head: Uint8Array; number: number; start: number; end: number } | null {
		const start = this.position;
		if (start >= this.file.size_bytes) return null;
		const head: number[] = [];
		let at = start;
		let byte = this.byteAt(at);
		while (byte !== undefined && byte !== 0x0a && byte !== 0x0d) {
			if (head.length < LONGEST_MARKER) head.push(byte);
			byte = this.byteAt(++at);
		}
		if (byte !== undefined) at += byte === 0x0d && this.byteAt(at + 1) === 0x0a ? 2 : 1;
		this.position = at;
		return { head: Uint8Array.from(head), number: this.number++, start, end: at };
	}

	private byteAt(position: number): number | undefined {
		if (position >= this.file.size_bytes) return undefined;
		if (position < this.blockStart || position >= this.blockStart + this.blockLength) {
			this.blockStart = position;
			this.blockLength = Math.min(BLOCK_BYTES, this.file.size_bytes - position);
			this.file.read(position, this.block.subarray(0, this.blockLength));
		}
		return this.block[position - this.blockStart];
	}
}

function markerOf(text: string, line: number, start: number, end: number): Marker | null {
	const match = MARKER.exec(text);
	if (match === null) return null;
	const format = (match[4]?.toUpperCase() ?? null) as ComtradeDataFormat | null;
	return {
		kind: (match[3] ?? '').toUpperCase(),
		format,
		byteCount: match[5] === undefined ? null : Number(match[5]),
		isRegular: match[1] === '---' && match[6] === '---' && match[2] === ':',
		text,
		line,
		start,
		end
	};
}
