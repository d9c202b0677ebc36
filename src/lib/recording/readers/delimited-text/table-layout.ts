import { numberInText } from '../number-in-bytes';
import { mayBeStamp, parseStamp } from './stamp-text';

export type Separator = ',' | ';' | '\t' | '|' | ' ';

/** Lines from the top of a file, with their numbers (from 1) and first bytes. */
export interface HeadLine {
	text: string;
	number: number;
	start: number;
}

/** How the table is written and where it begins. */
export interface TableLayout {
	separator: Separator;
	decimal: '.' | ',';
	columnCount: number;
	/** Index into the head lines of the first row of values. */
	firstRow: number;
	/** Heading fields, one per column; null for a table without headings. */
	headings: string[] | null;
	/** Units from a row of their own below the headings; null where there is none. */
	units: string[] | null;
	/** Lines above the headings. */
	preamble: HeadLine[];
}

const SEPARATORS: readonly Separator[] = ['\t', ';', ',', '|', ' '];
const SAMPLE_ROWS = 60;

/** Fields of one line; quotation marks keep separators inside; blanks in a row make one separator. */
export function splitFields(text: string, separator: Separator): string[] {
	if (separator === ' ') {
		const trimmed = text.trim();
		return trimmed === '' ? [] : trimmed.split(/[ \t]+/).map(unquoted);
	}
	if (!text.includes('"')) return text.split(separator);
	const fields: string[] = [];
	let field = '';
	let inQuotes = false;
	for (const character of text) {
		if (character === '"') inQuotes = !inQuotes;
		else if (character === separator && !inQuotes) {
			fields.push(field);
			field = '';
		} else field += character;
	}
	fields.push(field);
	return fields;
}

function unquoted(text: string): string {
	return text.replace(/^"|"$/g, '');
}

export function isNumberField(text: string, decimal: '.' | ','): boolean {
	const trimmed = text.trim();
	if (trimmed === '' || (decimal === ',' && trimmed.includes('.'))) return false;
	return !Number.isNaN(numberInText(decimal === ',' ? trimmed.replace(',', '.') : trimmed));
}

export function isStampField(text: string): boolean {
	if (!mayBeStamp(text)) return false;
	return parseStamp(text, 'day-first') !== null || parseStamp(text, 'month-first') !== null;
}

function isValueField(text: string, decimal: '.' | ','): boolean {
	return isNumberField(text, decimal) || isStampField(text);
}

function mostFrequent(counts: number[]): number {
	const tally = new Map<number, number>();
	for (const count of counts) tally.set(count, (tally.get(count) ?? 0) + 1);
	let best = 0;
	for (const [count, times] of tally) if (times > (tally.get(best) ?? 0)) best = count;
	return best;
}

interface Candidate {
	separator: Separator;
	decimal: '.' | ',';
	columnCount: number;
	score: number;
}

/** Share of rows with the usual number of fields × share of their fields that are values. */
function rate(rows: string[], separator: Separator, decimal: '.' | ','): Candidate {
	const split = rows.map((row) => splitFields(row, separator));
	const columnCount = mostFrequent(split.map((fields) => fields.length));
	const usual = split.filter((fields) => fields.length === columnCount);
	const cells = usual.flat();
	const values = cells.filter((cell) => isValueField(cell, decimal)).length;
	const blanks = cells.filter((cell) => cell.trim() === '').length;
	const share = cells.length === 0 ? 0 : (values + 0.5 * blanks) / cells.length;
	const isSingle = columnCount < 2 ? 0.1 : 0;
	return { separator, decimal, columnCount, score: (usual.length / rows.length) * share - isSingle };
}

function bestCandidate(rows: string[]): Candidate | null {
	let best: Candidate | null = null;
	for (const decimal of ['.', ','] as const) {
		for (const separator of SEPARATORS) {
			if (separator === decimal) continue;
			const candidate = rate(rows, separator, decimal);
			if (candidate.columnCount > 0 && (best === null || candidate.score > best.score + 1e-9))
				best = candidate;
		}
	}
	return best !== null && best.score >= 0.4 ? best : null;
}

function isDataRow(text: string, { separator, decimal, columnCount }: Candidate): boolean {
	const fields = splitFields(text, separator).map((field) => field.trim());
	if (Math.abs(fields.length - columnCount) > 1 || fields.length < Math.min(2, columnCount)) return false;
	const written = fields.filter((field) => field !== '');
	const values = written.filter((field) => isValueField(field, decimal)).length;
	return values > 0 && values >= 0.5 * written.length && isValueField(written[0] ?? '', decimal);
}

/** Finds separator, decimal sign, headings and first row; null where the text is no table of numbers. */
export function detectLayout(lines: HeadLine[], isUnit: (text: string) => boolean): TableLayout | null {
	const written = lines.filter(({ text }) => text.trim() !== '');
	const best = bestCandidate(written.slice(-SAMPLE_ROWS).map(({ text }) => text));
	if (best === null) return null;
	return layoutFor(lines, commaOfOneColumn(written, best), isUnit) ?? layoutFor(lines, best, isUnit);
}

/**
 * "325,269" is one value or two. Where the heading above such rows is a single field, it is one value with a
 * decimal comma.
 */
function commaOfOneColumn(written: HeadLine[], best: Candidate): Candidate {
	if (best.separator !== ',' || best.columnCount !== 2) return best;
	const firstRow = written.findIndex(({ text }) => isDataRow(text, best));
	const heading = written[firstRow - 1]?.text;
	const isSingle = heading !== undefined && splitFields(heading, ',').length === 1;
	return isSingle ? { separator: ';', decimal: ',', columnCount: 1, score: best.score } : best;
}

function layoutFor(
	lines: HeadLine[],
	candidate: Candidate,
	isUnit: (text: string) => boolean
): TableLayout | null {
	const isRow = lines.map(({ text }) => isDataRow(text, candidate));
	const firstRow = lines.findIndex((_, index) => {
		if (!isRow[index]) return false;
		const following = lines
			.map((line, at) => ({ line, at }))
			.slice(index + 1, index + 8)
			.filter(({ line }) => line.text.trim() !== '')
			.slice(0, 2);
		return following.every(({ at }) => isRow[at]);
	});
	if (firstRow < 0) return null;
	const { separator, decimal, columnCount } = candidate;
	const above = lines.slice(0, firstRow).filter(({ text }) => text.trim() !== '');
	return { separator, decimal, columnCount, firstRow, ...headingsAbove(above, candidate, isUnit) };
}

function headingsAbove(
	above: HeadLine[],
	{ separator, columnCount }: Candidate,
	isUnit: (text: string) => boolean
): Pick<TableLayout, 'headings' | 'units' | 'preamble'> {
	const fieldsOf = (line: HeadLine | undefined): string[] | null => {
		if (line === undefined) return null;
		const fields = splitFields(line.text, separator).map((field) => field.trim());
		return Math.abs(fields.length - columnCount) <= 1 ? fields : null;
	};
	const nearest = fieldsOf(above[above.length - 1]);
	if (nearest === null) return { headings: null, units: null, preamble: above };
	const next = fieldsOf(above[above.length - 2]);
	if (next !== null && nearest.every(isUnit) && !next.every(isUnit))
		return { headings: next, units: nearest, preamble: above.slice(0, -2) };
	return { headings: nearest, units: null, preamble: above.slice(0, -1) };
}
