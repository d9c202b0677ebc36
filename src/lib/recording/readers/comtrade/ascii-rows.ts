import { parseUnit } from '../../unit-text';
import { COMMA, DOT, isBlankInBytes, numberInBytes } from '../number-in-bytes';
import { quoted } from '../read-problem';
import type { ScratchFile } from '../../sample-scratch';
import type { ComtradeHeader } from './comtrade-header';
import { StatusWatch } from './status-watch';

/** Marks of the 1999 and the 1991 form for "no value". */
const MARK_1999 = 99_999;
const MARK_1991 = 999_999;

/** Decimal digits that always make an exact integer. */
const EXACT_DIGITS = 15;

/** Values collected before they are handed on. */
const COLLECTED_VALUES = 1 << 14;

const LF = 0x0a;
const CR = 0x0d;
const SUB = 0x1a;
const BLANK = 0x20;
const DASH = 0x2d;
const PLUS = 0x2b;
const ZERO = 0x30;

interface Fault {
	count: number;
	first: string;
}

/** What may be wrong with rows, with the place of the first of each kind. */
export interface RowFaults {
	text: Fault;
	short: Fault;
	long: Fault;
}

function endsLine(byte: number): boolean {
	return byte === LF || byte === CR || byte === SUB;
}

/**
 * Rows "n,stamp,A1…Ak,D1…Dm" of ASCII data, taken in block by block and written out as float64 rows in V, A or the unit as
 * written. What is damaged or missing in a row becomes NaN; the rest of the row is kept.
 */
export class AsciiRows {
	readonly faults: RowFaults = {
		text: { count: 0, first: '' },
		short: { count: 0, first: '' },
		long: { count: 0, first: '' }
	};
	readonly missingCounts: number[];
	readonly status: StatusWatch;
	readonly fieldCount: number;
	/** Rows written. */
	row = 0;
	line: number;
	/** A mark of the end (0x1A, or the next section of a combined file) has come: nothing after it counts. */
	hasEnded = false;
	/** Values of the last row that was taken in. */
	lastRowFields = 0;
	/** Rows are too short to hold the channels that the configuration lists. */
	isTooNarrow = false;
	/** A value lay outside the limits that the configuration states, or it states none. */
	leftLimits: boolean;

	private readonly channelCount: number;
	private readonly values: Float64Array;
	private readonly valueBytes: Uint8Array;
	private collectedRows = 0;
	private readonly rowsAtOnce: number;
	private readonly stampValues: Float64Array;
	private readonly stampBytes: Uint8Array;
	private readonly a: Float64Array;
	private readonly b: Float64Array;
	private readonly times: Float64Array;
	private readonly over: Float64Array;
	private readonly minimum: Float64Array;
	private readonly maximum: Float64Array;
	private afterCr = false;
	private plainValues = 0;
	private taken_bytes = 0;

	/** firstLine  number of the first line inside its file */
	constructor(
		header: ComtradeHeader,
		firstLine: number,
		private readonly rowsInto: ScratchFile,
		private readonly stampsInto: ScratchFile
	) {
		const { analogues, statuses } = header;
		const units = analogues.map(({ unit }) => parseUnit(unit));
		this.line = firstLine;
		this.channelCount = analogues.length;
		this.fieldCount = 2 + analogues.length + statuses.length;
		this.missingCounts = analogues.map(() => 0);
		this.status = new StatusWatch(statuses);
		this.rowsAtOnce = Math.max(1, Math.floor(COLLECTED_VALUES / analogues.length));
		this.values = new Float64Array(this.rowsAtOnce * analogues.length);
		this.valueBytes = new Uint8Array(this.values.buffer);
		this.stampValues = new Float64Array(this.rowsAtOnce);
		this.stampBytes = new Uint8Array(this.stampValues.buffer);
		this.a = Float64Array.from(analogues, ({ a }) => a);
		this.b = Float64Array.from(analogues, ({ b }) => b);
		this.times = Float64Array.from(units, ({ times }) => times);
		this.over = Float64Array.from(units, ({ over }) => over);
		this.minimum = Float64Array.from(analogues, ({ minimum }) => minimum ?? Infinity);
		this.maximum = Float64Array.from(analogues, ({ maximum }) => maximum ?? -Infinity);
		this.leftLimits = analogues.some(({ minimum, maximum }) => minimum === null || maximum === null);
	}

	/**
	 * Takes in whole lines: bytes [from, to), of which the last ends a line.
	 * isCut  the end of the last line is not the file's own: a row that is not full there is left out
	 * returns whether a row was left out
	 */
	take(bytes: Uint8Array, from: number, to: number, isCut = false): boolean {
		let at = from;
		while (at < to && !this.hasEnded) {
			const first = bytes[at] as number;
			if (endsLine(first)) {
				at++;
				if (first === SUB) this.hasEnded = true;
				else if (first === LF && this.afterCr) this.afterCr = false;
				else {
					this.line++;
					this.afterCr = first === CR;
				}
				continue;
			}
			this.afterCr = false;
			if (first === DASH && bytes[at + 1] === DASH) {
				this.hasEnded = true;
				return false;
			}
			at = this.takeRow(bytes, at);
			if (this.lastRowFields === 0) continue;
			if (isCut && at === to - 1 && this.lastRowFields < this.fieldCount) {
				this.leaveOut();
				return true;
			}
			this.keepRow();
			// A row of k channels has k separators at least: lines far shorter would only fill the disk with nothing.
			if (this.row > 16 && this.row * (this.channelCount + 1) > this.taken_bytes + at - from) {
				this.isTooNarrow = true;
				this.hasEnded = true;
			}
		}
		this.taken_bytes += to - from;
		return false;
	}

	/** Forgets the row that was taken in last and not kept. */
	private leaveOut(): void {
		const base = this.collectedRows * this.channelCount;
		for (let channel = 0; channel < Math.min(this.channelCount, this.lastRowFields - 2); channel++)
			if (Number.isNaN(this.values[base + channel])) this.missingCounts[channel]!--;
	}

	/** Hands on what is still collected. */
	finish(): void {
		if (this.collectedRows === 0) return;
		this.rowsInto.append(this.valueBytes.subarray(0, 8 * this.collectedRows * this.channelCount));
		this.stampsInto.append(this.stampBytes.subarray(0, 8 * this.collectedRows));
		this.collectedRows = 0;
	}

	private keepRow(): void {
		const { lastRowFields, fieldCount } = this;
		if (lastRowFields < fieldCount) {
			const base = this.collectedRows * this.channelCount;
			for (let channel = Math.max(0, lastRowFields - 2); channel < this.channelCount; channel++) {
				this.values[base + channel] = NaN;
				this.missingCounts[channel]!++;
			}
			if (lastRowFields < 2) this.stampValues[this.collectedRows] = NaN;
			this.fault('short', () => `line ${this.line} has ${lastRowFields}`);
		} else if (lastRowFields > fieldCount) this.fault('long', () => `line ${this.line} has ${lastRowFields}`);
		this.row++;
		if (++this.collectedRows === this.rowsAtOnce) this.finish();
	}

	/** One line from `start` on; sets `lastRowFields` (0 for a blank line) and returns where its end mark stands. */
	private takeRow(bytes: Uint8Array, start: number): number {
		const { channelCount, fieldCount } = this;
		let field = 0;
		let from = start;
		for (;;) {
			let at = from;
			if (field >= 1 && field < 2 + channelCount) at = this.takeNumber(bytes, from, field);
			else if (field >= 2 + channelCount && field < fieldCount)
				at = this.takeState(bytes, from, field - 2 - channelCount);
			else while (bytes[at] !== COMMA && !endsLine(bytes[at] as number)) at++;
			if (bytes[at] !== COMMA) {
				const isEmpty = isBlankInBytes(bytes, from, at);
				// A separator at the end of the row makes no further value, and a blank line is no row.
				this.lastRowFields = isEmpty && (field === 0 || field >= fieldCount) ? field : field + 1;
				return at;
			}
			field++;
			from = at + 1;
			if (field !== 2) continue;
			from = this.takePlainValues(bytes, from);
			field += this.plainValues;
		}
	}

	/**
	 * Values as nearly all of them are: integers within the limits of their channel, each with a separator behind it. Takes
	 * them up to the first other one, which is left to the general way, and returns where that begins.
	 */
	private takePlainValues(bytes: Uint8Array, start: number): number {
		const { channelCount, values, minimum, maximum, a, b, times, over } = this;
		const base = this.collectedRows * channelCount;
		let from = start;
		let channel = 0;
		for (; channel < channelCount; channel++) {
			let at = from;
			let byte = bytes[at] as number;
			while (byte === BLANK) byte = bytes[++at] as number;
			const isNegative = byte === DASH;
			if (isNegative) byte = bytes[++at] as number;
			const digitsFrom = at;
			let raw = 0;
			while (byte >= ZERO && byte <= ZERO + 9) {
				raw = raw * 10 + (byte - ZERO);
				byte = bytes[++at] as number;
			}
			const digits = at - digitsFrom;
			if (byte !== COMMA || digits === 0 || digits > EXACT_DIGITS) break;
			if (isNegative) raw = -raw;
			if (!(raw >= minimum[channel]! && raw <= maximum[channel]!)) break;
			const scaled = a[channel]! * raw + b[channel]!;
			const divisor = over[channel]!;
			const value = divisor === 1 ? scaled * times[channel]! : scaled / divisor;
			if (!Number.isFinite(value)) break;
			values[base + channel] = value;
			from = at + 1;
		}
		this.plainValues = channel;
		return from;
	}

	private takeNumber(bytes: Uint8Array, from: number, field: number): number {
		let at = from;
		while (bytes[at] === BLANK) at++;
		let byte = bytes[at] as number;
		const isNegative = byte === DASH;
		if (isNegative || byte === PLUS) byte = bytes[++at] as number;
		const digitsFrom = at;
		let value = 0;
		while (byte >= ZERO && byte <= ZERO + 9) {
			value = value * 10 + (byte - ZERO);
			byte = bytes[++at] as number;
		}
		const digits = at - digitsFrom;
		while (byte === BLANK) byte = bytes[++at] as number;
		if (digits > 0 && digits <= EXACT_DIGITS && (byte === COMMA || endsLine(byte))) {
			if (isNegative) value = -value;
		} else {
			while (byte !== COMMA && !endsLine(byte)) byte = bytes[++at] as number;
			value = numberInBytes(bytes, from, at, DOT);
			if (field > 1 && Number.isNaN(value) && !isBlankInBytes(bytes, from, at))
				this.fault('text', () => `${quoted(asciiText(bytes, from, at))} on line ${this.line}`);
		}
		if (field === 1) this.stampValues[this.collectedRows] = value;
		else this.keepValue(field - 2, value);
		return at;
	}

	private keepValue(channel: number, raw: number): void {
		let value = raw;
		if (!(raw >= this.minimum[channel]! && raw <= this.maximum[channel]!)) {
			// A mark is only a mark where the channel could not have measured that value.
			if (raw === MARK_1999 || raw === MARK_1991) value = NaN;
			else if (!Number.isNaN(raw)) this.leftLimits = true;
		}
		// a·x + b in the unit as written, then to V or A: two steps, so that each rounds as the standard's own formula does.
		const scaled = this.a[channel]! * value + this.b[channel]!;
		const over = this.over[channel]!;
		value = over === 1 ? scaled * this.times[channel]! : scaled / over;
		if (!Number.isFinite(value)) {
			value = NaN;
			this.missingCounts[channel]!++;
		}
		this.values[this.collectedRows * this.channelCount + channel] = value;
	}

	private takeState(bytes: Uint8Array, from: number, channel: number): number {
		let at = from;
		while (bytes[at] === BLANK) at++;
		const state = (bytes[at] as number) - ZERO;
		if (state === 0 || state === 1) {
			this.status.see(channel, state, this.row);
			at++;
		}
		while (bytes[at] !== COMMA && !endsLine(bytes[at] as number)) at++;
		return at;
	}

	private fault(kind: keyof RowFaults, place: () => string): void {
		const fault = this.faults[kind];
		if (fault.count++ === 0) fault.first = place();
	}
}

function asciiText(bytes: Uint8Array, from: number, to: number): string {
	return String.fromCharCode(...bytes.subarray(from, Math.min(to, from + 60)));
}
