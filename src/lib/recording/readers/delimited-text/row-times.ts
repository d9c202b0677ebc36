import { err, type Result } from '../../../result';
import { numberInBytes, COMMA, DOT } from '../number-in-bytes';
import { quoted } from '../read-problem';
import type { ReadProblem } from '../../recording';
import { stampInBytes } from './stamp-in-bytes';
import { parseStamp, type DateOrder, type Stamp } from './stamp-text';
import { numberOfField } from './table-layout';
import { numericTimeUnit_s, type TimeFormat, type ToldLayout } from './table-layout-told';

/** Times as text that show how finely they are written. */
const WRITTEN_SAMPLE = 200;
const DAY_S = 86_400;
/** The day zero of spreadsheets that count days, 1899-12-30, in days since 1970. */
const SERIAL_DAY_ZERO = -25_569;

const EXPECTED: Record<TimeFormat, string> = {
	none: 'no time',
	'year-first': 'a date such as 2024-03-05 10:20:30',
	'day-first': 'a date such as 05.03.2024 10:20:30',
	'month-first': 'a date such as 03/05/2024 10:20:30',
	clock: 'a time of day such as 10:20:30',
	'epoch-s': 'seconds since 1970',
	'epoch-ms': 'milliseconds since 1970',
	'serial-days': 'days since 1899-12-30, as spreadsheets count',
	'elapsed-ns': 'nanoseconds',
	'elapsed-us': 'microseconds',
	'elapsed-ms': 'milliseconds',
	'elapsed-s': 'seconds',
	'elapsed-min': 'minutes',
	'elapsed-h': 'hours'
};

/** Seconds from the first row, row by row, and what the first row said. */
export class RowTimes {
	/** Day since 1970 and second of that day of the first row, where the rows tell it. */
	firstDay = NaN;
	firstSecond = NaN;
	/** Time of the first row as a number, s, for times that are counted. */
	first_s = 0;
	utcOffset_min: number | null = null;
	/** The first times as written, for their resolution. */
	readonly written: string[] = [];
	private first = NaN;
	private secondBefore = NaN;
	private midnights = 0;
	private readonly unit_s: number | null;
	private readonly order: DateOrder;
	private readonly dateColumn: number;
	private readonly clockColumn: number;
	private readonly decimalByte: number;
	private lastDateText = '';
	private lastDay = NaN;

	constructor(private readonly layout: ToldLayout) {
		const { format } = layout.time;
		const place = (role: 'time' | 'date' | 'clock') =>
			layout.columns.findIndex((column) => column.role === role);
		this.unit_s = numericTimeUnit_s(format);
		this.order = format === 'day-first' || format === 'month-first' ? format : 'year-first';
		this.dateColumn = Math.max(place('time'), place('date'));
		this.clockColumn = place('clock');
		this.decimalByte = layout.decimal === ',' ? COMMA : DOT;
	}

	get tellsTime(): boolean {
		return this.layout.time.format !== 'none' && Math.max(this.dateColumn, this.clockColumn) >= 0;
	}

	isTimeColumn(column: number): boolean {
		return this.tellsTime && (column === this.dateColumn || column === this.clockColumn);
	}

	/**
	 * Seconds of a row from the first row.
	 * starts, ends  [columns] places of the cells in `bytes`
	 */
	of(bytes: Uint8Array, starts: Int32Array, ends: Int32Array): number {
		if (this.unit_s !== null) return this.counted(bytes, starts, ends, this.unit_s);
		const stamp = this.stampOf(bytes, starts, ends);
		if (stamp === null || (stamp.day === null && stamp.second === null)) return NaN;
		const day = stamp.day ?? NaN;
		// A row with only a date stands for its midnight.
		const second = stamp.second ?? 0;
		if (Number.isNaN(this.firstSecond)) {
			this.firstDay = day;
			this.firstSecond = second;
			this.utcOffset_min = stamp.utcOffset_min;
		}
		const hasDate = !Number.isNaN(this.firstDay);
		if (!hasDate && second < this.secondBefore - DAY_S / 2) this.midnights++;
		this.secondBefore = second;
		// Whole days and seconds of the day are subtracted apart: nanoseconds survive.
		return (hasDate ? day - this.firstDay : this.midnights) * DAY_S + (second - this.firstSecond);
	}

	private counted(bytes: Uint8Array, starts: Int32Array, ends: Int32Array, unit_s: number): number {
		const from = starts[this.dateColumn] as number;
		const to = ends[this.dateColumn] as number;
		const value =
			this.layout.grouping === 'none'
				? numberInBytes(bytes, from, to, this.decimalByte)
				: numberOfField(textOf(bytes, from, to), this.layout.decimal, this.layout.grouping);
		this.note(bytes, from, to);
		if (Number.isNaN(this.first)) {
			this.first = value;
			this.first_s = value * unit_s;
			this.startOfCount(value, unit_s);
		}
		return (value - this.first) * unit_s;
	}

	private startOfCount(value: number, unit_s: number): void {
		const { format } = this.layout.time;
		if (format.startsWith('elapsed')) return;
		// Milliseconds are whole numbers: divided, they round once.
		const seconds = format === 'epoch-ms' ? value / 1000 : value * unit_s;
		this.firstDay = Math.floor(seconds / DAY_S) + (format === 'serial-days' ? SERIAL_DAY_ZERO : 0);
		this.firstSecond = seconds - Math.floor(seconds / DAY_S) * DAY_S;
		// A day's fraction cannot show less than about a microsecond.
		if (format === 'serial-days') this.firstSecond = Math.round(this.firstSecond * 1000) / 1000;
		else this.utcOffset_min = 0;
	}

	private stampOf(bytes: Uint8Array, starts: Int32Array, ends: Int32Array): Stamp | null {
		if (this.clockColumn < 0) {
			const from = starts[this.dateColumn] as number;
			const to = ends[this.dateColumn] as number;
			this.note(bytes, from, to);
			return this.read(bytes, from, to);
		}
		const from = starts[this.clockColumn] as number;
		const to = ends[this.clockColumn] as number;
		this.note(bytes, from, to);
		const clock = this.read(bytes, from, to);
		if (clock === null || this.dateColumn < 0) return clock;
		const dateText = textOf(bytes, starts[this.dateColumn] as number, ends[this.dateColumn] as number);
		if (dateText !== this.lastDateText) {
			this.lastDateText = dateText;
			this.lastDay = parseStamp(dateText, this.order)?.day ?? NaN;
		}
		return Number.isNaN(this.lastDay) ? null : { ...clock, day: this.lastDay };
	}

	private read(bytes: Uint8Array, from: number, to: number): Stamp | null {
		return stampInBytes(bytes, from, to, this.order) ?? parseStamp(textOf(bytes, from, to), this.order);
	}

	private note(bytes: Uint8Array, from: number, to: number): void {
		if (this.written.length < WRITTEN_SAMPLE) this.written.push(textOf(bytes, from, to));
	}
}

/** Refusal of a row whose time cannot be read as told. */
export function timeUnreadable(
	file: string,
	line: number,
	layout: ToldLayout,
	headings: readonly string[],
	written: string
): Result<never, ReadProblem> {
	const index = layout.columns.findIndex(
		({ role }) => role === 'time' || role === 'clock' || role === 'date'
	);
	return err({
		code: 'time-unreadable',
		file,
		place: `line ${line}`,
		sentence: `${file}, about line ${line}: a time was expected in column ${index + 1} (“${headings[index] ?? ''}”), written as ${EXPECTED[layout.time.format]}, but ${quoted(written)} was found there.`
	});
}

export function textOf(bytes: Uint8Array, from: number, to: number): string {
	let text = '';
	for (let at = from; at < Math.min(to, from + 80); at++) text += String.fromCharCode(bytes[at] as number);
	return text;
}
