import { numberInText } from '../number-in-bytes';
import { mayBeStamp, parseStamp } from './stamp-text';
import { groupingMark, type DecimalSign, type Grouping, type Separator } from './table-layout-told';

/** Lines from the top of a file, with their numbers (from 1). */
export interface HeadLine {
	text: string;
	number: number;
}

/** How the table is written and where it begins. */
export interface TableLayout {
	separator: Separator;
	decimal: DecimalSign;
	grouping: Grouping;
	columnCount: number;
	/** Index into the head lines of the first row of values. */
	firstRow: number;
	/** Heading fields, one per column; null for a table without headings. */
	headings: string[] | null;
	/** Units from a row of their own below the headings; null where there is none. */
	units: string[] | null;
	/** Lines above the headings. */
	preamble: HeadLine[];
	/** Numbers of the lines of the headings, and of the units. */
	headingLines: number[];
	unitsLine: number | null;
	/** Share of the last rows that fit this way of reading, 0 to 1. */
	fit: number;
}

/** In the order in which they are tried: what is rarest inside a value comes first. */
const SEPARATORS: readonly Separator[] = ['\t', ';', ',', '|', ' '];
/** Grouped digits are only believed where they make this much more of the table readable. */
const GROUPING_GAIN = 0.05;
const SAMPLE_ROWS = 60;

/** Fields of one line; quotation marks keep separators inside; blanks in a row make one separator. */
export function splitFields(text: string, separator: Separator): string[] {
	if (separator === ' ') {
		const trimmed = text.trim();
		return (trimmed.match(/"[^"]*"|[^ \t]+/g) ?? []).map(unquoted);
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

/** The number in a field, NaN for none; groups of digits must be of three. */
export function numberOfField(text: string, decimal: DecimalSign, grouping: Grouping = 'none'): number {
	let plain = text.trim();
	const mark = groupingMark(grouping);
	if (mark !== null) {
		const written = mark === ' ' ? plain.replace(/[\u00a0\u2009\u202f]/g, ' ') : plain;
		if (written.includes(mark)) {
			if (!GROUPED[grouping].test(written.split(decimal)[0] ?? '')) return NaN;
			plain = written.split(mark).join('');
		}
	}
	if (plain === '' || (decimal === ',' && plain.includes('.'))) return NaN;
	return numberInText(decimal === ',' ? plain.replace(',', '.') : plain);
}

const GROUPED: Record<Grouping, RegExp> = {
	none: /^$/,
	space: /^[+-]?\d{1,3}( \d{3})+$/,
	comma: /^[+-]?\d{1,3}(,\d{3})+$/,
	dot: /^[+-]?\d{1,3}(\.\d{3})+$/,
	apostrophe: /^[+-]?\d{1,3}('\d{3})+$/
};

export function isNumberField(text: string, decimal: DecimalSign, grouping: Grouping = 'none'): boolean {
	return !Number.isNaN(numberOfField(text, decimal, grouping));
}

export function isStampField(text: string): boolean {
	if (!mayBeStamp(text)) return false;
	return parseStamp(text, 'day-first') !== null || parseStamp(text, 'month-first') !== null;
}

function isValueField(text: string, { decimal, grouping }: Writing): boolean {
	return isNumberField(text, decimal, grouping) || isStampField(text);
}

function mostFrequent(counts: number[]): number {
	const tally = new Map<number, number>();
	for (const count of counts) tally.set(count, (tally.get(count) ?? 0) + 1);
	let best = 0;
	for (const [count, times] of tally) if (times > (tally.get(best) ?? 0)) best = count;
	return best;
}

type Writing = Pick<TableLayout, 'decimal' | 'grouping'>;

interface Candidate extends Writing {
	separator: Separator;
	columnCount: number;
	score: number;
}

/** Share of rows with the usual number of fields × share of their fields that are values. */
function rate(rows: string[], separator: Separator, writing: Writing): Candidate {
	const split = rows.map((row) => splitFields(row, separator));
	const columnCount = mostFrequent(split.map((fields) => fields.length));
	const usual = split.filter((fields) => fields.length === columnCount);
	const cells = usual.flat();
	const values = cells.filter((cell) => isValueField(cell, writing)).length;
	const blanks = cells.filter((cell) => cell.trim() === '').length;
	const share = cells.length === 0 ? 0 : (values + 0.5 * blanks) / cells.length;
	const isSingle = columnCount < 2 ? 0.1 : 0;
	return { separator, ...writing, columnCount, score: (usual.length / rows.length) * share - isSingle };
}

function bestCandidate(rows: string[]): Candidate | null {
	let best: Candidate | null = null;
	const consider = (separator: Separator, writing: Writing, gain: number) => {
		if (separator === writing.decimal) return;
		const candidate = rate(rows, separator, writing);
		if (candidate.columnCount > 0 && (best === null || candidate.score > best.score + gain)) best = candidate;
	};
	for (const decimal of ['.', ','] as const)
		for (const separator of SEPARATORS) consider(separator, { decimal, grouping: 'none' }, 1e-9);
	const plain = best as Candidate | null;
	// Blanks may part columns or groups of digits: where another sign parts columns as well, it is the groups.
	const isBlank = plain?.separator === ' ';
	if (isBlank || (plain?.score ?? 0) < 1 - GROUPING_GAIN)
		for (const decimal of ['.', ','] as const)
			for (const grouping of ['space', 'apostrophe', decimal === '.' ? 'comma' : 'dot'] as const)
				for (const separator of SEPARATORS)
					if (separator !== groupingMark(grouping) || rows.some((row) => row.includes('"')))
						consider(
							separator,
							{ decimal, grouping },
							isBlank && separator !== ' ' && grouping === 'space' ? -0.02 : GROUPING_GAIN
						);
	return settled(best);
}

function settled(best: Candidate | null): Candidate | null {
	return best !== null && best.score >= 0.4 ? best : null;
}

function isDataRow(text: string, candidate: Candidate): boolean {
	const { separator, columnCount } = candidate;
	const fields = splitFields(text, separator).map((field) => field.trim());
	if (Math.abs(fields.length - columnCount) > 1 || fields.length < Math.min(2, columnCount)) return false;
	const written = fields.filter((field) => field !== '');
	const values = written.filter((field) => isValueField(field, candidate)).length;
	return values > 0 && values >= 0.5 * written.length && isValueField(written[0] ?? '', candidate);
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
	return isSingle
		? { separator: ';', decimal: ',', grouping: 'none', columnCount: 1, score: best.score }
		: best;
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
	const { separator, decimal, grouping, columnCount, score } = candidate;
	const above = lines.slice(0, firstRow).filter(({ text }) => text.trim() !== '');
	return {
		...{ separator, decimal, grouping, columnCount, firstRow },
		...headingsAbove(above, candidate, isUnit),
		fit: Math.min(1, score + (columnCount < 2 ? 0.1 : 0))
	};
}

function headingsAbove(
	above: HeadLine[],
	{ separator, columnCount }: Candidate,
	isUnit: (text: string) => boolean
): Pick<TableLayout, 'headings' | 'units' | 'preamble' | 'headingLines' | 'unitsLine'> {
	const fieldsOf = (line: HeadLine | undefined): string[] | null => {
		if (line === undefined) return null;
		const fields = splitFields(line.text, separator).map((field) => field.trim());
		return Math.abs(fields.length - columnCount) <= 1 ? fields : null;
	};
	const numberOf = (line: HeadLine | undefined) => line?.number ?? null;
	const numbersOf = (line: HeadLine | undefined) => (line === undefined ? [] : [line.number]);
	const nearest = fieldsOf(above[above.length - 1]);
	if (nearest === null)
		return { headings: null, units: null, preamble: above, headingLines: [], unitsLine: null };
	const next = fieldsOf(above[above.length - 2]);
	if (next !== null && nearest.every(isUnit) && !next.every(isUnit))
		return {
			headings: next,
			units: nearest,
			preamble: above.slice(0, -2),
			headingLines: numbersOf(above[above.length - 2]),
			unitsLine: numberOf(above[above.length - 1])
		};
	return {
		headings: nearest,
		units: null,
		preamble: above.slice(0, -1),
		headingLines: numbersOf(above[above.length - 1]),
		unitsLine: null
	};
}

/** The same as a person told it; the number of columns is what most of the rows have. */
export function tableAsTold(
	lines: readonly HeadLine[],
	told: {
		separator: Separator;
		decimal: DecimalSign;
		grouping: Grouping;
		headingLines: number[];
		unitsLine: number | null;
		firstDataLine: number;
	}
): TableLayout {
	const { separator, decimal, grouping, headingLines, unitsLine, firstDataLine } = told;
	const fieldsOf = (line: number) =>
		splitFields(lines[line - 1]?.text ?? '', separator).map((field) => field.trim());
	const rows = lines
		.slice(firstDataLine - 1, firstDataLine - 1 + SAMPLE_ROWS)
		.filter(({ text }) => text.trim() !== '')
		.map(({ text }) => text);
	const { columnCount, score } = rate(rows.length === 0 ? [''] : rows, separator, { decimal, grouping });
	const headingFields = headingLines.map(fieldsOf);
	const first = Math.min(firstDataLine, unitsLine ?? Infinity, ...headingLines);
	return {
		...{ separator, decimal, grouping, columnCount: Math.max(1, columnCount), firstRow: firstDataLine - 1 },
		headings:
			headingLines.length === 0
				? null
				: Array.from({ length: Math.max(1, columnCount) }, (_, column) =>
						headingFields
							.map((fields) => fields[column] ?? '')
							.filter((field) => field !== '')
							.join(' ')
					),
		units: unitsLine === null ? null : fieldsOf(unitsLine),
		preamble: lines.slice(0, first - 1).filter(({ text }) => text.trim() !== ''),
		headingLines,
		unitsLine,
		fit: Math.max(0, Math.min(1, score + (columnCount < 2 ? 0.1 : 0)))
	};
}
