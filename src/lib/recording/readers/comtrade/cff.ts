import { ok, type Result } from '../../../result';
import type { ReadProblem, ReadRemark } from '../../recording';
import { quoted, refuse, warning } from '../read-problem';
import type { ComtradeDataFormat } from './comtrade-header';

/** The parts of a combined file, each with its place in it. */
export interface CffSections {
	configuration: { bytes: Uint8Array; firstLine: number };
	data: {
		bytes: Uint8Array;
		firstLine: number;
		firstByte: number;
		/** As the section's own line says; null when it does not. */
		format: ComtradeDataFormat | null;
	};
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

/** Whether the bytes begin like a combined file. */
export function looksLikeCff(bytes: Uint8Array): boolean {
	const head = new TextDecoder('windows-1252').decode(bytes.subarray(0, 200));
	return /^(?:ï»¿)?\s*-{2,}\s*file\s*type\b/i.test(head);
}

/**
 * Splits a combined file at its section lines ("--- file type: CFG ---", "--- file type: DAT BINARY: 160000 ---").
 * Lines with the colon missing or too few dashes are understood and remarked on.
 */
export function splitCff(file: string, bytes: Uint8Array): Result<CffSections, ReadProblem> {
	const markers = findMarkers(bytes);
	const configuration = markers.find(({ kind }) => kind === 'CFG');
	const data = markers.find(({ kind }) => kind === 'DAT');
	if (configuration === undefined || data === undefined) {
		const missing = configuration === undefined ? 'CFG' : 'DAT';
		return refuse(
			'cff-section-missing',
			file,
			null,
			`${file} has no line “--- file type: ${missing} ---”; a combined file needs a CFG and a DAT section.`
		);
	}
	const remarks = markers.filter(({ isRegular }) => !isRegular).map((marker) => oddMarker(file, marker));
	const next = markers.find(({ start }) => start > configuration.start);
	return ok({
		configuration: {
			bytes: bytes.subarray(configuration.end, next?.start ?? bytes.length),
			firstLine: configuration.line + 1
		},
		data: {
			bytes: dataBytes(file, bytes, data, remarks),
			firstLine: data.line + 1,
			firstByte: data.end,
			format: data.format
		},
		remarks
	});
}

function oddMarker(file: string, marker: Marker): ReadRemark {
	return warning(
		'cff-odd-section-line',
		`${file}, line ${marker.line}: “--- file type: ${marker.kind} ---” was expected, but ${quoted(marker.text)} was found; it was taken as the ${marker.kind} section.`
	);
}

/** The byte count of the DAT line decides where the data end, as far as the file reaches. */
function dataBytes(file: string, bytes: Uint8Array, data: Marker, remarks: ReadRemark[]): Uint8Array {
	const present = bytes.length - data.end;
	if (data.byteCount === null || data.byteCount === present) return bytes.subarray(data.end);
	if (data.byteCount > present) {
		remarks.push(
			warning(
				'dat-truncated',
				`${file}, line ${data.line} announces ${data.byteCount} bytes of data, but only ${present} follow; ${data.byteCount - present} bytes are missing.`
			)
		);
		return bytes.subarray(data.end);
	}
	return bytes.subarray(data.end, data.end + data.byteCount);
}

/** Walks the lines up to the data section; what follows it may be binary and is not looked into. */
function findMarkers(bytes: Uint8Array): Marker[] {
	const markers: Marker[] = [];
	const decoder = new TextDecoder('windows-1252');
	let line = 1;
	let start = bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf ? 3 : 0;
	while (start < bytes.length) {
		let stop = start;
		while (stop < bytes.length && bytes[stop] !== 0x0a && bytes[stop] !== 0x0d) stop++;
		const end = bytes[stop] === 0x0d && bytes[stop + 1] === 0x0a ? stop + 2 : stop + 1;
		if (bytes[start] === 0x2d && stop - start <= LONGEST_MARKER) {
			const text = decoder.decode(bytes.subarray(start, stop)).trim();
			const marker = markerOf(text, line, start, Math.min(end, bytes.length));
			if (marker !== null) markers.push(marker);
			if (marker?.kind === 'DAT') break;
		}
		start = end;
		line++;
	}
	return markers;
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
