import { dayNumber, isoLocal, parseIsoLocal, type WallClock } from '../../calendar';
import type { RecordingStart } from '../../recording';
import type { ColumnStore } from './column-store';
import type { RowTimes } from './row-times';
import { numericTimeUnit_s, type ToldLayout, type ToldZone } from './table-layout-told';

/** The rows' times as the table tells them. */
export interface TimeAxis {
	/** Seconds from the first row, as the only column. */
	times: ColumnStore;
	/** Smallest difference that the written times can show, s. */
	resolution_s: number;
	/** Clock time of the first row, where the table or a person tells it with a date. */
	start: RecordingStart | null;
	/** Time of the first row as written, s; negative where a trigger is the origin. */
	first_s: number;
}

const DAY_S = 86_400;

/** shift_s  what has to be added to the first row's clock time, where rows are marked by the end of their interval */
export function timeAxisOf(layout: ToldLayout, times: ColumnStore, rows: RowTimes, shift_s = 0): TimeAxis {
	const unit_s = numericTimeUnit_s(layout.time.format);
	const isClock = unit_s === null;
	return {
		times,
		resolution_s: isClock
			? writtenResolution(rows.written.map(secondsPart))
			: writtenResolution(rows.written) * unit_s,
		start: startOf(layout, rows, isClock ? (rows.written[0] ?? '') : '', shift_s),
		first_s: isClock ? 0 : rows.first_s
	};
}

function startOf(
	{ time }: ToldLayout,
	rows: RowTimes,
	written: string,
	shift_s: number
): RecordingStart | null {
	const { firstDay, firstSecond } = rows;
	const utcOffset_min = offsetOf(time.zone, rows.utcOffset_min);
	if (!Number.isNaN(firstDay) && !Number.isNaN(firstSecond)) {
		const digits = Math.min(
			9,
			written === '' ? decimalsNeeded(firstSecond) : decimalsOf(secondsPart(written))
		);
		return { local: localOf(firstDay, firstSecond + shift_s, digits), utcOffset_min };
	}
	if (time.start === null) return null;
	return { local: shiftedLocal(time.start, shift_s), utcOffset_min };
}

/** Minutes east of UTC; null leaves it to the clock at the site. */
function offsetOf(zone: ToldZone, written_min: number | null): number | null {
	if (zone.kind === 'utc') return 0;
	if (zone.kind === 'offset') return zone.offset_min;
	return zone.kind === 'written' ? written_min : null;
}

/** A local moment some seconds later, or earlier. */
export function shiftedLocal(local: string, shift_s: number): string {
	if (shift_s === 0) return local;
	const clock = parseIsoLocal(local) as WallClock;
	const day = dayNumber(clock.year, clock.month, clock.day);
	const second = clock.hour * 3600 + clock.minute * 60 + clock.second + Number(`0.${clock.fraction || '0'}`);
	return localOf(day, second + shift_s, clock.fraction.length);
}

/** ISO form of a second of a day; it may lie before or after that day. */
export function localOf(day: number, second: number, digits: number): string {
	const days = Math.floor(second / DAY_S);
	const ofDay = second - days * DAY_S;
	const date = new Date((day + days) * DAY_S * 1000);
	const whole = Math.floor(ofDay);
	const fraction = digits === 0 ? '' : (ofDay - whole).toFixed(digits).slice(2);
	return isoLocal({
		year: date.getUTCFullYear(),
		month: date.getUTCMonth() + 1,
		day: date.getUTCDate(),
		hour: Math.floor(whole / 3600),
		minute: Math.floor((whole % 3600) / 60),
		second: whole % 60,
		fraction
	});
}

function decimalsNeeded(second: number): number {
	return Number.isInteger(second) ? 0 : 6;
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
	const last = axis.times.rowCount - 1;
	const span_s = lastTime_s(axis.times);
	const step_s = span_s / last;
	if (!(step_s > 0)) return null;
	let deviation_s = 0;
	let row = 0;
	for (const piece of axis.times.pieces(0))
		for (let at = 0; at < piece.length; at++, row++)
			deviation_s = Math.max(deviation_s, Math.abs((piece[at] as number) - row * step_s));
	// A lost sample moves some row by half a step at least; a clock that is being disciplined moves it far less.
	const isEven = deviation_s <= 0.1 * step_s;
	if (!isEven && !(deviation_s <= 1.01 * axis.resolution_s)) return null;
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

export function lastTime_s(times: ColumnStore): number {
	let last = NaN;
	for (const piece of times.pieces(0)) last = piece[piece.length - 1] ?? last;
	return last;
}

/** First row, from 0, whose time is not later than the one before; −1 where all rise. */
export function firstStepBack(times: ColumnStore): number {
	let before = -Infinity;
	let row = 0;
	for (const piece of times.pieces(0))
		for (const time of piece) {
			if (time <= before) return row;
			before = time;
			row++;
		}
	return -1;
}

/** Middle value of the steps between rows, s. */
export function medianStep_s(times_s: Float64Array): number {
	const steps = new Float64Array(Math.max(0, times_s.length - 1));
	for (let row = 1; row < times_s.length; row++)
		steps[row - 1] = (times_s[row] as number) - (times_s[row - 1] as number);
	steps.sort();
	return steps[Math.floor(steps.length / 2)] ?? NaN;
}
