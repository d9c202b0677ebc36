import type { CaptureHandle } from '../../capture-handle';
import type { ReadRemark, RecordingNote } from '../../recording';
import { note } from '../read-problem';
import { decodeText } from '../text-decoding';

/** Text for people is shown up to here; the file itself is kept. */
const LONGEST_TEXT = 4000;
/** Bytes of it that are looked at. */
const LONGEST_BYTES = 1 << 16;

const KIND_WORDS: Record<string, string> = {
	HDR: 'Notes of the recording',
	INF: 'Further information of the recorder'
};

/** Bytes [start, end) of a file, to be shown as they are. */
export interface TextPart {
	kind: string;
	file: CaptureHandle;
	start: number;
	end: number;
}

/** HDR and INF as text; they are never needed, so nothing in them can stop the reading. */
export function readNotes(parts: readonly TextPart[], remarks: ReadRemark[]): RecordingNote[] {
	const notes: RecordingNote[] = [];
	for (const { kind, file, start, end } of parts) {
		const bytes = new Uint8Array(Math.min(end - start, LONGEST_BYTES));
		file.read(start, bytes);
		const whole = plainText(decodeText(bytes).text);
		if (whole === '') continue;
		const isCut = whole.length > LONGEST_TEXT || end - start > LONGEST_BYTES;
		const text = isCut ? `${whole.slice(0, LONGEST_TEXT).trimEnd()} …` : whole;
		notes.push({ title: `${KIND_WORDS[kind] ?? kind} (${kind}, ${file.name})`, text });
		if (isCut)
			remarks.push(
				note(
					'note-cut',
					`${file.name}: the ${kind} text is shown up to its first ${LONGEST_TEXT} characters; the file itself is kept whole.`
				)
			);
	}
	return notes;
}

/** Line ends made one, control characters and blank ends of lines taken off, at most one blank line at a time. */
function plainText(text: string): string {
	return (
		text
			.replace(/\r\n?/g, '\n')
			// eslint-disable-next-line no-control-regex -- control characters are exactly what has to go
			.replace(/[\u0000-\u0008\u000b-\u001f\u007f\ufeff\ufffd]+/g, '')
			.replace(/[ \t]+$/gm, '')
			.replace(/\n{3,}/g, '\n\n')
			.trim()
	);
}
