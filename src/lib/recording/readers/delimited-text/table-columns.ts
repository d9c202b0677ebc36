import type { Heading } from './heading-text';
import { splitHeading, timeUnit_s, withoutBrackets } from './heading-text';
import { isNumberField, isStampField, splitFields, type HeadLine, type TableLayout } from './table-layout';
import { withoutControls } from '../read-problem';

/** What the cells of a column look like. */
export type ColumnKind = 'number' | 'stamp' | 'flag' | 'text';

/** One column of a table before its values are read. */
export interface TableColumn extends Heading {
	index: number;
	/** Heading exactly as written; "" where there is none. */
	heading: string;
	kind: ColumnKind;
	/** The first values as text, for resolution and date order. */
	sample: string[];
}

const SAMPLE_ROWS = 200;

export function isFlagHeading(heading: string): boolean {
	return /(^|[^a-z])flag(ged|s)?([^a-z]|$)|markier/i.test(heading);
}

function kindOf(heading: string, sample: string[], layout: TableLayout): ColumnKind {
	const isNumber = (cell: string) => isNumberField(cell, layout.decimal, layout.grouping);
	if (isFlagHeading(heading)) return 'flag';
	const written = sample.filter((cell) => cell.trim() !== '');
	const numbers = written.filter(isNumber).length;
	const stamps = written.filter((cell) => !isNumber(cell) && isStampField(cell)).length;
	if (written.length > 0 && stamps >= 0.8 * written.length) return 'stamp';
	return numbers > 0 && numbers >= 0.3 * written.length ? 'number' : 'text';
}

/** Names, units and kinds of all columns, judged from the headings and the first rows. */
export function tableColumns(layout: TableLayout, lines: HeadLine[]): TableColumn[] {
	const rows = lines
		.slice(layout.firstRow, layout.firstRow + SAMPLE_ROWS)
		.filter(({ text }) => text.trim() !== '')
		.map(({ text }) => splitFields(text, layout.separator));
	return Array.from({ length: layout.columnCount }, (_, index) => {
		const heading = withoutControls(layout.headings?.[index] ?? '');
		const sample = rows.map((fields) => fields[index] ?? '');
		const split = splitHeading(heading);
		const unitBelow = withoutBrackets(layout.units?.[index] ?? '');
		const name = split.name === '' && layout.headings === null ? `Column ${index + 1}` : split.name;
		const unit = split.unit !== '' ? split.unit : unitBelow === '-' ? '' : unitBelow;
		return { index, heading, name, unit, kind: kindOf(heading, sample, layout), sample };
	});
}

const TIME_HEADING =
	/^(time|times?tamp|date|datetime|t|x|zeit\w*|datum|uhrzeit|temps|tiempo|tempo|hora|clock|interval|start|begin\w*|messung|recorded|utc|local)([^a-z].*)?$/i;

export function isTimeHeading(name: string): boolean {
	return TIME_HEADING.test(name.trim());
}

/** A counter of rows: no heading, or one that says so, and whole numbers going up by one. */
export function isRowCounter(column: TableColumn): boolean {
	if (column.kind !== 'number') return false;
	const isNamed = /^(|no\.?|nr\.?|n|#|index|row|sample|samples|record|point|id)$/i.test(column.heading);
	if (!isNamed) return false;
	const numbers = column.sample.slice(0, 20).map(Number);
	return (
		numbers.length > 1 &&
		numbers.every(
			(value, at) => Number.isInteger(value) && (at === 0 || value === (numbers[at - 1] as number) + 1)
		)
	);
}

/** Columns that tell the time: a date and a clock column, one stamp column, or one of seconds; none is possible. */
export interface TimeColumns {
	kind: 'stamps' | 'numbers';
	columns: TableColumn[];
	/** Seconds per unit of a numeric column. */
	unit_s: number;
	/** Whether the unit was written or had to be taken as seconds. */
	unitIsStated: boolean;
}

export function findTimeColumns(columns: TableColumn[]): TimeColumns | null {
	const stamps = columns.filter(({ kind }) => kind === 'stamp');
	const first = stamps[0];
	if (first !== undefined) {
		const isDateOnly = first.sample.some((cell) => cell.trim() !== '' && !cell.includes(':'));
		const clock = isDateOnly
			? stamps.find((column) => column !== first && column.sample[0]?.includes(':'))
			: undefined;
		const used = clock === undefined ? [first] : [first, clock];
		return { kind: 'stamps', columns: used, unit_s: 1, unitIsStated: true };
	}
	const numbers = columns.filter((column) => column.kind === 'number');
	const named =
		numbers.find(({ unit, name }) => timeUnit_s(unit) !== null && isTimeHeading(name)) ??
		numbers.find(({ unit }) => timeUnit_s(unit) !== null) ??
		numbers.find((column) => isTimeHeading(column.name)) ??
		(columns[0]?.heading === '' && columns[0] !== undefined && risesLikeTime(columns[0])
			? columns[0]
			: undefined);
	if (named === undefined) return null;
	const unit_s = timeUnit_s(named.unit);
	return { kind: 'numbers', columns: [named], unit_s: unit_s ?? 1, unitIsStated: unit_s !== null };
}

/** Without a heading only a first column of evenly rising fractions is taken for a time. */
function risesLikeTime(column: TableColumn): boolean {
	const values = column.sample.map((cell) => Number(cell.replace(',', '.')));
	if (column.kind !== 'number' || values.length < 8 || values.every(Number.isInteger)) return false;
	const first = values[0] as number;
	const step = ((values[values.length - 1] as number) - first) / (values.length - 1);
	return step > 0 && values.every((value, at) => Math.abs(value - first - at * step) < 0.6 * step);
}
