import { err, ok, type Result } from '../../../result';
import type { ReadProblem } from '../../recording';
import { numberInText } from '../number-in-bytes';
import { quoted, refuse, withoutControls } from '../read-problem';

/** Lines of a configuration, walked from top to bottom; blank lines are passed over. */
export interface CfgCursor {
	file: string;
	lines: { text: string; number: number }[];
	at: number;
	/** Number of the last line of the text, for "ends after line …". */
	lastLine: number;
}

/** A SUB byte (0x1A) ends the text: an old end-of-file mark. `firstLine` is the number of the text's first line. */
export function openCfg(file: string, text: string, firstLine: number): CfgCursor {
	const end = text.indexOf('\u001a');
	const all = (end < 0 ? text : text.slice(0, end)).split(/\r\n|\n|\r/);
	const lines = all
		.map((line, index) => ({ text: line, number: firstLine + index }))
		.filter(({ text: line }) => line.trim() !== '');
	const lastLine = lines[lines.length - 1]?.number ?? firstLine;
	return { file, lines, at: 0, lastLine };
}

export interface CfgRow {
	fields: string[];
	text: string;
	line: number;
}

/** The next line as trimmed fields, or a refusal that says what should have stood there. */
export function nextRow(cursor: CfgCursor, expected: string): Result<CfgRow, ReadProblem> {
	const row = peekRow(cursor);
	if (row === null) return endsTooSoon(cursor, expected);
	cursor.at++;
	return ok(row);
}

export function peekRow(cursor: CfgCursor): CfgRow | null {
	const line = cursor.lines[cursor.at];
	if (line === undefined) return null;
	return { fields: line.text.split(',').map(withoutControls), text: line.text, line: line.number };
}

function endsTooSoon(cursor: CfgCursor, expected: string): Result<never, ReadProblem> {
	return err({
		code: 'cfg-ends-too-soon',
		file: cursor.file,
		place: `line ${cursor.lastLine + 1}`,
		sentence: `${cursor.file} ends after line ${cursor.lastLine}; ${expected} was expected on line ${cursor.lastLine + 1}.`
	});
}

/** Refusal at one line: what was expected there and what stands there. */
export function unexpected(cursor: CfgCursor, row: CfgRow, code: string, expected: string) {
	return refuse(
		code,
		cursor.file,
		`line ${row.line}`,
		`${cursor.file}, line ${row.line}: ${expected} was expected, but ${quoted(row.text)} was found.`
	);
}

export function wholeNumber(text: string): number | null {
	return /^[+]?\d{1,10}$/.test(text) ? Number(text) : null;
}

/** A finite number, or null. */
export function finiteNumber(text: string): number | null {
	const value = numberInText(text);
	return Number.isFinite(value) ? value : null;
}
