import { z } from 'zod';
import { parseIsoLocal } from '../../calendar';
import { PHASES } from '../../phase';

export const SEPARATORS = [',', ';', '\t', '|', ' '] as const;
export type Separator = (typeof SEPARATORS)[number];
export type DecimalSign = '.' | ',';

/** What may stand between groups of three digits. */
export const GROUPINGS = ['none', 'space', 'comma', 'dot', 'apostrophe'] as const;
export type Grouping = (typeof GROUPINGS)[number];

/** Text encodings that can be told; "as-found" looks at the bytes. */
export const TOLD_ENCODINGS = [
	'as-found',
	'utf-8',
	'utf-16le',
	'utf-16be',
	'windows-1252',
	'windows-1251',
	'ibm866',
	'gb18030'
] as const;
export type ToldEncoding = (typeof TOLD_ENCODINGS)[number];

/**
 * How a row tells its time: not at all, by a clock (date in one of three orders, or a time of day alone), by a count
 * since 1970 (UTC) or since a spreadsheet's day zero, or by what has elapsed since some moment.
 */
export const TIME_FORMATS = [
	'none',
	'year-first',
	'day-first',
	'month-first',
	'clock',
	'epoch-s',
	'epoch-ms',
	'serial-days',
	'elapsed-ns',
	'elapsed-us',
	'elapsed-ms',
	'elapsed-s',
	'elapsed-min',
	'elapsed-h'
] as const;
export type TimeFormat = (typeof TIME_FORMATS)[number];

/** Seconds per unit of a time written as a number; null for times that are not. */
export function numericTimeUnit_s(format: TimeFormat): number | null {
	return NUMERIC_UNITS_S[format] ?? null;
}

const NUMERIC_UNITS_S: Partial<Record<TimeFormat, number>> = {
	'epoch-s': 1,
	'epoch-ms': 1e-3,
	'serial-days': 86_400,
	'elapsed-ns': 1e-9,
	'elapsed-us': 1e-6,
	'elapsed-ms': 1e-3,
	'elapsed-s': 1,
	'elapsed-min': 60,
	'elapsed-h': 3600
};

const lineNumber = z.number().int().min(1).max(100_000);
const factor = z
	.number()
	.refine((value) => Number.isFinite(value) && value !== 0, 'The factor is a number other than zero.');
const unit = z.string().trim().max(20);
const phase = z.enum(PHASES).nullable();

/** What one column is. */
const toldColumnSchema = z.discriminatedUnion('role', [
	z.object({ role: z.literal('ignore') }),
	/** A whole time stamp, or a number of seconds. */
	z.object({ role: z.literal('time') }),
	z.object({ role: z.literal('date') }),
	z.object({ role: z.literal('clock') }),
	z.object({ role: z.literal('flag') }),
	/** Samples of a waveform: value in base unit = written × unit × factor. An empty unit is the base unit. */
	z.object({
		role: z.literal('sample'),
		quantity: z.enum(['voltage', 'current', 'other']),
		phase,
		unit,
		factor
	}),
	/** Values per interval: rms, one order, THD or frequency; "%" is of the fundamental. An empty unit is the usual one. */
	z.object({
		role: z.literal('value'),
		quantity: z.enum(['voltage', 'current']),
		phase,
		unit,
		factor,
		measure: z.enum(['rms', 'order', 'thd', 'frequency']),
		order: z.number().int().min(1).max(100).nullable(),
		extreme: z.enum(['none', 'minimum', 'maximum'])
	})
]);
export type ToldColumn = z.infer<typeof toldColumnSchema>;
export type SampleColumn = Extract<ToldColumn, { role: 'sample' }>;
export type ValueColumn = Extract<ToldColumn, { role: 'value' }>;

/** Whose clock the times are on. "written": the offset beside each time, the site's clock where none is written. */
const toldZoneSchema = z.discriminatedUnion('kind', [
	z.object({ kind: z.literal('written') }),
	z.object({ kind: z.literal('site') }),
	z.object({ kind: z.literal('utc') }),
	z.object({ kind: z.literal('offset'), offset_min: z.number().int().min(-840).max(840) })
]);
export type ToldZone = z.infer<typeof toldZoneSchema>;

/** The same while a person is still at it: every setting is there, but some may contradict each other. */
export const layoutUnderWaySchema = z.object({
	encoding: z.enum(TOLD_ENCODINGS),
	separator: z.enum(SEPARATORS),
	decimal: z.enum(['.', ',']),
	grouping: z.enum(GROUPINGS),
	/** Lines whose fields together head the columns; none where the table has no headings. */
	headingLines: z.array(lineNumber).max(4),
	unitsLine: lineNumber.nullable(),
	/** Everything before it that heads nothing is passed over. */
	firstDataLine: lineNumber,
	content: z.enum(['waveform', 'trend']),
	time: z.object({
		format: z.enum(TIME_FORMATS),
		/** For a waveform whose rows tell no time; null while nobody has stated it. */
		samplingRate_Hz: z.number().positive().max(1e9).nullable(),
		/** For a log whose rows tell no time. */
		interval_s: z.number().positive().max(86_400).nullable(),
		zone: toldZoneSchema,
		/** Moment of the first row, where the rows do not tell it; local, ISO form. */
		start: z
			.string()
			.refine((text) => parseIsoLocal(text) !== null, 'Enter a date and time such as 2026-03-02T10:00:00.')
			.nullable(),
		/** Whether a row's time is where its interval starts or where it ends. */
		marks: z.enum(['start', 'end'])
	}),
	columns: z.array(toldColumnSchema).min(1).max(2000)
});

/** How a table of text is to be read, as guessed or as a person tells it. Lines count from 1, columns from 0. */
export const toldLayoutSchema = layoutUnderWaySchema.superRefine((layout, context) => {
	for (const { path, message } of contradictions(layout)) context.addIssue({ code: 'custom', path, message });
});
export type ToldLayout = z.infer<typeof toldLayoutSchema>;

export interface Contradiction {
	/** Setting that has to change, e.g. ["time", "format"] or ["columns", 3]. */
	path: (string | number)[];
	message: string;
}

/** What cannot be so at once, each with the setting that has to change. */
export function contradictions(layout: ToldLayout): Contradiction[] {
	const found: Contradiction[] = [];
	const say = (path: (string | number)[], message: string) => found.push({ path, message });
	const count = (role: ToldColumn['role']) => layout.columns.filter((column) => column.role === role).length;
	if (layout.decimal === layout.separator)
		say(['decimal'], 'The decimal sign cannot be the separator of the columns as well.');
	if (groupingMark(layout.grouping) === layout.decimal)
		say(['grouping'], 'The digits cannot be grouped by the decimal sign.');
	const above = [...layout.headingLines, ...(layout.unitsLine === null ? [] : [layout.unitsLine])];
	if (above.some((line) => line >= layout.firstDataLine))
		say(['firstDataLine'], 'The first line of values comes after the headings and units.');
	const { format } = layout.time;
	const times = count('time') + count('date') + count('clock');
	if (format === 'none' && times > 0)
		say(['time', 'format'], 'A column is told to be the time: choose how it is written.');
	if (format !== 'none' && times === 0)
		say(['time', 'format'], 'Say which column is the time, or choose that the rows tell none.');
	if (count('time') > 1 || count('date') > 1 || count('clock') > 1 || (count('time') === 1 && times > 1))
		say(['columns'], 'One column is the time, or one the date and one the time of day.');
	if (count('clock') === 1 && count('date') === 0 && format !== 'clock' && times === 1)
		say(['time', 'format'], 'A time of day without a date is written as a time of day alone.');
	if (numericTimeUnit_s(format) !== null && count('date') + count('clock') > 0)
		say(['time', 'format'], 'A count of seconds or days is in one column, told to be the time.');
	if (count('flag') > 1) say(['columns'], 'Only one column can mark flagged intervals.');
	const wanted = layout.content === 'waveform' ? 'sample' : 'value';
	if (count(wanted) === 0)
		say(
			['columns'],
			wanted === 'sample'
				? 'No column is told to be samples of a voltage or current.'
				: 'No column is told to be an rms value, an order, a THD or the frequency.'
		);
	for (const [index, column] of layout.columns.entries()) {
		if (column.role === (wanted === 'sample' ? 'value' : 'sample'))
			say(
				['columns', index],
				`Column ${index + 1} does not fit a ${layout.content === 'waveform' ? 'waveform' : 'log of values per interval'}.`
			);
		if (column.role === 'value' && column.measure === 'order' && column.order === null)
			say(['columns', index], `Column ${index + 1} is told to be an order: say which.`);
	}
	return found;
}

export function groupingMark(grouping: Grouping): string | null {
	return { none: null, space: ' ', comma: ',', dot: '.', apostrophe: "'" }[grouping];
}

export function parseToldLayout(json: string): ToldLayout {
	return toldLayoutSchema.parse(JSON.parse(json));
}
