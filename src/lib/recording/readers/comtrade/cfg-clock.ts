import type { ReadRemark } from '../../recording';
import { note, quoted, warning } from '../read-problem';
import { peekRow, type CfgCursor } from './cfg-lines';
import type { ComtradeRevision } from './comtrade-header';

/** "-5h30" → −330, "+10h" → 600, "0" → 0; null for "x", an empty field, and anything else. */
export function parseTimeCode(text: string): number | null {
	const match = /^([+-\u2212]?)(\d{1,2})(?:[h:](\d{1,2})?)?$/i.exec(text.trim());
	if (match === null) return null;
	const minutes = Number(match[2]) * 60 + (match[3] === undefined ? 0 : Number(match[3]));
	if (minutes > 14 * 60 || Number(match[3] ?? '0') > 59) return null;
	return match[1] !== '' && match[1] !== '+' && minutes !== 0 ? -minutes : minutes;
}

/** −330 → "UTC−5:30". */
function zoneText(offset_min: number): string {
	if (offset_min === 0) return 'UTC';
	const size = Math.abs(offset_min);
	const minutes = size % 60 === 0 ? '' : `:${String(size % 60).padStart(2, '0')}`;
	return `UTC${offset_min < 0 ? '−' : '+'}${Math.floor(size / 60)}${minutes}`;
}

/**
 * "time_code,local_code" of the 2013 revision: the offset from UTC in which the times of the file are written, and the one of
 * the place where the recorder stood.
 * returns  minutes that the written times are ahead of UTC; null where the file does not tell
 */
export function parseTimeZoneLine(
	cursor: CfgCursor,
	revision: ComtradeRevision,
	remarks: ReadRemark[]
): number | null {
	const row = peekRow(cursor);
	if (row === null) {
		if (revision === '2013')
			remarks.push(
				note(
					'time-code-missing',
					`${cursor.file} ends without the lines on time zone and clock that the 2013 revision asks for; the site’s time zone is used.`
				)
			);
		return null;
	}
	const [written = '', place = ''] = row.fields;
	const offset_min = parseTimeCode(written);
	// Earlier revisions end here; some recorders add these lines all the same.
	if (revision !== '2013' && offset_min === null) {
		cursor.at = cursor.lines.length;
		return null;
	}
	cursor.at++;
	const local_min = parseTimeCode(place);
	if (offset_min === null && !/^x?$/i.test(written))
		remarks.push(
			note(
				'time-code-unreadable',
				`${cursor.file}, line ${row.line}: an offset from UTC such as -5h30 was expected, but ${quoted(written)} was found; the site’s time zone is used.`
			)
		);
	if (offset_min !== null && local_min !== null && local_min !== offset_min)
		remarks.push(
			note(
				'local-code',
				`${cursor.file}, line ${row.line}: the times are written in ${zoneText(offset_min)}, and the recorder stood in ${zoneText(local_min)}; ${zoneText(offset_min)} was used.`
			)
		);
	return offset_min;
}

/**
 * How far a clock may be off that had lost its source, by its quality code: 1 is 10⁻⁹ s, and each step ten times more.
 * Source: IEEE C37.111-2013, time quality indicator codes (from memory; the codes are those of IEEE C37.118).
 */
const CLOCK_WITHIN = [
	'1 ns',
	'10 ns',
	'100 ns',
	'1 µs',
	'10 µs',
	'100 µs',
	'1 ms',
	'10 ms',
	'100 ms',
	'1 s',
	'10 s'
];

/** Codes from which on the clock is too far off for a time that matters to a tenth of a second. */
const CLOCK_WARNS_FROM = 10;

/** "tmq_code,leapsec" of the 2013 revision; absent in the others. */
export function parseClockLine(cursor: CfgCursor, remarks: ReadRemark[]): void {
	const row = peekRow(cursor);
	if (row === null) return;
	cursor.at++;
	const [quality = '', leap = ''] = row.fields;
	describeQuality(`${cursor.file}, line ${row.line}`, quality, remarks);
	describeLeapSecond(`${cursor.file}, line ${row.line}`, leap, remarks);
}

function describeQuality(place: string, code: string, remarks: ReadRemark[]): void {
	if (/^(0|)$/.test(code)) return;
	const value = /^[0-9a-f]$/i.test(code) ? parseInt(code, 16) : NaN;
	const within = CLOCK_WITHIN[value - 1];
	if (value === 15)
		remarks.push(
			warning(
				'clock-not-reliable',
				`${place} marks the recorder’s clock as failed (quality F); check the start time against another source.`
			)
		);
	else if (within !== undefined)
		remarks.push(
			(value >= CLOCK_WARNS_FROM ? warning : note)(
				'clock-not-locked',
				`${place}: the recorder’s clock had lost its time source and was within ${within} of it (quality ${code.toUpperCase()})${value >= CLOCK_WARNS_FROM ? '; check the start time against another source' : ''}.`
			)
		);
	else
		remarks.push(
			note(
				'clock-quality-unreadable',
				`${place}: a clock quality from 0 to B, or F, was expected, but ${quoted(code)} was found; nothing is known of the clock.`
			)
		);
}

/** Samples are counted from the start at their own rate, so a leap second never makes a gap or an overlap of them. */
function describeLeapSecond(place: string, code: string, remarks: ReadRemark[]): void {
	if (code === '1' || code === '2')
		remarks.push(
			warning(
				'leap-second',
				`${place}: a leap second was ${code === '1' ? 'added' : 'taken out'} during the recording. Times are counted from the start at the sampling rate, so after the leap second they are one second ${code === '1' ? 'ahead of' : 'behind'} the clock; figures do not change.`
			)
		);
	else if (code === '3')
		remarks.push(
			note(
				'leap-second-unknown',
				`${place}: the recorder’s time source cannot tell leap seconds; after one, its clock may be one second off.`
			)
		);
}
