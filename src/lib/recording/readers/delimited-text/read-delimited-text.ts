import { err, ok, type Result } from '../../../result';
import { handleOf, type CaptureHandle } from '../../capture-handle';
import type { CaptureFile, ReadProblem, ReadRemark, Recording, Trend } from '../../recording';
import type { SampleScratch } from '../../sample-scratch';
import type { CaptureSource, SampleSource } from '../../sample-source';
import { parseUnit } from '../../unit-text';
import { refuse, withoutControls } from '../read-problem';
import { textBlocks, type TextBlocks, type TextHead } from '../text-blocks';
import { buildTrend } from './build-trend';
import { buildWaveform, sampleFactor } from './build-waveform';
import { createColumnStore } from './column-store';
import { guessLayout, headLinesOf, type LayoutGuess } from './guess-layout';
import { splitHeading } from './heading-text';
import { joinTrends } from './join-tables';
import { preambleFacts, type PreambleFacts } from './preamble';
import { rowsOnScratch } from './rows-on-scratch';
import type { RowTimes } from './row-times';
import { splitFields } from './table-layout';
import type { ToldLayout } from './table-layout-told';
import { readRows, type ReadRows } from './table-rows';
import { medianStep_s, timeAxisOf, type TimeAxis } from './time-axis';

export interface DelimitedTextOptions {
	/** Rate for tables without any time of their own, as a person states it. */
	samplingRate_Hz?: number;
	/** How the table is to be read, as a person told it; guessed from the text where absent. */
	layout?: ToldLayout;
}

export interface OpenDelimitedTextOptions extends DelimitedTextOptions {
	/** Where decoded values go when the text is long; memory where absent. */
	scratch?: SampleScratch;
	/** Text longer than this goes to scratch; see IN_MEMORY_BYTES. */
	inMemory_bytes?: number;
}

/**
 * Text above this goes to scratch. Below it the values take at most four times as much memory (two characters a value,
 * eight bytes each).
 */
const IN_MEMORY_BYTES = 24 << 20;

const SEPARATOR_WORDS: Record<ToldLayout['separator'], string> = {
	',': 'comma separated',
	';': 'semicolon separated',
	'\t': 'tab separated',
	'|': 'bar separated',
	' ': 'space separated'
};

/** A table of numbers in plain text, whole in memory: samples of a waveform, or a log of values per interval. */
export function readDelimitedText(
	files: CaptureFile[],
	options: DelimitedTextOptions = {}
): Result<Recording | Trend, ReadProblem> {
	const opened = openDelimitedText(files.map(handleOf), options);
	if (!opened.ok || opened.value.kind === 'trend') return opened as Result<Trend, ReadProblem>;
	const { samples, channels, ...frame } = opened.value;
	if (samples.kind !== 'memory') throw new Error('a table read without scratch is in memory');
	return ok({
		...frame,
		channels: channels.map((channel, index) => ({ ...channel, samples: samples.channels[index]! }))
	});
}

/**
 * Opens a table of numbers in plain text of any length. Separator, decimal sign, headings, units, times and the meaning of
 * the columns are as told, or guessed from the text itself. Memory: one block of text, one chunk of rows, and of a long
 * table 8 bytes a row where its times are uneven or it is a log.
 */
export function openDelimitedText(
	files: readonly CaptureHandle[],
	options: OpenDelimitedTextOptions = {}
): Result<CaptureSource | Trend, ReadProblem> {
	const empty = files.find(({ size_bytes }) => size_bytes === 0);
	const [first, ...others] = files;
	if (first === undefined || empty !== undefined)
		return refuse(
			'file-empty',
			empty?.name ?? '',
			null,
			`${empty?.name ?? 'The file'} is empty (0 bytes); a table of numbers was expected.`
		);
	return others.length === 0 ? openTable(first, options) : openTables(files, options);
}

/** Several files of one log: rows that follow in time, or columns over the same times. */
function openTables(
	files: readonly CaptureHandle[],
	options: OpenDelimitedTextOptions
): Result<Trend, ReadProblem> {
	const parts: { file: string; trend: Trend }[] = [];
	for (const file of files) {
		const opened = openTable(file, options);
		if (!opened.ok) return opened;
		if (opened.value.kind === 'waveform')
			return refuse(
				'waveforms-apart',
				file.name,
				null,
				`${file.name} holds samples of a waveform; each file of samples is a capture of its own. Upload it by itself.`
			);
		parts.push({ file: file.name, trend: opened.value });
	}
	return joinTrends(parts);
}

/** A file as text, or why it is none. */
export function openText(
	file: CaptureHandle,
	layout: ToldLayout | undefined
): Result<{ text: TextBlocks; head: TextHead }, ReadProblem> {
	const encoding = layout?.encoding ?? 'as-found';
	const text = textBlocks(file, encoding === 'as-found' ? null : encoding);
	const head = text.head();
	if (head.binaryAt !== null)
		return refuse(
			'not-text',
			file.name,
			`byte ${head.binaryAt}`,
			`${file.name}, byte ${head.binaryAt}: a table in plain text was expected, but the file holds binary data.`
		);
	return ok({ text, head });
}

function openTable(
	file: CaptureHandle,
	options: OpenDelimitedTextOptions
): Result<CaptureSource | Trend, ReadProblem> {
	const opened = openText(file, options.layout);
	if (!opened.ok) return opened;
	const { text, head } = opened.value;
	const guess = options.layout === undefined ? guessLayout(file.name, head) : null;
	const layout = options.layout ?? guess?.layout;
	if (layout === undefined)
		return refuse(
			'no-table',
			file.name,
			'line 1',
			`${file.name}: no table of numbers was found; rows of numbers separated by commas, semicolons, tabs or blanks were expected from line 1 on, with or without lines above them.`
		);
	const scratch =
		file.size_bytes > (options.inMemory_bytes ?? IN_MEMORY_BYTES) ? (options.scratch ?? null) : null;
	const table: Table = {
		text,
		layout,
		scratch,
		headings: columnHeadings(layout, head.lines),
		preamble: preambleFacts(linesAbove(layout, head.lines), layout),
		remarks: guess?.remarks ?? []
	};
	const read =
		layout.content === 'trend' ? openTrend(table) : openWaveform(table, options.samplingRate_Hz ?? null);
	// A person can tell how a table is to be read that could not be understood without help.
	return read.ok ? read : err({ ...read.problem, isTable: true });
}

/** How a table seems to be written, and its headings by that; null where the text is no table of numbers. */
export function guessTableOf(file: CaptureHandle): (LayoutGuess & { headings: string[] }) | null {
	if (file.size_bytes === 0) return null;
	const opened = openText(file, undefined);
	if (!opened.ok) return null;
	const { head } = opened.value;
	const guess = guessLayout(file.name, head);
	return guess === null ? null : { ...guess, headings: columnHeadings(guess.layout, head.lines) };
}

interface Table {
	text: TextBlocks;
	layout: ToldLayout;
	scratch: SampleScratch | null;
	headings: string[];
	preamble: PreambleFacts;
	remarks: ReadRemark[];
}

/** Lines above headings, units and values. */
function linesAbove(layout: ToldLayout, lines: readonly string[]) {
	const first = Math.min(layout.firstDataLine, layout.unitsLine ?? Infinity, ...layout.headingLines);
	return headLinesOf(lines.slice(0, first - 1)).filter(({ text }) => text.trim() !== '');
}

/** [columns] heading as written, over all heading lines; "" for none. */
export function columnHeadings(layout: ToldLayout, lines: readonly string[]): string[] {
	const rows = layout.headingLines.map((line) => splitFields(lines[line - 1] ?? '', layout.separator));
	return layout.columns.map((_, column) =>
		rows
			.map((fields) => withoutControls(fields[column] ?? ''))
			.filter((field) => field !== '')
			.join(' ')
	);
}

function variantOf({ separator, decimal }: ToldLayout): string {
	return `${SEPARATOR_WORDS[separator]}${decimal === ',' ? ', decimal comma' : ''}`;
}

function placesOf(layout: ToldLayout, role: ToldLayout['columns'][number]['role']): number[] {
	return layout.columns.flatMap((column, index) => (column.role === role ? [index] : []));
}

function openWaveform(table: Table, stated_Hz: number | null): Result<CaptureSource, ReadProblem> {
	const { text, layout, scratch, headings } = table;
	const used = placesOf(layout, 'sample');
	if (used.length === 0)
		return refuse(
			'no-channels',
			text.name,
			`line ${layout.firstDataLine}`,
			`${text.name} has no column of samples beside the time; at least one column of voltages or currents was expected from line ${layout.firstDataLine} on.`
		);
	const columns = used.map((index) => ({
		name: splitHeading(headings[index] ?? '').name || `Column ${index + 1}`,
		column: layout.columns[index] as Extract<ToldLayout['columns'][number], { role: 'sample' }>
	}));
	const factors = columns.map(({ column }) => sampleFactor(column));
	const rowsOut = scratch === null ? null : rowsOnScratch(used.length, factors, scratch);
	const memory = createColumnStore(rowsOut === null ? used.length : 0, null);
	const times = createColumnStore(1, scratch);
	const time = new Float64Array(1);
	const rows = readRows(text, layout, used, headings, (values, time_s) => {
		time[0] = time_s;
		times.push(time);
		if (rowsOut === null) memory.push(values);
		else rowsOut.push(values);
	});
	if (!rows.ok) return rows;
	times.seal();
	memory.seal();
	const samples: SampleSource = rowsOut?.seal() ?? {
		kind: 'memory',
		channels: columns.map(({ column }, at) => scaled(memory.column(at), column))
	};
	return buildWaveform({
		file: text.name,
		variant: variantOf(layout),
		layout,
		columns,
		samples,
		rowCount: rows.value.rowCount,
		missing: rows.value.missing,
		axis: axisOf(layout, times, rows.value.times),
		preamble: table.preamble,
		statedSamplingRate_Hz: stated_Hz,
		remarks: [...table.remarks, ...rows.value.remarks]
	});
}

function axisOf(
	layout: ToldLayout,
	times: ReturnType<typeof createColumnStore>,
	rows: RowTimes
): TimeAxis | null {
	return rows.tellsTime ? timeAxisOf(layout, times, rows) : null;
}

/** A small prefix divides: that rounds only once. */
function scaled(values: Float64Array, { unit, factor }: { unit: string; factor: number }): Float64Array {
	const { times, over } = parseUnit(unit);
	if (times === 1 && over === 1 && factor === 1) return values;
	for (let row = 0; row < values.length; row++)
		values[row] = ((values[row] as number) * times * factor) / over;
	return values;
}

function openTrend(table: Table): Result<Trend, ReadProblem> {
	const { text, layout, scratch, headings } = table;
	const valueColumns = placesOf(layout, 'value');
	const [flagColumn] = placesOf(layout, 'flag');
	const used = flagColumn === undefined ? valueColumns : [...valueColumns, flagColumn];
	const store = createColumnStore(1 + used.length, scratch);
	const row = new Float64Array(1 + used.length);
	const rows = readRows(text, layout, used, headings, (values, time_s) => {
		row[0] = time_s;
		row.set(values, 1);
		store.push(row);
	});
	if (!rows.ok) return rows;
	store.seal();
	const times = timesOfTrend(table, store, rows.value);
	if (!times.ok) return times;
	const { times_s, interval_s } = times.value;
	const shift_s = layout.time.marks === 'end' ? -interval_s : 0;
	return buildTrend({
		file: text.name,
		variant: variantOf(layout),
		layout,
		columns: valueColumns.map((index, at) => ({
			heading: headings[index] || `Column ${index + 1}`,
			column: layout.columns[index] as Extract<ToldLayout['columns'][number], { role: 'value' }>,
			values: () => store.column(1 + at)
		})),
		flagged:
			flagColumn === undefined
				? null
				: Uint8Array.from(store.column(1 + valueColumns.length), (value) => (value > 0 ? 1 : 0)),
		times_s,
		start: timeAxisOf(layout, store, rows.value.times, shift_s).start,
		interval_s,
		preamble: table.preamble,
		otherHeadings: headings
			.filter((heading, index) => heading !== '' && layout.columns[index]?.role === 'ignore')
			.map((heading) => `“${heading}”`),
		remarks: [...table.remarks, ...rows.value.remarks]
	});
}

/** Times and spacing of a log: as its rows tell, or a row every so often where a person told so. */
function timesOfTrend(
	{ text, layout }: Table,
	store: ReturnType<typeof createColumnStore>,
	rows: ReadRows
): Result<{ times_s: Float64Array; interval_s: number }, ReadProblem> {
	const told_s = layout.time.interval_s;
	if (rows.times.tellsTime) {
		const times_s = store.column(0);
		const step_s = Number(medianStep_s(times_s).toPrecision(6));
		if (step_s > 0) return ok({ times_s, interval_s: step_s });
		if (times_s.length === 1 && told_s !== null) return ok({ times_s, interval_s: told_s });
		return refuse(
			'interval-unknown',
			text.name,
			`line ${layout.firstDataLine}`,
			`${text.name}: the times do not rise from row to row from line ${layout.firstDataLine} on, so the interval of the log is not known.`
		);
	}
	if (told_s === null)
		return refuse(
			'interval-missing',
			text.name,
			`line ${layout.firstDataLine}`,
			`${text.name} has no time column and nobody has stated its interval; state how many seconds lie between two rows from line ${layout.firstDataLine} on. None is ever assumed.`
		);
	return ok({
		times_s: Float64Array.from({ length: rows.rowCount }, (_, row) => row * told_s),
		interval_s: told_s
	});
}
