import { ok, type Result } from '../../../result';
import { phaseHints } from '../../phase-hint';
import type { ReadProblem, ReadRemark, Trend, TrendSeries } from '../../recording';
import { note, refuse, warning } from '../read-problem';
import type { PreambleFacts } from './preamble';
import type { TableBody } from './table-body';
import type { TableColumn } from './table-columns';
import type { TimeAxis } from './time-axis';
import { parseTrendHeading, type TrendHeading } from './trend-heading';

export interface TrendTable {
	file: string;
	variant: string;
	/** Columns of values, without time, flags and row numbers. */
	columns: TableColumn[];
	flagColumn: TableColumn | null;
	body: TableBody;
	axis: TimeAxis;
	interval_s: number;
	preamble: PreambleFacts;
	remarks: ReadRemark[];
}

interface ReadColumn {
	column: TableColumn;
	heading: TrendHeading;
}

const USUAL_INTERVALS_S = [3, 600];

/** Rows of a log to a trend: one value per interval, by the words of the headings. */
export function buildTrend(table: TrendTable): Result<Trend, ReadProblem> {
	const { file, body, axis, preamble, interval_s } = table;
	const remarks = [...table.remarks, ...body.remarks, ...axis.remarks];
	const start = axis.start;
	if (start === null)
		return refuse(
			'trend-without-date',
			file,
			`line ${body.firstLine}`,
			`${file} is a log with a row every ${interval_s} s, but its rows carry no date; a column with date and time was expected from line ${body.firstLine} on, because limits count by days and weeks of the clock.`
		);
	const { read, leftOut } = headingsOf(table);
	if (!read.some(({ heading }) => heading.extreme === null))
		return refuse(
			'trend-columns',
			file,
			null,
			`${file} is a log with a row every ${interval_s} s, but no heading names an rms value, an order, a THD or the frequency (such as “U_L1 h5 (%)” or “I_L2 rms (A)”); found: ${leftOut.slice(0, 6).join(', ')}.`
		);
	const starts = ascendingStarts(table, remarks);
	if (!starts.ok) return starts;
	describeColumns(file, read, leftOut, remarks);
	describeInterval(file, interval_s, starts.value, remarks);
	const hints = phaseHints(read.map(({ heading }) => ({ field: '', name: heading.nameForPhase })));
	const all = read.map(({ column, heading }, index) => ({
		extreme: heading.extreme,
		series: seriesOf(column, heading, hints[index] ?? null, body)
	}));
	const extremes = all.flatMap(({ extreme, series }) => (extreme === null ? [] : [{ ...series, extreme }]));
	return ok({
		kind: 'trend',
		format: 'delimited text',
		variant: table.variant,
		stationName: preamble.stationName,
		recorderName: preamble.recorderName,
		nominalFrequency_Hz: preamble.nominalFrequency_Hz,
		start,
		interval_s,
		intervalStarts_s: starts.value,
		flagged: table.flagColumn === null ? null : flagsOf(table.flagColumn, body),
		series: all.flatMap(({ extreme, series }) => (extreme === null ? [series] : [])),
		...(extremes.length > 0 ? { extremes } : {}),
		remarks
	});
}

function headingsOf(table: TrendTable): { read: ReadColumn[]; leftOut: string[] } {
	const read: ReadColumn[] = [];
	const leftOut: string[] = [];
	for (const column of table.columns) {
		const heading = parseTrendHeading(column.name, column.unit);
		if ('leftOut' in heading) leftOut.push(`“${column.heading}” (${heading.leftOut})`);
		else read.push({ column, heading });
	}
	return { read, leftOut };
}

function seriesOf(
	column: TableColumn,
	heading: TrendHeading,
	phaseHint: TrendSeries['phaseHint'],
	body: TableBody
): TrendSeries {
	const values = body.values[column.index] as Float64Array;
	const { times, over } = heading;
	if (times !== 1 || over !== 1)
		for (let row = 0; row < values.length; row++) values[row] = ((values[row] as number) * times) / over;
	return {
		name: column.heading,
		quantity: heading.quantity,
		phaseHint: heading.measure.kind === 'frequency' ? null : phaseHint,
		measure: heading.measure,
		unit: heading.unit,
		values
	};
}

function flagsOf(column: TableColumn, body: TableBody): Uint8Array {
	return Uint8Array.from(body.values[column.index] as Float64Array, (value) => (value > 0 ? 1 : 0));
}

const HOUR_S = 3600;

/**
 * Starts that rise from row to row. A clock set back by up to two hours (end of summer time) goes on with the
 * usual interval; any other step backwards is a refusal.
 */
function ascendingStarts(table: TrendTable, remarks: ReadRemark[]): Result<Float64Array, ReadProblem> {
	const { file, axis, body, interval_s } = table;
	const starts_s = new Float64Array(axis.times_s.length);
	let shift_s = 0;
	for (let row = 1; row < starts_s.length; row++) {
		const step_s = (axis.times_s[row] as number) - (axis.times_s[row - 1] as number);
		const line = body.firstLine + row;
		if (step_s <= 0) {
			const setBack_s = interval_s - step_s;
			const isSetBack = setBack_s <= 2 * HOUR_S && setBack_s % (HOUR_S / 2) === 0;
			if (!isSetBack)
				return refuse(
					'time-not-rising',
					file,
					`line ${line}`,
					`${file}, about line ${line}: a time later than in the row before was expected.`
				);
			shift_s += setBack_s;
			remarks.push(
				note(
					'clock-set-back',
					`${file}, about line ${line}: the clock was set back by ${setBack_s / 60} min; the intervals were counted on without a break.`
				)
			);
		} else if (step_s - interval_s === HOUR_S)
			remarks.push(
				note(
					'hour-without-rows',
					`${file}, about line ${line}: one hour has no rows. If the clock was set forward then, nothing is missing, but all later times are an hour late.`
				)
			);
		starts_s[row] = (axis.times_s[row] as number) + shift_s;
	}
	return ok(starts_s);
}

function describeColumns(file: string, read: ReadColumn[], leftOut: string[], remarks: ReadRemark[]): void {
	if (leftOut.length > 0)
		remarks.push(
			note(
				'columns-left-out',
				`${file}: ${leftOut.length === 1 ? 'one column was' : `${leftOut.length} columns were`} left out: ${leftOut.slice(0, 12).join(', ')}${leftOut.length > 12 ? ', …' : ''}.`
			)
		);
	const assumed = read.filter(({ heading }) => heading.unitIsAssumed);
	if (assumed.length > 0)
		remarks.push(
			note(
				'unit-assumed',
				`${file} gives no unit for ${assumed
					.slice(0, 12)
					.map(({ column }) => column.heading)
					.join(
						', '
					)}${assumed.length > 12 ? ', …' : ''}; volts, amperes, hertz and, for a THD, percent of the fundamental were taken.`
			)
		);
}

function describeInterval(
	file: string,
	interval_s: number,
	starts_s: Float64Array,
	remarks: ReadRemark[]
): void {
	if (!USUAL_INTERVALS_S.includes(interval_s))
		remarks.push(
			warning(
				'unusual-interval',
				`${file} has a row every ${interval_s} s; limits are stated for values over 3 s and 10 min.`
			)
		);
	let gaps = 0;
	let missing = 0;
	for (let row = 1; row < starts_s.length; row++) {
		const steps = Math.round(((starts_s[row] as number) - (starts_s[row - 1] as number)) / interval_s);
		if (steps > 1) {
			gaps++;
			missing += steps - 1;
		}
	}
	if (gaps > 0)
		remarks.push(
			warning(
				'trend-gaps',
				`${file}: ${missing} intervals of ${interval_s} s are missing in ${gaps === 1 ? 'one place' : `${gaps} places`}; they count as no data.`
			)
		);
}
