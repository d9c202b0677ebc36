import { isRealDate, isRealTime, type WallClock } from '../../calendar';
import type { ReadRemark } from '../../recording';
import { note, quoted, warning } from '../read-problem';
import type { CfgRow } from './cfg-lines';
import type { ComtradeRevision } from './comtrade-header';

const DATE = /^(\d{1,2})\/(\d{1,2})\/(\d{2}|\d{4})$/;
const TIME = /^(\d{1,2}):(\d{1,2}):(\d{1,2})(?:\.(\d{1,9}))?$/;

/** Two-digit years of the 1991 form: the format is no older than 1980. */
function fullYear(text: string): number {
	const year = Number(text);
	if (text.length === 4) return year;
	return year >= 80 ? 1900 + year : 2000 + year;
}

export interface ParsedTimeLine {
	/** Null when the line gives no moment that exists. */
	clock: WallClock | null;
	/** Decimals of the seconds: more than six mean that the data's time stamps count nanoseconds. */
	decimals: number;
}

/**
 * "25/06/2007,19:13:57.789757". Day first from the 1999 revision on, month first in the 1991 form; where only
 * the other order makes a date, that one is taken with a remark. An impossible date costs the clock, not the capture.
 */
export function parseTimeLine(
	file: string,
	row: CfgRow,
	what: string,
	revision: ComtradeRevision,
	remarks: ReadRemark[]
): ParsedTimeLine {
	const date = DATE.exec(row.fields[0] ?? '');
	const time = TIME.exec(row.fields[1] ?? '');
	const decimals = time?.[4]?.length ?? 0;
	const unreadable = (): ParsedTimeLine => {
		remarks.push(
			warning(
				'date-unreadable',
				`${file}, line ${row.line}: ${quoted(row.text)} is no date and time that exists (dd/mm/yyyy,hh:mm:ss.ssssss was expected), so the ${what} is not known.`
			)
		);
		return { clock: null, decimals };
	};
	if (date === null || time === null) return unreadable();
	const first = Number(date[1]);
	const second = Number(date[2]);
	const year = fullYear(date[3] ?? '');
	const [hour, minute, wholeSecond] = [Number(time[1]), Number(time[2]), Number(time[3])];
	if (!isRealTime(hour, minute, wholeSecond)) return unreadable();
	const usual = revision === '1991' ? { month: first, day: second } : { month: second, day: first };
	const swapped = { month: usual.day, day: usual.month };
	const usualIsReal = isRealDate(year, usual.month, usual.day);
	if (!usualIsReal && !isRealDate(year, swapped.month, swapped.day)) return unreadable();
	if (!usualIsReal)
		remarks.push(
			note(
				'date-order',
				`${file}, line ${row.line}: the date ${date[0]} is only possible with the ${revision === '1991' ? 'day' : 'month'} first, although the ${revision} revision writes it the other way round; it was read so.`
			)
		);
	const { month, day } = usualIsReal ? usual : swapped;
	return {
		clock: { year, month, day, hour, minute, second: wholeSecond, fraction: time[4] ?? '' },
		decimals
	};
}
