import { isoLocal, isRealDate, isRealTime } from '../../calendar';
import type { CaptureHandle } from '../../capture-handle';
import type { ReadRemark, RecordingNote, RecordingStart } from '../../recording';
import { note, quoted } from '../read-problem';
import { decodeText } from '../text-decoding';
import type { RiffChunk } from './riff-chunks';

/** Bytes of one text chunk that are looked at. */
const LONGEST_BYTES = 1 << 16;
const LONGEST_TEXT = 4000;

/** Pieces of LIST INFO that tell a person something about a recording. */
const INFO_WORDS: Record<string, string> = {
	INAM: 'Title',
	ISBJ: 'Subject',
	ICMT: 'Comment',
	ICRD: 'Created',
	ITCH: 'Recorded by',
	ISRC: 'Source'
};

/** What the bext chunk of EBU Tech 3285 tells. */
export interface BroadcastExtension {
	description: string;
	recorderName: string;
	/** From its date and time of origination, which carry no zone; null where they are left empty. */
	start: RecordingStart | null;
}

function bytesOf(file: CaptureHandle, chunk: RiffChunk): Uint8Array {
	const bytes = new Uint8Array(Math.min(chunk.end - chunk.start, LONGEST_BYTES));
	file.read(chunk.start, bytes);
	return bytes;
}

/** Text up to its first zero byte. */
function textIn(bytes: Uint8Array): string {
	const end = bytes.indexOf(0);
	return decodeText(end < 0 ? bytes : bytes.subarray(0, end)).text.trim();
}

/** Names and comments of a LIST INFO chunk, for people. */
export function readInfo(file: CaptureHandle, chunk: RiffChunk): RecordingNote | null {
	const bytes = bytesOf(file, chunk);
	if (String.fromCharCode(...bytes.subarray(0, 4)) !== 'INFO') return null;
	const view = new DataView(bytes.buffer);
	const lines: string[] = [];
	for (let at = 4; at + 8 <= bytes.length;) {
		const id = String.fromCharCode(...bytes.subarray(at, at + 4));
		const size = view.getUint32(at + 4, true);
		const text = textIn(bytes.subarray(at + 8, Math.min(bytes.length, at + 8 + size)));
		const words = INFO_WORDS[id];
		if (words !== undefined && text !== '') lines.push(`${words}: ${text}`);
		at += 8 + size + (size % 2);
	}
	if (lines.length === 0) return null;
	return {
		title: `Notes of the recording (INFO, ${file.name})`,
		text: lines.join('\n').slice(0, LONGEST_TEXT)
	};
}

const DATE = /^(\d{4})\D(\d{2})\D(\d{2})$/;
const TIME = /^(\d{2})\D(\d{2})\D(\d{2})$/;

/**
 * The broadcast extension: text, originator and when the recording began. The count of samples since midnight refines the
 * whole seconds of the time where the two agree.
 * source  EBU Tech 3285, bext chunk: Description 256, Originator 32, OriginatorReference 32, OriginationDate 10,
 *         OriginationTime 8 characters, TimeReference 64 bits (layout from memory)
 */
export function readBroadcastExtension(
	file: CaptureHandle,
	chunk: RiffChunk,
	samplingRate_Hz: number,
	remarks: ReadRemark[]
): BroadcastExtension | null {
	const bytes = bytesOf(file, chunk);
	if (bytes.length < 346) return null;
	const dateText = textIn(bytes.subarray(320, 330));
	const timeText = textIn(bytes.subarray(330, 338));
	const sinceMidnight_s = Number(new DataView(bytes.buffer).getBigUint64(338, true)) / samplingRate_Hz;
	const start = startOf(dateText, timeText, sinceMidnight_s);
	if (start === null && `${dateText}${timeText}` !== '')
		remarks.push(
			note(
				'wav-origination-unreadable',
				`${file.name}, byte ${chunk.start + 320}: a date and time such as 2026-03-10 and 09:30:00 were expected, but ${quoted(`${dateText} ${timeText}`)} was found; the start has to be entered.`
			)
		);
	return {
		description: textIn(bytes.subarray(0, 256)),
		recorderName: textIn(bytes.subarray(256, 288)),
		start
	};
}

function startOf(dateText: string, timeText: string, sinceMidnight_s: number): RecordingStart | null {
	const date = DATE.exec(dateText);
	const time = TIME.exec(timeText);
	if (date === null || time === null) return null;
	const [year, month, day] = date.slice(1).map(Number) as [number, number, number];
	const [hour, minute, second] = time.slice(1).map(Number) as [number, number, number];
	if (!isRealDate(year, month, day) || !isRealTime(hour, minute, second)) return null;
	const fraction_s = sinceMidnight_s - (hour * 3600 + minute * 60 + second);
	const agrees = fraction_s >= 0 && fraction_s < 1;
	const fraction = agrees ? String(Math.min(999_999, Math.round(fraction_s * 1e6))).padStart(6, '0') : '';
	return { local: isoLocal({ year, month, day, hour, minute, second, fraction }), utcOffset_min: null };
}
