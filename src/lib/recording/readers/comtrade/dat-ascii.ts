import { ok, type Result } from '../../../result';
import type { ReadProblem, ReadRemark } from '../../recording';
import { COMMA, DOT, isBlankInBytes, numberInBytes } from '../number-in-bytes';
import { counted, quoted, refuse, warning } from '../read-problem';
import type { ComtradeData, ComtradeHeader } from './comtrade-header';

/** Marks of the 1999 and the 1991 form for "no value". */
const MISSING_MARKS = [99_999, 999_999];

interface RowFaults {
	text: { count: number; first: string };
	short: { count: number; first: string };
	long: { count: number; first: string };
}

/**
 * ASCII data: "n,stamp,A1…Ak,D1…Dm" per line. Rows that are damaged in one place keep their other values;
 * what is damaged or missing becomes NaN and is remarked on with its line.
 * `firstLine` is the number of the data's first line inside `file`.
 */
export function readAsciiData(
	file: string,
	bytes: Uint8Array,
	firstLine: number,
	header: ComtradeHeader
): Result<ComtradeData, ReadProblem> {
	const rows = countRows(bytes);
	if (rows === 0)
		return refuse(
			'dat-empty',
			file,
			`line ${firstLine}`,
			`${file} holds no data: a row with ${2 + header.analogues.length + header.statusNames.length} values was expected on line ${firstLine}.`
		);
	const channelCount = header.analogues.length;
	// A row of k channels has k separators at least: a file with far fewer belongs to another configuration.
	if (rows > 16 && rows * (channelCount + 1) > bytes.length)
		return refuse(
			'dat-columns',
			file,
			`line ${firstLine}`,
			`${file} has rows too short for the ${channelCount} analogue channels that ${header.file} lists; check that the two files belong together.`
		);
	const table = new AsciiTable(file, firstLine, header, rows);
	table.parse(bytes);
	return table.finish(bytes);
}

function countRows(bytes: Uint8Array): number {
	let rows = 0;
	let hasContent = false;
	for (let at = 0; at < bytes.length; at++) {
		const byte = bytes[at] as number;
		if (byte === 0x0a || byte === 0x0d) {
			if (hasContent) rows++;
			hasContent = false;
		} else if (byte > 0x20) hasContent = true;
	}
	return hasContent ? rows + 1 : rows;
}

/** Rows as they are read; `finish` drops a last row that was cut and turns the faults into remarks. */
class AsciiTable {
	private readonly raw: Float64Array[];
	private readonly stamps: Float64Array;
	private readonly fieldCount: number;
	private readonly channelCount: number;
	private readonly faults: RowFaults = {
		text: { count: 0, first: '' },
		short: { count: 0, first: '' },
		long: { count: 0, first: '' }
	};
	private row = 0;
	private line: number;
	private lastRowFields = 0;
	private readonly remarks: ReadRemark[] = [];

	constructor(
		private readonly file: string,
		firstLine: number,
		private readonly header: ComtradeHeader,
		rows: number
	) {
		this.channelCount = header.analogues.length;
		this.fieldCount = 2 + this.channelCount + header.statusNames.length;
		this.raw = header.analogues.map(() => new Float64Array(rows).fill(NaN));
		this.stamps = new Float64Array(rows).fill(NaN);
		this.line = firstLine;
	}

	parse(bytes: Uint8Array): void {
		let start = 0;
		for (let at = 0; at <= bytes.length; at++) {
			const byte = at < bytes.length ? (bytes[at] as number) : 0x0a;
			if (byte === 0x1a) break;
			if (byte !== 0x0a && byte !== 0x0d) continue;
			if (at > start && !isBlankInBytes(bytes, start, at)) this.parseRow(bytes, start, at);
			if (byte === 0x0d && bytes[at + 1] === 0x0a) at++;
			start = at + 1;
			this.line++;
		}
	}

	private parseRow(bytes: Uint8Array, start: number, end: number): void {
		let field = 0;
		let from = start;
		for (let at = start; at <= end; at++) {
			if (at < end && bytes[at] !== COMMA) continue;
			if (field >= 1 && field < 2 + this.channelCount) this.keep(bytes, field, from, at);
			// A separator at the end of the row makes no further value.
			const isTrailing = at === end && field >= this.fieldCount && isBlankInBytes(bytes, from, at);
			if (!isTrailing) field++;
			from = at + 1;
		}
		this.lastRowFields = field;
		if (field < this.fieldCount) this.fault('short', `line ${this.line} has ${field}`);
		else if (field > this.fieldCount) this.fault('long', `line ${this.line} has ${field}`);
		this.row++;
	}

	private keep(bytes: Uint8Array, field: number, from: number, to: number): void {
		const value = numberInBytes(bytes, from, to, DOT);
		if (field === 1) {
			this.stamps[this.row] = value;
			return;
		}
		const channel = field - 2;
		if (Number.isNaN(value) && !isBlankInBytes(bytes, from, to))
			this.fault('text', `${quoted(asciiText(bytes, from, to))} on line ${this.line}`);
		(this.raw[channel] as Float64Array)[this.row] = this.isMissingMark(channel, value) ? NaN : value;
	}

	/** A mark is only a mark where the channel could not have measured that value. */
	private isMissingMark(channel: number, value: number): boolean {
		if (!MISSING_MARKS.includes(value)) return false;
		const { minimum, maximum } = this.header.analogues[channel] as {
			minimum: number | null;
			maximum: number | null;
		};
		return minimum === null || maximum === null || value < minimum || value > maximum;
	}

	private fault(kind: keyof RowFaults, first: string): void {
		const fault = this.faults[kind];
		if (fault.count === 0) fault.first = first;
		fault.count++;
	}

	finish(bytes: Uint8Array): Result<ComtradeData, ReadProblem> {
		const lastByte = bytes[bytes.length - 1];
		const isCut = lastByte !== 0x0a && lastByte !== 0x0d && this.lastRowFields < this.fieldCount;
		let sampleCount = this.row;
		if (isCut) {
			sampleCount--;
			this.faults.short.count--;
			this.remarks.push(
				warning(
					'dat-truncated',
					`${this.file} ends in the middle of line ${this.line - 1} (${this.lastRowFields} of ${this.fieldCount} values); that row was left out.`
				)
			);
		}
		if (this.faults.short.count === sampleCount || this.faults.text.count >= sampleCount * this.channelCount)
			return refuse(
				'dat-columns',
				this.file,
				this.faults.short.first.split(' has')[0] ?? null,
				`${this.file} does not fit ${this.header.file}: ${this.fieldCount} numbers per row were expected (number, time stamp, ${this.channelCount} analogue, ${this.header.statusNames.length} status), but ${this.faults.short.first || this.faults.text.first}.`
			);
		this.describeFaults();
		return ok({
			sampleCount,
			raw: this.raw.map((values) => values.subarray(0, sampleCount)),
			stamps: this.stamps.subarray(0, sampleCount),
			remarks: this.remarks
		});
	}

	private describeFaults(): void {
		const { text, short, long } = this.faults;
		if (text.count > 0)
			this.remarks.push(
				warning(
					'dat-not-a-number',
					`${this.file}: ${counted(text.count, 'value')} could not be read as a number, first ${text.first}; they count as missing.`
				)
			);
		if (short.count > 0)
			this.remarks.push(
				warning(
					'dat-row-short',
					`${this.file}: ${counted(short.count, 'row')} with too few values (${this.fieldCount} were expected, ${short.first}); what is not there counts as missing.`
				)
			);
		if (long.count > 0)
			this.remarks.push(
				warning(
					'dat-row-long',
					`${this.file}: ${counted(long.count, 'row')} with too many values (${this.fieldCount} were expected, ${long.first}); the surplus was ignored.`
				)
			);
	}
}

function asciiText(bytes: Uint8Array, from: number, to: number): string {
	return String.fromCharCode(...bytes.subarray(from, Math.min(to, from + 60)));
}
