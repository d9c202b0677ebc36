export const COMMA = 0x2c;
export const DOT = 0x2e;
const QUOTE = 0x22;

/** 10^0 … 10^22: the powers of ten that a double holds exactly. */
const EXACT_POWERS = Array.from({ length: 23 }, (_, exponent) => Number(`1e${exponent}`));

/** A sum of digits below this stays an exact integer after one more digit. */
const MANTISSA_LIMIT = 900_719_925_474_098;

function isPadding(byte: number): boolean {
	return byte === 0x20 || byte === 0x09 || byte === QUOTE;
}

/** Whether [start, end) holds nothing but blanks, tabs and quotation marks. */
export function isBlankInBytes(bytes: Uint8Array, start: number, end: number): boolean {
	for (let at = start; at < end; at++) if (!isPadding(bytes[at] as number)) return false;
	return true;
}

function textOf(bytes: Uint8Array, start: number, end: number, decimalByte: number): string {
	let text = '';
	for (let at = start; at < end; at++) {
		const byte = bytes[at] as number;
		text += byte === decimalByte ? '.' : String.fromCharCode(byte);
	}
	return text;
}

/**
 * Decimal number written in ASCII at [start, end), surrounding blanks and quotation marks allowed.
 * decimalByte  DOT or COMMA
 * returns      the double nearest to the text, as Number() gives it; NaN for anything that is not a number
 *              (an empty field, the words "nan" and "inf", and what no double holds, such as 1e400, included)
 * method       up to 15 digits and |exponent| ≤ 22 need one exact product or quotient (both operands exact,
 *              so the one rounding is the right one); longer texts go through Number()
 */
export function numberInBytes(bytes: Uint8Array, start: number, end: number, decimalByte: number): number {
	while (start < end && isPadding(bytes[start] as number)) start++;
	while (end > start && isPadding(bytes[end - 1] as number)) end--;
	if (start >= end) return NaN;
	let at = start;
	let negative = false;
	const sign = bytes[at] as number;
	if (sign === 0x2d || sign === 0x2b) {
		negative = sign === 0x2d;
		at++;
	}
	let mantissa = 0;
	let fractionDigits = 0;
	let digits = 0;
	let inFraction = false;
	let exact = true;
	for (; at < end; at++) {
		const byte = bytes[at] as number;
		if (byte >= 0x30 && byte <= 0x39) {
			if (mantissa > MANTISSA_LIMIT) exact = false;
			else {
				mantissa = mantissa * 10 + (byte - 0x30);
				if (inFraction) fractionDigits++;
			}
			digits++;
		} else if (byte === decimalByte && !inFraction) inFraction = true;
		else break;
	}
	if (digits === 0) return NaN;
	let exponent = 0;
	if (at < end) {
		const letter = bytes[at] as number;
		if (letter !== 0x65 && letter !== 0x45) return NaN;
		at++;
		let negativeExponent = false;
		const exponentSign = bytes[at];
		if (at < end && (exponentSign === 0x2d || exponentSign === 0x2b)) {
			negativeExponent = exponentSign === 0x2d;
			at++;
		}
		if (at >= end) return NaN;
		for (; at < end; at++) {
			const byte = bytes[at] as number;
			if (byte < 0x30 || byte > 0x39) return NaN;
			if (exponent < 10_000) exponent = exponent * 10 + (byte - 0x30);
		}
		if (negativeExponent) exponent = -exponent;
	}
	const power = exponent - fractionDigits;
	if (!exact || power > 22 || power < -22) return finiteOrNaN(Number(textOf(bytes, start, end, decimalByte)));
	const magnitude =
		power >= 0 ? mantissa * (EXACT_POWERS[power] as number) : mantissa / (EXACT_POWERS[-power] as number);
	return negative ? -magnitude : magnitude;
}

/** No two runs of digits side by side: where a long text is no number, they would be tried in every division. */
const NUMBER_TEXT = /^[+-]?(\d+(\.\d*)?|\.\d+)([eE][+-]?\d+)?$/;

/** The same for a short text field with a decimal point; NaN when it is not a number. */
export function numberInText(text: string): number {
	const trimmed = text.trim();
	return NUMBER_TEXT.test(trimmed) ? finiteOrNaN(Number(trimmed)) : NaN;
}

/** Nothing that was measured is infinite: what a double cannot hold is damage. */
function finiteOrNaN(value: number): number {
	return Number.isFinite(value) ? value : NaN;
}
