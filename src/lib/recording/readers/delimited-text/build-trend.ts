import { ok, type Result } from '../../../result';
import type { ReadProblem, ReadRemark, RecordingStart, Trend, TrendSeries } from '../../recording';
import { parseUnit } from '../../unit-text';
import { note, refuse, warning } from '../read-problem';
import type { PreambleFacts } from './preamble';
import type { ToldLayout, ValueColumn } from './table-layout-told';

/** One column of values as told; `values` gives them as written, each time anew where they lie on scratch. */
export interface NamedValues {
	heading: string;
	column: ValueColumn;
	values: () => Float64Array;
}

export interface TrendTable {
	file: string;
	variant: string;
	layout: ToldLayout;
	columns: NamedValues[];
	/** [rows] 1 where the log marks the interval. */
	flagged: Uint8Array | null;
	/** [rows] seconds from the first row. */
	times_s: Float64Array;
	start: RecordingStart | null;
	interval_s: number;
	preamble: PreambleFacts;
	/** Headings of the columns that are not read, for the refusal of a log without any. */
	otherHeadings: string[];
	remarks: ReadRemark[];
}

const USUAL_INTERVALS_S = [3, 600];

/** Rows of a log to a trend: one value per interval and column. */
export function buildTrend(table: TrendTable): Result<Trend, ReadProblem> {
	const { file, layout, preamble, interval_s, start, columns } = table;
	const remarks = [...table.remarks];
	if (start === null)
		return refuse(
			'trend-without-date',
			file,
			`line ${layout.firstDataLine}`,
			`${file} is a log with a row every ${interval_s} s, but its rows carry no date; a column with date and time was expected from line ${layout.firstDataLine} on, because limits count by days and weeks of the clock.`
		);
	if (!columns.some(({ column }) => column.extreme === 'none'))
		return refuse(
			'trend-columns',
			file,
			null,
			`${file} is a log with a row every ${interval_s} s, but no heading names an rms value, an order, a THD or the frequency (such as “U_L1 h5 (%)” or “I_L2 rms (A)”); found: ${table.otherHeadings.slice(0, 6).join(', ')}.`
		);
	const starts = ascendingStarts(table, remarks);
	if (!starts.ok) return starts;
	describeUnits(table, remarks);
	describeInterval(file, interval_s, starts.value, remarks);
	const extremes = columns.flatMap((named) =>
		named.column.extreme === 'none' ? [] : [seriesOf(named, { extreme: named.column.extreme })]
	);
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
		flagged: table.flagged,
		series: columns.flatMap((named) => (named.column.extreme === 'none' ? [seriesOf(named, {})] : [])),
		...(extremes.length > 0 ? { extremes } : {}),
		remarks
	});
}

/** The values stay where they are until somebody asks for them, and are asked for one column at a time. */
function seriesOf<More extends object>(
	{ heading, column, values }: NamedValues,
	more: More
): TrendSeries & More {
	const isPercent = isPercentOf(column);
	const { times, over } = isPercent ? { times: 1, over: 1 } : parseUnit(column.unit);
	const scaled = () => {
		const written = values();
		const { factor } = column;
		if (times === 1 && over === 1 && factor === 1) return written;
		return written.map((value) => (factor * value * times) / over);
	};
	return {
		name: heading,
		quantity: column.quantity,
		phaseHint: column.phase,
		measure: measureOf(column),
		unit:
			column.measure === 'frequency'
				? 'Hz'
				: isPercent
					? 'percent-of-fundamental'
					: column.quantity === 'voltage'
						? 'V'
						: 'A',
		...more,
		get values() {
			return scaled();
		}
	};
}

/** A distortion without a unit is in percent. */
function isPercentOf({ unit, measure }: ValueColumn): boolean {
	return unit.startsWith('%') || (unit === '' && measure === 'thd');
}

function measureOf({ measure, order }: ValueColumn): TrendSeries['measure'] {
	return measure === 'order' ? { kind: 'order', order: order ?? 0 } : { kind: measure };
}

const HOUR_S = 3600;

/**
 * Starts that rise from row to row. A clock set back by up to two hours (end of summer time) goes on with the
 * usual interval; any other step backwards is a refusal.
 */
function ascendingStarts(table: TrendTable, remarks: ReadRemark[]): Result<Float64Array, ReadProblem> {
	const { file, times_s, layout, interval_s } = table;
	const starts_s = new Float64Array(times_s.length);
	let shift_s = 0;
	for (let row = 1; row < starts_s.length; row++) {
		const step_s = (times_s[row] as number) - (times_s[row - 1] as number);
		const line = layout.firstDataLine + row;
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
		starts_s[row] = (times_s[row] as number) + shift_s;
	}
	return ok(starts_s);
}

function describeUnits({ file, columns }: TrendTable, remarks: ReadRemark[]): void {
	const assumed = columns.filter(({ column }) => column.unit === '');
	if (assumed.length === 0) return;
	remarks.push(
		note(
			'unit-assumed',
			`${file} gives no unit for ${assumed
				.slice(0, 12)
				.map(({ heading }) => heading)
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
