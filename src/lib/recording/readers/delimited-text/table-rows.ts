import { err, ok, type Result } from '../../../result';
import type { ReadProblem, ReadRemark } from '../../recording';
import { COMMA, DOT, isBlankInBytes, numberInBytes } from '../number-in-bytes';
import { counted, quoted, warning } from '../read-problem';
import type { TextBlocks } from '../text-blocks';
import { RowTimes, textOf, timeUnreadable } from './row-times';
import { numberOfField } from './table-layout';
import type { ToldLayout } from './table-layout-told';

/** Where rows go: [used columns] values, NaN for none, and seconds from the first row (NaN without times). */
export type OnRow = (values: Float64Array, time_s: number) => void;

/** What became of the rows of one table. */
export interface ReadRows {
	rowCount: number;
	/** [used columns] cells without a value. */
	missing: Int32Array;
	times: RowTimes;
	remarks: ReadRemark[];
}

const QUOTE = 0x22;
const NO_DATA = /^(-+|n\/?a|nan|null|none|invalid|#n\/a|--.*)$/i;
const FLAG_CLEAR = /^(|0|0\.0*|no|n|false|ok|valid|-)$/;

type CellKind = 'number' | 'flag' | 'passed';

/**
 * Reads every row of a table as its layout tells, without keeping any.
 * used      indexes of the columns whose values are wanted, flags among them
 * headings  [columns] for sentences
 */
export function readRows(
	text: TextBlocks,
	layout: ToldLayout,
	used: readonly number[],
	headings: readonly string[],
	onRow: OnRow
): Result<ReadRows, ReadProblem> {
	return new RowReader(text, layout, used, headings, onRow).read();
}

class RowReader {
	private readonly kinds: CellKind[];
	/** [columns] place among the used columns, −1 for the others. */
	private readonly place: Int32Array;
	private readonly starts: Int32Array;
	private readonly ends: Int32Array;
	private readonly values: Float64Array;
	private readonly missing: Int32Array;
	private readonly readable: Int32Array;
	private readonly times: RowTimes;
	private readonly separator: number;
	private readonly decimal: number;
	private readonly isGrouped: boolean;
	private row = 0;
	private line = 0;
	private bytesSeen = 0;
	private problem: Result<never, ReadProblem> | null = null;
	private readonly unread = { count: 0, first: '' };
	private readonly firstUnread: (string | undefined)[] = [];
	private readonly uneven = { count: 0, first: '' };
	private readonly passed = { count: 0, first: '' };

	constructor(
		private readonly text: TextBlocks,
		private readonly layout: ToldLayout,
		private readonly used: readonly number[],
		private readonly headings: readonly string[],
		private readonly onRow: OnRow
	) {
		const count = layout.columns.length;
		this.times = new RowTimes(layout);
		this.kinds = layout.columns.map(({ role }) =>
			role === 'flag' ? 'flag' : role === 'sample' || role === 'value' ? 'number' : 'passed'
		);
		this.place = new Int32Array(count).fill(-1);
		used.forEach((column, at) => (this.place[column] = at));
		this.starts = new Int32Array(count);
		this.ends = new Int32Array(count);
		this.values = new Float64Array(used.length);
		this.missing = new Int32Array(used.length);
		this.readable = new Int32Array(used.length);
		this.separator = layout.separator.charCodeAt(0);
		this.decimal = layout.decimal === ',' ? COMMA : DOT;
		this.isGrouped = layout.grouping !== 'none';
	}

	read(): Result<ReadRows, ReadProblem> {
		const { text, layout } = this;
		const isWhole = text.eachLine((bytes, start, end, line) => {
			this.bytesSeen += end - start + 1;
			if (line < layout.firstDataLine) return true;
			this.line = line;
			if (end > start && !isBlankInBytes(bytes, start, end)) this.readRow(bytes, start, end);
			// A row of k columns has k − 1 separators: rows far shorter than that are another table.
			if ((this.row & 0xffff) === 0xffff && this.row * (this.kinds.length - 1) > this.bytesSeen + 65_536)
				this.problem = this.tooShort();
			return this.problem === null;
		});
		if (this.problem !== null) return this.problem;
		if (!isWhole) return this.tooLong();
		return this.unreadableColumn() ?? ok(this.finish());
	}

	private tooShort(): Result<never, ReadProblem> {
		return err({
			code: 'table-rows-short',
			file: this.text.name,
			place: `line ${this.line}`,
			sentence: `${this.text.name}: most rows up to line ${this.line} have fewer than the ${this.kinds.length} values that the first rows have; ${this.uneven.first}.`
		});
	}

	private tooLong(): Result<never, ReadProblem> {
		return err({
			code: 'line-too-long',
			file: this.text.name,
			place: `line ${this.line + 1}`,
			sentence: `${this.text.name}, line ${this.line + 1}: a row of a table was expected, but the line goes on for more than eight million characters.`
		});
	}

	/** A column in which not a single cell reads as told is told wrongly: no verdict may rest on its silence. */
	private unreadableColumn(): Result<never, ReadProblem> | null {
		for (const [at, column] of this.used.entries()) {
			const first = this.firstUnread[at];
			if (first === undefined || (this.readable[at] as number) > 0) continue;
			const { name } = this.text;
			const sign = this.layout.decimal === ',' ? 'comma' : 'point';
			return err({
				code: 'column-unreadable',
				file: name,
				place: first.slice(first.lastIndexOf('line ')),
				sentence: `${name}: no cell of column ${column + 1} (“${this.headings[column] ?? ''}”) reads as a number with a decimal ${sign}; first ${first}.`
			});
		}
		return null;
	}

	private readRow(bytes: Uint8Array, start: number, end: number): void {
		const columnCount = this.kinds.length;
		const column = this.split(bytes, start, end);
		for (let at = column; at < columnCount; at++) this.starts[at] = this.ends[at] = end;
		const unreadBefore = this.unread.count;
		let readable = 0;
		for (let at = 0; at < this.used.length; at++)
			if (this.readCell(bytes, this.used[at] as number, at)) readable++;
		let time_s = NaN;
		if (this.times.tellsTime) {
			time_s = this.times.of(bytes, this.starts, this.ends);
			if (Number.isNaN(time_s) && readable > 0) {
				this.problem ??= timeUnreadable(
					this.text.name,
					this.line,
					this.layout,
					this.headings,
					this.timeText(bytes)
				);
				return;
			}
		}
		if (readable === 0 && Number.isNaN(time_s)) {
			this.unread.count = unreadBefore;
			this.fault(this.passed, `line ${this.line}, ${quoted(textOf(bytes, start, end))}`);
			return;
		}
		for (let at = 0; at < this.values.length; at++) {
			if (Number.isNaN(this.values[at] as number)) this.missing[at]!++;
			else this.readable[at]!++;
		}
		if (column !== columnCount) this.fault(this.uneven, `line ${this.line} has ${column}`);
		this.row++;
		this.onRow(this.values, time_s);
	}

	private timeText(bytes: Uint8Array): string {
		for (let column = 0; column < this.kinds.length; column++)
			if (this.times.isTimeColumn(column))
				return textOf(bytes, this.starts[column] as number, this.ends[column] as number);
		return '';
	}

	/** Places of the cells of a row; returns how many cells it has. */
	private split(bytes: Uint8Array, start: number, end: number): number {
		const { separator, starts, ends } = this;
		const columnCount = this.kinds.length;
		const merges = separator === 0x20;
		let column = 0;
		let from = start;
		let inQuotes = false;
		for (let at = start; at <= end; at++) {
			if (at < end) {
				const byte = bytes[at] as number;
				if (byte === QUOTE) inQuotes = !inQuotes;
				if (inQuotes || (byte !== separator && !(merges && byte === 0x09))) continue;
			}
			if (!merges || at > from) {
				if (column < columnCount) {
					starts[column] = from;
					ends[column] = at;
					column++;
				} else if (at < end || !isBlankInBytes(bytes, from, at)) column++;
			}
			from = at + 1;
		}
		return column;
	}

	/** Whether the cell held a value. */
	private readCell(bytes: Uint8Array, column: number, at: number): boolean {
		const from = this.starts[column] as number;
		const to = this.ends[column] as number;
		if (this.kinds[column] === 'flag') {
			const text = textOf(bytes, from, to).trim().toLowerCase();
			this.values[at] = FLAG_CLEAR.test(text) ? 0 : 1;
			return text !== '';
		}
		const value = this.isGrouped
			? numberOfField(
					textOf(bytes, from, to)
						.replace(/^\s*"|"\s*$/g, '')
						.replace(/\u00c2\u00a0/g, ' '),
					this.layout.decimal,
					this.layout.grouping
				)
			: numberInBytes(bytes, from, to, this.decimal);
		this.values[at] = value;
		if (!Number.isNaN(value)) return true;
		if (!isBlankInBytes(bytes, from, to)) this.noteUnread(textOf(bytes, from, to).trim(), at);
		return false;
	}

	private noteUnread(text: string, at: number): void {
		if (NO_DATA.test(text.replace(/^"|"$/g, ''))) return;
		const first = `${quoted(text)} on line ${this.line}`;
		this.firstUnread[at] ??= first;
		this.fault(this.unread, first);
	}

	private fault(kind: { count: number; first: string }, first: string): void {
		if (kind.count === 0) kind.first = first;
		kind.count++;
	}

	private finish(): ReadRows {
		const { text } = this;
		const remarks: ReadRemark[] = [];
		if (this.unread.count > 0)
			remarks.push(
				warning(
					'cell-not-a-number',
					`${text.name}: ${counted(this.unread.count, 'cell')} could not be read as a value, first ${this.unread.first}; they count as missing.`
				)
			);
		if (this.uneven.count > 0)
			remarks.push(
				warning(
					'row-length',
					`${text.name}: ${counted(this.uneven.count, 'row')} without the usual ${this.kinds.length} values (${this.uneven.first}); what is not there counts as missing.`
				)
			);
		if (this.passed.count > 0)
			remarks.push(
				warning(
					'line-passed-over',
					`${text.name}: ${counted(this.passed.count, 'line')} without any value inside or below the table, first ${this.passed.first}; left out.`
				)
			);
		return { rowCount: this.row, missing: this.missing, times: this.times, remarks };
	}
}
