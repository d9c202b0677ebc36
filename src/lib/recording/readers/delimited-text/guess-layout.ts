import { phaseHints } from '../../phase-hint';
import type { ReadRemark } from '../../recording';
import { parseUnit } from '../../unit-text';
import { note, warning } from '../read-problem';
import type { TextHead } from '../text-blocks';
import { ENCODING_NAMES } from '../text-decoding';
import { timeUnit_s } from './heading-text';
import { quantityByName } from './quantity-name';
import { guessDateOrder, parseStamp } from './stamp-text';
import {
	findTimeColumns,
	isRowCounter,
	tableColumns,
	type TableColumn,
	type TimeColumns
} from './table-columns';
import { detectLayout, numberOfField, tableAsTold, type HeadLine, type TableLayout } from './table-layout';
import { isUnitWord } from './heading-text';
import {
	numericTimeUnit_s,
	type TimeFormat,
	type ToldColumn,
	type ToldLayout,
	type ToldZone
} from './table-layout-told';
import { preambleFacts } from './preamble';
import { parseTrendHeading, type TrendHeading } from './trend-heading';

/** Settings that have a reason of their own. */
export type ReasonedSetting =
	| 'encoding'
	| 'separator'
	| 'decimal'
	| 'grouping'
	| 'headings'
	| 'units'
	| 'firstData'
	| 'content'
	| 'time'
	| 'zone'
	| 'marks';

/** A layout read from the table itself, with why: a person can agree with it or tell another. */
export interface LayoutGuess {
	layout: ToldLayout;
	reasons: Record<ReasonedSetting, string>;
	/** [columns] why each column is taken for what it is. */
	columnReasons: string[];
	/** What the guess had to assume or leave out. */
	remarks: ReadRemark[];
}

/** Rows at least this far apart are values per interval and no samples. */
const TREND_STEP_S = 0.999;

const SEPARATOR_NAMES: Record<TableLayout['separator'], string> = {
	',': 'Commas',
	';': 'Semicolons',
	'\t': 'Tabs',
	'|': 'Bars',
	' ': 'Blanks'
};

export function headLinesOf(lines: readonly string[]): HeadLine[] {
	return lines.map((text, index) => ({ text, number: index + 1 }));
}

/** How the table seems to be written and what its columns seem to be; null where the text is no table of numbers. */
export function guessLayout(file: string, head: TextHead): LayoutGuess | null {
	const lines = headLinesOf(head.lines);
	const table = detectLayout(lines, isUnitWord);
	return table === null ? null : guessOf(file, head, lines, table);
}

/** The settings that say how the text is cut into lines and cells. */
export type ToldWriting = Pick<
	ToldLayout,
	'separator' | 'decimal' | 'grouping' | 'headingLines' | 'unitsLine' | 'firstDataLine'
>;

/** What the columns seem to be once a person has told how the text is cut. */
export function guessColumns(file: string, head: TextHead, writing: ToldWriting): LayoutGuess {
	const lines = headLinesOf(head.lines);
	return guessOf(file, head, lines, tableAsTold(lines, writing));
}

function guessOf(file: string, head: TextHead, lines: HeadLine[], table: TableLayout): LayoutGuess {
	const columns = tableColumns(table, lines);
	const time = findTimeColumns(columns);
	const timing = time === null ? null : timingOf(file, time, table);
	const step_s = timing === null ? NaN : medianOf(timing.steps_s);
	const isTrend = step_s >= TREND_STEP_S;
	const preamble = preambleFacts(table.preamble, table);
	const described = describeColumns(file, columns, time, isTrend);
	const rate = preamble.samplingRate;
	const layout: ToldLayout = {
		encoding: 'as-found',
		separator: table.separator,
		decimal: table.decimal,
		grouping: table.grouping,
		headingLines: table.headingLines,
		unitsLine: table.unitsLine,
		firstDataLine: table.firstRow + 1,
		content: isTrend ? 'trend' : 'waveform',
		time: {
			format: timing?.format ?? 'none',
			samplingRate_Hz: timing === null ? (rate?.rate_Hz ?? null) : null,
			interval_s: null,
			zone: timing?.zone ?? { kind: 'site' },
			start: null,
			marks: isTrend && time !== null && isEndHeading(time) ? 'end' : 'start'
		},
		columns: described.columns
	};
	const remarks = [...encodingRemarks(file, head), ...(timing?.remarks ?? []), ...described.remarks];
	if (timing === null && rate !== null)
		remarks.push(
			note('rate-from-preamble', `${file}, line ${rate.line} states the sampling rate: ${rate.rate_Hz} Hz.`)
		);
	if (layout.time.marks === 'end')
		remarks.push(
			note('times-end-intervals', `${file}: the heading says that a row’s time is the end of its interval.`)
		);
	return {
		layout,
		reasons: {
			...writingReasons(head, table, layout),
			content: contentReason(isTrend, step_s, timing !== null),
			time:
				timing?.reason ??
				(rate === null ? 'No column tells the time.' : `Line ${rate.line} states the sampling rate.`),
			zone: timing?.zoneReason ?? 'The times carry no zone.',
			marks:
				layout.time.marks === 'end'
					? 'The heading speaks of an end.'
					: 'Nothing says that the times are ends.'
		},
		columnReasons: described.reasons,
		remarks
	};
}

function encodingRemarks(file: string, { encoding }: TextHead): ReadRemark[] {
	if (encoding === 'utf-8') return [];
	const sentence = encoding.startsWith('utf-16')
		? `${file} is written in UTF-16.`
		: `${file} is not written in UTF-8; its headings were read as ${ENCODING_NAMES[encoding]}.`;
	return [note('text-encoding', sentence)];
}

function writingReasons(head: TextHead, table: TableLayout, layout: ToldLayout) {
	const fit = `${Math.round(100 * table.fit)} % of the cells looked at read as values that way`;
	return {
		encoding: `The bytes read as ${ENCODING_NAMES[head.encoding]}.`,
		separator: `${SEPARATOR_NAMES[table.separator]} give ${table.columnCount === 1 ? 'one column' : `${table.columnCount} columns`} in most rows; ${fit}.`,
		decimal:
			table.decimal === ','
				? 'Values have a comma before their decimals.'
				: 'No value needs a decimal comma.',
		grouping: table.grouping === 'none' ? 'No grouped digits were seen.' : 'Digits come in groups of three.',
		headings:
			table.headingLines.length === 0
				? 'No line above the values has as many fields as they have.'
				: `Line ${table.headingLines.join(' and ')} has a field for each column.`,
		units:
			table.unitsLine === null
				? 'No line holds only units.'
				: `Every field of line ${table.unitsLine} is a unit.`,
		firstData: `Line ${layout.firstDataLine} is the first of three rows of values.`
	};
}

function contentReason(isTrend: boolean, step_s: number, hasTime: boolean): string {
	if (!hasTime) return 'Without times the rows are taken as samples.';
	const step = `${Number(step_s.toPrecision(4))} s`;
	return isTrend
		? `The rows are ${step} apart: values per interval.`
		: `The rows are ${step} apart: samples.`;
}

function isEndHeading({ columns }: TimeColumns): boolean {
	return columns.some(({ name }) => /\b(end|ende|fin|until|bis|to)\b/i.test(name.replace(/_/g, ' ')));
}

interface Timing {
	format: TimeFormat;
	zone: ToldZone;
	reason: string;
	zoneReason: string;
	/** Differences between the first rows, s. */
	steps_s: number[];
	remarks: ReadRemark[];
}

function timingOf(file: string, time: TimeColumns, table: TableLayout): Timing {
	return time.kind === 'stamps' ? stampTiming(file, time) : numberTiming(file, time, table);
}

function stampTiming(file: string, time: TimeColumns): Timing {
	const [date, clock] = time.columns as [TableColumn, TableColumn?];
	const guess = guessDateOrder(date.sample);
	const seen = date.sample.find((cell) => cell.trim() !== '')?.trim() ?? '';
	const stamp = parseStamp(seen, guess.order);
	const isYearFirst = date.sample.every(
		(cell) => cell.trim() === '' || parseStamp(cell, 'year-first') !== null
	);
	const hasDate = stamp?.day !== null && stamp?.day !== undefined;
	const format: TimeFormat = !hasDate ? 'clock' : isYearFirst ? 'year-first' : guess.order;
	const isUtc = time.columns.some(({ heading }) => /(^|[^a-z])(utc|gmt|zulu)([^a-z]|$)/i.test(heading));
	const hasOffset = (clock ?? date).sample.some(
		(cell) => (parseStamp(cell, guess.order)?.utcOffset_min ?? null) !== null
	);
	const zone: ToldZone = hasOffset ? { kind: 'written' } : isUtc ? { kind: 'utc' } : { kind: 'site' };
	const remarks: ReadRemark[] = [];
	if (!guess.isCertain)
		remarks.push(
			warning(
				'date-order-ambiguous',
				`${file}: dates such as ${seen} can be read with the day or the month first; the day was taken as first. Check the start.`
			)
		);
	if (zone.kind === 'utc')
		remarks.push(note('zone-by-heading', `${file}: the heading says that the times are UTC.`));
	return {
		format,
		zone,
		reason: `“${seen}” in ${time.columns.map(({ heading, index }) => `“${heading || `column ${index + 1}`}”`).join(' and ')}${guess.isCertain ? '' : ' can be read with the day or the month first'}.`,
		zoneReason: hasOffset
			? 'Each time carries its offset.'
			: isUtc
				? 'The heading says UTC.'
				: 'Nothing is written: the clock at the site is taken.',
		steps_s: stepsOf(secondsOf(date.sample, clock?.sample ?? null, guess.order)),
		remarks
	};
}

/** Seconds of the first rows, midnights of a clock without a date counted on. */
function secondsOf(
	dates: string[],
	clocks: string[] | null,
	order: 'day-first' | 'month-first' | 'year-first'
): number[] {
	let before = -Infinity;
	let midnights = 0;
	return dates.flatMap((cell, row) => {
		const stamp = parseStamp(cell, order);
		if (stamp === null) return [];
		const second = (clocks === null ? stamp.second : parseStamp(clocks[row] ?? '', order)?.second) ?? 0;
		if (stamp.day === null && second < before - 43_200) midnights++;
		before = second;
		return [(stamp.day ?? midnights) * 86_400 + second];
	});
}

const NUMERIC_FORMAT: { unit_s: number; format: TimeFormat }[] = [
	{ unit_s: 1e-9, format: 'elapsed-ns' },
	{ unit_s: 1e-6, format: 'elapsed-us' },
	{ unit_s: 1e-3, format: 'elapsed-ms' },
	{ unit_s: 1, format: 'elapsed-s' },
	{ unit_s: 60, format: 'elapsed-min' },
	{ unit_s: 3600, format: 'elapsed-h' }
];

function numberTiming(file: string, time: TimeColumns, table: TableLayout): Timing {
	const column = time.columns[0] as TableColumn;
	const values = column.sample
		.filter((cell) => cell.trim() !== '')
		.map((cell) => numberOfField(cell, table.decimal, table.grouping));
	const format = countedFormat(column, values) ?? elapsedFormat(column.unit);
	const unit_s = numericTimeUnit_s(format) ?? 1;
	const isCounted = !format.startsWith('elapsed');
	const remarks: ReadRemark[] = [];
	if (!time.unitIsStated && !isCounted)
		remarks.push(
			note(
				'time-unit-assumed',
				`${file}: the time column “${column.heading}” has no unit; seconds were taken.`
			)
		);
	return {
		format,
		zone: format === 'serial-days' ? { kind: 'site' } : isCounted ? { kind: 'utc' } : { kind: 'site' },
		reason: `“${column.heading || `Column ${column.index + 1}`}” ${isCounted ? 'counts from a day in the past' : time.unitIsStated ? `is in ${column.unit}` : 'rises from row to row; seconds were taken'}.`,
		zoneReason:
			isCounted && format !== 'serial-days'
				? 'A count since 1970 is in UTC.'
				: 'The clock at the site is taken.',
		steps_s: stepsOf(values.map((value) => value * unit_s)),
		remarks
	};
}

function elapsedFormat(unit: string): TimeFormat {
	const unit_s = timeUnit_s(unit) ?? 1;
	return NUMERIC_FORMAT.find((one) => one.unit_s === unit_s)?.format ?? 'elapsed-s';
}

/** Seconds or milliseconds since 1970 for 2000 to 2100, or a spreadsheet's days for the same years. */
function countedFormat(column: TableColumn, values: number[]): TimeFormat | null {
	const first = values[0];
	if (first === undefined || values.length < 2) return null;
	const within = (low: number, high: number) => first >= low && first <= high;
	if (within(9.46e8, 4.1e9) && /^(|s|sec|secs|seconds?)$/i.test(column.unit)) return 'epoch-s';
	if (within(9.46e11, 4.1e12) && /^(|ms|msec|milliseconds?)$/i.test(column.unit)) return 'epoch-ms';
	if (within(36_526, 73_050) && column.unit === '' && /date|datum|time|zeit|start|end/i.test(column.heading))
		return values.some((value) => !Number.isInteger(value)) ? 'serial-days' : null;
	return null;
}

function stepsOf(seconds: number[]): number[] {
	return seconds.slice(1).map((value, index) => value - (seconds[index] as number));
}

function medianOf(values: number[]): number {
	const sorted = [...values].sort((one, other) => one - other);
	return Number((sorted[Math.floor(sorted.length / 2)] ?? NaN).toPrecision(6));
}

interface DescribedColumns {
	columns: ToldColumn[];
	reasons: string[];
	remarks: ReadRemark[];
}

function describeColumns(
	file: string,
	columns: TableColumn[],
	time: TimeColumns | null,
	isTrend: boolean
): DescribedColumns {
	const told: ToldColumn[] = columns.map(() => ({ role: 'ignore' }));
	const reasons: string[] = columns.map(() => '');
	const leftOut: string[] = [];
	const values: { column: TableColumn; heading: TrendHeading | null }[] = [];
	for (const column of columns) {
		const set = (role: ToldColumn, reason: string) => {
			told[column.index] = role;
			reasons[column.index] = reason;
		};
		const asTime = time?.columns.indexOf(column) ?? -1;
		if (time !== null && asTime >= 0) {
			const role = time.columns.length === 1 ? 'time' : asTime === 0 ? 'date' : 'clock';
			set(
				{ role },
				time.kind === 'stamps'
					? 'Its cells are dates or times.'
					: 'Its heading or its rising values say time.'
			);
		} else if (column.kind === 'flag')
			set(isTrend ? { role: 'flag' } : { role: 'ignore' }, 'Its heading says that it marks rows.');
		else if (column.kind !== 'number') set({ role: 'ignore' }, 'Its cells are not numbers.');
		else if (column.index === 0 && isRowCounter(column)) set({ role: 'ignore' }, 'It counts the rows.');
		else if (!isTrend) values.push({ column, heading: null });
		else {
			const heading = parseTrendHeading(column.name, column.unit);
			if ('leftOut' in heading) {
				leftOut.push(`“${column.heading}” (${heading.leftOut})`);
				set({ role: 'ignore' }, `Left out: ${heading.leftOut}.`);
			} else values.push({ column, heading });
		}
	}
	const hints = phaseHints(
		values.map(({ column, heading }) => ({ field: '', name: heading?.nameForPhase ?? column.name }))
	);
	for (const [at, { column, heading }] of values.entries()) {
		told[column.index] =
			heading === null
				? sampleColumn(column, hints[at] ?? null)
				: valueColumn(column, heading, hints[at] ?? null);
		reasons[column.index] = valueReason(column, told[column.index] as ToldColumn);
	}
	const remarks: ReadRemark[] = [];
	if (leftOut.length > 0 && values.length > 0)
		remarks.push(
			note(
				'columns-left-out',
				`${file}: ${leftOut.length === 1 ? 'one column was' : `${leftOut.length} columns were`} left out: ${leftOut.slice(0, 12).join(', ')}${leftOut.length > 12 ? ', …' : ''}.`
			)
		);
	return { columns: told, reasons, remarks };
}

function sampleColumn(column: TableColumn, phase: ReturnType<typeof phaseHints>[number]): ToldColumn {
	const byName = column.unit === '' ? quantityByName(column.name) : null;
	const quantity = byName ?? parseUnit(column.unit).quantity;
	return { role: 'sample', quantity, phase, unit: column.unit.slice(0, 20), factor: 1 };
}

function valueColumn(
	column: TableColumn,
	heading: TrendHeading,
	phase: ReturnType<typeof phaseHints>[number]
): ToldColumn {
	const { measure, quantity, extreme } = heading;
	return {
		role: 'value',
		quantity,
		phase: measure.kind === 'frequency' ? null : phase,
		unit: heading.unit === 'percent-of-fundamental' && column.unit !== '' ? '%' : column.unit.slice(0, 20),
		factor: 1,
		measure: measure.kind,
		order: measure.kind === 'order' ? measure.order : null,
		extreme: extreme ?? 'none'
	};
}

function valueReason(column: TableColumn, told: ToldColumn): string {
	if (told.role !== 'sample' && told.role !== 'value') return '';
	const by = column.unit === '' ? 'Its name' : `Its unit ${column.unit}`;
	const what =
		told.quantity === 'other'
			? 'It is neither volts nor amperes by name or unit'
			: `${by} says ${told.quantity}`;
	const where = told.phase === null ? 'its name tells no conductor' : `its name points to ${told.phase}`;
	return told.role === 'value' && told.measure === 'frequency'
		? 'Its name or unit says frequency.'
		: `${what}; ${where}.`;
}
