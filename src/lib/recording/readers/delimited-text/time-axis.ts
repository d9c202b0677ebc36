import { err, ok, type Result } from '../../../result';
import { isoLocal } from '../../calendar';
import type { ReadProblem, ReadRemark, RecordingStart } from '../../recording';
import { note, warning } from '../read-problem';
import { guessDateOrder } from './stamp-text';
import type { TableBody } from './table-body';
import type { TimeColumns } from './table-columns';

/** The rows' times as the table tells them. */
export interface TimeAxis {
	/** [rows] seconds from the first row. */
	times_s: Float64Array;
	/** Smallest difference that the written times can show, s. */
	resolution_s: number;
	/** Clock time of the first row, where the table tells it with a date. */
	start: RecordingStart | null;
	/** Time of the first row as written, s; negative where a trigger is the origin. */
	first_s: number;
	remarks: ReadRemark[];
}

const DAY_S = 86_400;

export function timeAxisOf(file: string, time: TimeColumns, body: TableBody): Result<TimeAxis, ReadProblem> {
	const axis = time.kind === 'stamps' ? stampAxis(file, time, body) : numberAxis(file, time, body);
	const missing = axis.times_s.findIndex(Number.isNaN);
	if (missing < 0) return ok(axis);
	return err({
		code: 'time-unreadable',
		file,
		place: `line ${body.firstLine + missing}`,
		sentence: `${file}, about line ${body.firstLine + missing}: a time was expected in column ${(time.columns[0]?.index ?? 0) + 1} (“${time.columns[0]?.heading ?? ''}”), but none could be read there.`
	});
}

function numberAxis(file: string, time: TimeColumns, body: TableBody): TimeAxis {
	const column = time.columns[0] as TimeColumns['columns'][number];
	const values = body.values[column.index] as Float64Array;
	const first = values[0] as number;
	const times_s = values.map((value) => (value - first) * time.unit_s);
	const remarks = time.unitIsStated
		? []
		: [
				note(
					'time-unit-assumed',
					`${file}: the time column “${column.heading}” has no unit; seconds were taken.`
				)
			];
	return {
		times_s,
		resolution_s: writtenResolution(column.sample) * time.unit_s,
		start: null,
		first_s: first * time.unit_s,
		remarks
	};
}

/** Whole days and seconds of the day are subtracted apart: nanoseconds survive. */
function stampAxis(file: string, time: TimeColumns, body: TableBody): TimeAxis {
	const [date, clock] = time.columns;
	const clockColumn = (clock ?? date) as TimeColumns['columns'][number];
	const days = body.days[(date as TimeColumns['columns'][number]).index] as Float64Array;
	const seconds = body.values[clockColumn.index] as Float64Array;
	const firstDay = days[0] as number;
	const firstSecond = secondOfDay(seconds[0] as number, days[0] as number);
	let midnights = 0;
	const times_s = new Float64Array(body.rowCount);
	for (let row = 0; row < body.rowCount; row++) {
		const second = secondOfDay(seconds[row] as number, days[row] as number);
		const hasDate = !Number.isNaN(firstDay);
		if (!hasDate && row > 0 && second < (seconds[row - 1] as number) - DAY_S / 2) midnights++;
		const elapsedDays = hasDate ? (days[row] as number) - firstDay : midnights;
		times_s[row] = elapsedDays * DAY_S + (second - firstSecond);
	}
	return {
		times_s,
		resolution_s: writtenResolution(clockColumn.sample.map(secondsPart)),
		start: startOf(firstDay, firstSecond, body.utcOffset_min, clockColumn.sample[0] ?? ''),
		first_s: 0,
		remarks: orderRemark(file, time)
	};
}

/** A row with only a date stands for its midnight. */
function secondOfDay(second: number, day: number): number {
	return Number.isNaN(second) && !Number.isNaN(day) ? 0 : second;
}

function orderRemark(file: string, time: TimeColumns): ReadRemark[] {
	const sample = time.columns[0]?.sample ?? [];
	if (guessDateOrder(sample).isCertain) return [];
	return [
		warning(
			'date-order-ambiguous',
			`${file}: dates such as ${sample[0]?.trim() ?? ''} can be read with the day or the month first; the day was taken as first. Check the start.`
		)
	];
}

function startOf(
	day: number,
	second: number,
	utcOffset_min: number | null,
	written: string
): RecordingStart | null {
	if (Number.isNaN(day) || Number.isNaN(second)) return null;
	const date = new Date(day * DAY_S * 1000);
	const whole = Math.floor(second);
	const digits = Math.min(9, decimalsOf(secondsPart(written)));
	const fraction = digits === 0 ? '' : (second - whole).toFixed(digits).slice(2);
	const local = isoLocal({
		year: date.getUTCFullYear(),
		month: date.getUTCMonth() + 1,
		day: date.getUTCDate(),
		hour: Math.floor(whole / 3600),
		minute: Math.floor((whole % 3600) / 60),
		second: whole % 60,
		fraction
	});
	return { local, utcOffset_min };
}

/** The seconds of a clock text with their fraction: "10:20:30.125" → "30.125", "3:21:43 PM.135" → "43.135". */
function secondsPart(text: string): string {
	const match = /:(\d{2})(?:[.,:](\d+))?\s*(?:[ap]m)?\.?(\d+)?/i.exec(
		text.replace(/^.*?\d{1,2}:\d{2}(?=:)/, '')
	);
	const fraction = match?.[2] ?? match?.[3];
	return match === null ? '0' : fraction === undefined ? (match[1] ?? '0') : `${match[1]}.${fraction}`;
}

function decimalsOf(text: string): number {
	const match = /[.,](\d+)/.exec(text);
	return match === null ? 0 : (match[1] ?? '').length;
}

/** Plain decimals: the longest fraction counts (trailing zeros may be cut). With exponents: the coarsest step. */
function writtenResolution(sample: string[]): number {
	let decimals = 0;
	let coarsest = 0;
	for (const text of sample) {
		const match = /^\s*"?[+-]?\d+(?:[.,](\d*))?[eE]([+-]?\d+)"?\s*$/.exec(text);
		if (match === null) decimals = Math.max(decimals, decimalsOf(text));
		else coarsest = Math.max(coarsest, 10 ** (Number(match[2]) - (match[1] ?? '').length));
	}
	return coarsest > 0 ? coarsest : 10 ** -decimals;
}

export interface EvenSpacing {
	samplingRate_Hz: number;
	/** True where the written times are too coarse to prove that no sample is missing. */
	isCoarse: boolean;
}

/** One rate for times that lie on a straight line within what their text can show; null for any others. */
export function evenSpacing(axis: TimeAxis): EvenSpacing | null {
	const last = axis.times_s.length - 1;
	const step_s = (axis.times_s[last] as number) / last;
	if (!(step_s > 0)) return null;
	let deviation_s = 0;
	for (let row = 0; row <= last; row++)
		deviation_s = Math.max(deviation_s, Math.abs((axis.times_s[row] as number) - row * step_s));
	// A lost sample moves some row by half a step at least; a clock that is being disciplined moves it far less.
	const isEven = deviation_s <= 0.1 * step_s;
	if (!isEven && !(deviation_s <= 1.01 * axis.resolution_s)) return null;
	const span_s = axis.times_s[last] as number;
	// Times cut to twelve significant digits show a finer step at the start than at the end.
	const written_s = Math.max(axis.resolution_s, 1e-11 * span_s);
	const uncertainty_s = Math.min(written_s, 2 * deviation_s + 1e-12 * span_s);
	return { samplingRate_Hz: roundest(1 / step_s, uncertainty_s / span_s), isCoarse: !isEven };
}

/** The value with the fewest digits among those that the rounding of the times leaves possible. */
function roundest(rate_Hz: number, relativeUncertainty: number): number {
	for (let digits = 1; digits <= 15; digits++) {
		const candidate = Number(rate_Hz.toPrecision(digits));
		if (Math.abs(candidate / rate_Hz - 1) <= relativeUncertainty) return candidate;
	}
	return rate_Hz;
}

/** Middle value of the steps between rows, s. */
export function medianStep_s(times_s: Float64Array): number {
	const steps = new Float64Array(Math.max(0, times_s.length - 1));
	for (let row = 1; row < times_s.length; row++)
		steps[row - 1] = (times_s[row] as number) - (times_s[row - 1] as number);
	steps.sort();
	return steps[Math.floor(steps.length / 2)] ?? NaN;
}
