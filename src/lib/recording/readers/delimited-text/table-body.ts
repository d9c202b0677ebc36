import { err, ok, type Result } from '../../../result';
import type { ReadProblem, ReadRemark } from '../../recording';
import { COMMA, DOT, isBlankInBytes, numberInBytes } from '../number-in-bytes';
import { counted, quoted, warning } from '../read-problem';
import { GrowingNumbers } from './growing-numbers';
import { parseStamp, type DateOrder } from './stamp-text';
import type { Separator } from './table-layout';

export type ColumnKind = 'number' | 'stamp' | 'flag' | 'text';

export interface BodyPlan {
	file: string;
	separator: Separator;
	decimal: '.' | ',';
	dateOrder: DateOrder;
	/** [columns] what each column is read as. */
	kinds: ColumnKind[];
	/** First byte and line number of the first row. */
	start: number;
	firstLine: number;
}

export interface TableBody {
	rowCount: number;
	/** [columns] numbers, or seconds of the day for a stamp; flags are 1 and 0; null for text. */
	values: (Float64Array | null)[];
	/** [columns] days since 1970 for stamps with a date; null otherwise. */
	days: (Float64Array | null)[];
	/** Offset from UTC that the first stamp states. */
	utcOffset_min: number | null;
	firstLine: number;
	remarks: ReadRemark[];
}

const QUOTE = 0x22;
const NO_DATA = /^(-+|n\/?a|nan|null|none|invalid|#n\/a|--.*)$/i;

/** Reads every row from the plan's start on. Cells that are no values become NaN, with the first one named. */
export function readBody(bytes: Uint8Array, plan: BodyPlan): Result<TableBody, ReadProblem> {
	return new BodyReader(bytes, plan).read();
}

class BodyReader {
	private readonly columns: { values: GrowingNumbers; days: GrowingNumbers }[];
	private readonly separator: number;
	private readonly decimal: number;
	private row = 0;
	private line: number;
	private utcOffset_min: number | null = null;
	private readonly unread = { count: 0, first: '' };
	private readonly uneven = { count: 0, first: '' };
	private readonly passed = { count: 0, first: '' };

	constructor(
		private readonly bytes: Uint8Array,
		private readonly plan: BodyPlan
	) {
		this.columns = plan.kinds.map(() => ({ values: new GrowingNumbers(), days: new GrowingNumbers() }));
		this.separator = plan.separator.charCodeAt(0);
		this.decimal = plan.decimal === ',' ? COMMA : DOT;
		this.line = plan.firstLine;
	}

	read(): Result<TableBody, ReadProblem> {
		const { bytes, plan } = this;
		let start = plan.start;
		for (let at = plan.start; at <= bytes.length; at++) {
			const byte = at < bytes.length ? (bytes[at] as number) : 0x0a;
			if (byte !== 0x0a && byte !== 0x0d) continue;
			if (at > start && !isBlankInBytes(bytes, start, at)) this.readRow(start, at);
			if (byte === 0x0d && bytes[at + 1] === 0x0a) at++;
			start = at + 1;
			this.line++;
			// A row of k columns has k − 1 separators: rows far shorter than that are another table.
			if ((this.row & 0xffff) === 0xffff && this.row * (plan.kinds.length - 1) > at + 65_536)
				return this.tooShort();
		}
		return ok(this.finish());
	}

	private tooShort(): Result<never, ReadProblem> {
		const { file, kinds } = this.plan;
		return err({
			code: 'table-rows-short',
			file,
			place: `line ${this.line}`,
			sentence: `${file}: most rows up to line ${this.line} have fewer than the ${kinds.length} values that the first rows have; ${this.uneven.first}.`
		});
	}

	private readRow(start: number, end: number): void {
		const { bytes, separator } = this;
		const merges = separator === 0x20;
		let column = 0;
		let from = start;
		let inQuotes = false;
		let readable = 0;
		const unreadBefore = { ...this.unread };
		for (let at = start; at <= end; at++) {
			const byte = at < end ? (bytes[at] as number) : separator;
			if (byte === QUOTE) inQuotes = !inQuotes;
			const isSeparator = byte === separator || (merges && byte === 0x09);
			if (at < end && (!isSeparator || inQuotes)) continue;
			if (!merges || at > from) {
				if (column < this.columns.length && this.readCell(column, from, at)) readable++;
				const isTrailing = at === end && column >= this.columns.length && isBlankInBytes(bytes, from, at);
				if (!isTrailing) column++;
			}
			from = at + 1;
		}
		if (readable === 0) {
			Object.assign(this.unread, unreadBefore);
			this.dropRow(start, end);
			return;
		}
		for (let missing = column; missing < this.columns.length; missing++) this.push(missing, NaN, NaN);
		if (column !== this.columns.length) this.fault(this.uneven, `line ${this.line} has ${column}`);
		this.row++;
	}

	/** A line below the table that holds no value at all ("End of data") is passed over, and counted. */
	private dropRow(start: number, end: number): void {
		for (const { values, days } of this.columns) {
			values.cutTo(this.row);
			days.cutTo(this.row);
		}
		this.fault(this.passed, `line ${this.line}, ${quoted(this.text(start, end))}`);
	}

	/** Whether the cell held a value. */
	private readCell(column: number, from: number, to: number): boolean {
		const kind = this.plan.kinds[column];
		if (kind === 'text') return false;
		if (kind === 'stamp') return this.readStampCell(column, from, to);
		if (kind === 'flag') {
			const text = this.text(from, to).trim().toLowerCase();
			this.push(column, /^(|0|0\.0*|no|n|false|ok|valid|-)$/.test(text) ? 0 : 1, NaN);
			return text !== '';
		}
		const value = numberInBytes(this.bytes, from, to, this.decimal);
		this.push(column, value, NaN);
		if (!Number.isNaN(value)) return true;
		if (!isBlankInBytes(this.bytes, from, to)) this.noteUnread(from, to);
		return false;
	}

	private readStampCell(column: number, from: number, to: number): boolean {
		const stamp = parseStamp(this.text(from, to), this.plan.dateOrder);
		if (stamp === null) {
			this.push(column, NaN, NaN);
			if (!isBlankInBytes(this.bytes, from, to)) this.noteUnread(from, to);
			return false;
		}
		if (this.row === 0) this.utcOffset_min ??= stamp.utcOffset_min;
		this.push(column, stamp.second ?? NaN, stamp.day ?? NaN);
		return true;
	}

	private noteUnread(from: number, to: number): void {
		const text = this.text(from, to).trim();
		if (!NO_DATA.test(text.replace(/^"|"$/g, '')))
			this.fault(this.unread, `${quoted(text)} on line ${this.line}`);
	}

	private fault(kind: { count: number; first: string }, first: string): void {
		if (kind.count === 0) kind.first = first;
		kind.count++;
	}

	private push(column: number, value: number, day: number): void {
		const target = this.columns[column] as { values: GrowingNumbers; days: GrowingNumbers };
		target.values.push(value);
		if (this.plan.kinds[column] === 'stamp') target.days.push(day);
	}

	private text(from: number, to: number): string {
		return String.fromCharCode(...this.bytes.subarray(from, Math.min(to, from + 80)));
	}

	private finish(): TableBody {
		const { plan } = this;
		const remarks: ReadRemark[] = [];
		if (this.unread.count > 0)
			remarks.push(
				warning(
					'cell-not-a-number',
					`${plan.file}: ${counted(this.unread.count, 'cell')} could not be read as a value, first ${this.unread.first}; they count as missing.`
				)
			);
		if (this.uneven.count > 0)
			remarks.push(
				warning(
					'row-length',
					`${plan.file}: ${counted(this.uneven.count, 'row')} without the usual ${plan.kinds.length} values (${this.uneven.first}); what is not there counts as missing.`
				)
			);
		if (this.passed.count > 0)
			remarks.push(
				warning(
					'line-passed-over',
					`${plan.file}: ${counted(this.passed.count, 'line')} without any value inside or below the table, first ${this.passed.first}; left out.`
				)
			);
		return {
			rowCount: this.row,
			values: this.columns.map(({ values }, index) =>
				plan.kinds[index] === 'text' ? null : values.toArray()
			),
			days: this.columns.map(({ days }, index) => (plan.kinds[index] === 'stamp' ? days.toArray() : null)),
			utcOffset_min: this.utcOffset_min,
			firstLine: plan.firstLine,
			remarks
		};
	}
}
