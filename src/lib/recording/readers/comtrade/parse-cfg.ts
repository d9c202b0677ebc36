import { ok, type Result } from '../../../result';
import { isoLocal } from '../../calendar';
import type { ReadProblem, ReadRemark } from '../../recording';
import { note, quoted, refuse, warning } from '../read-problem';
import { parseAnalogueLine, parseChannelCounts, parseStatusLine } from './cfg-channels';
import {
	finiteNumber,
	nextRow,
	openCfg,
	peekRow,
	unexpected,
	wholeNumber,
	type CfgCursor,
	type CfgRow
} from './cfg-lines';
import { parseTimeLine } from './cfg-times';
import { parseClockLine, parseTimeZoneLine } from './cfg-clock';
import type {
	AnalogueLine,
	ComtradeDataFormat,
	ComtradeHeader,
	ComtradeRevision,
	RateLine,
	StatusLine
} from './comtrade-header';

const DATA_FORMATS: readonly ComtradeDataFormat[] = ['ASCII', 'BINARY', 'BINARY32', 'FLOAT32'];

/**
 * Configuration text of IEEE C37.111 in its 1991, 1999 and 2013 revisions.
 * `firstLine` is the number of the text's first line inside `file` (more than 1 in a combined file).
 */
export function parseCfg(file: string, text: string, firstLine: number): Result<ComtradeHeader, ReadProblem> {
	const cursor = openCfg(file, text, firstLine);
	const remarks: ReadRemark[] = [];
	if (cursor.lines.length === 0)
		return refuse(
			'cfg-empty',
			file,
			`line ${firstLine}`,
			`${file} is empty; a configuration was expected that begins with the station’s name on line ${firstLine}.`
		);
	const station = nextRow(cursor, 'the station name, the recorder and the revision year');
	if (!station.ok) return station;
	const revision = revisionOf(file, station.value, remarks);
	const channels = parseChannels(cursor, remarks);
	if (!channels.ok) return channels;
	const frequency = parseFrequency(cursor, remarks);
	if (!frequency.ok) return frequency;
	const rates = parseRates(cursor);
	if (!rates.ok) return rates;
	const tail = parseTail(cursor, revision, remarks);
	if (!tail.ok) return tail;
	return ok({
		file,
		stationName: station.value.fields[0] ?? '',
		recorderName: station.value.fields[1] ?? '',
		revision,
		...channels.value,
		nominalFrequency_Hz: frequency.value,
		...rates.value,
		...tail.value,
		remarks
	});
}

function revisionOf(file: string, row: CfgRow, remarks: ReadRemark[]): ComtradeRevision {
	const field = row.fields[2] ?? '';
	if (field === '') return '1991';
	const year = wholeNumber(field);
	const revision: ComtradeRevision = year === null || year >= 2013 ? '2013' : year < 1995 ? '1991' : '1999';
	const isKnown = year === 1991 || year === 1999 || year === 2001 || year === 2013;
	if (!isKnown)
		remarks.push(
			note(
				'revision-unknown',
				`${file}, line ${row.line} gives ${quoted(field)} as revision year (1991, 1999 or 2013 was expected); it was read as ${revision}.`
			)
		);
	return revision;
}

function parseChannels(
	cursor: CfgCursor,
	remarks: ReadRemark[]
): Result<{ analogues: AnalogueLine[]; statuses: StatusLine[] }, ReadProblem> {
	const counts = parseChannelCounts(cursor, remarks);
	if (!counts.ok) return counts;
	const analogues: AnalogueLine[] = [];
	for (let position = 1; position <= counts.value.analogue; position++) {
		const channel = parseAnalogueLine(cursor, position, counts.value.analogue);
		if (!channel.ok) return channel;
		analogues.push(channel.value);
	}
	const statuses: StatusLine[] = [];
	for (let position = 1; position <= counts.value.status; position++) {
		const status = parseStatusLine(cursor, position, counts.value.status);
		if (!status.ok) return status;
		statuses.push(status.value);
	}
	if (analogues.length === 0)
		return refuse(
			'no-analogue-channels',
			cursor.file,
			`line ${counts.value.line}`,
			`${cursor.file}, line ${counts.value.line} lists no analogue channel; at least one voltage or current was expected.`
		);
	return ok({ analogues, statuses });
}

function parseFrequency(cursor: CfgCursor, remarks: ReadRemark[]): Result<number | null, ReadProblem> {
	const expected = 'the line frequency in Hz';
	const row = nextRow(cursor, expected);
	if (!row.ok) return row;
	const field = row.value.fields[0] ?? '';
	const frequency_Hz = finiteNumber(field);
	if (frequency_Hz === null && field !== '')
		return unexpected(cursor, row.value, 'cfg-line-frequency', expected);
	if (frequency_Hz !== null && frequency_Hz > 0) return ok(frequency_Hz);
	remarks.push(
		note(
			'line-frequency-missing',
			`${cursor.file}, line ${row.value.line} states no line frequency (${quoted(field)}); the point’s nominal frequency is used.`
		)
	);
	return ok(null);
}

type Rates = Pick<ComtradeHeader, 'rates' | 'announced' | 'rateCountLine'>;

/** The number of rates, then one line "rate,last sample" each; with 0 rates one line "0,last sample" follows. */
function parseRates(cursor: CfgCursor): Result<Rates, ReadProblem> {
	const countRow = nextRow(cursor, 'the number of sampling rates');
	if (!countRow.ok) return countRow;
	const count = wholeNumber(countRow.value.fields[0] ?? '');
	const isBare = countRow.value.fields.slice(1).every((field) => field === '');
	if (count === null || !isBare)
		return unexpected(cursor, countRow.value, 'cfg-rate-count', 'the number of sampling rates');
	const rateCountLine = countRow.value.line;
	const rates: RateLine[] = [];
	for (let position = 1; position <= Math.max(1, count); position++) {
		const upcoming = peekRow(cursor);
		if (count === 0 && upcoming?.text.includes('/')) break;
		const rate = parseRateLine(cursor, position, Math.max(1, count), rates[position - 2]?.lastSample ?? 0);
		if (!rate.ok) return rate;
		rates.push(rate.value);
	}
	const last = rates[rates.length - 1];
	const announced = last === undefined ? null : { sampleCount: last.lastSample, line: last.line };
	const hasEveryRate = count > 0 && rates.every(({ samplingRate_Hz }) => samplingRate_Hz > 0);
	return ok({ rates: hasEveryRate ? rates : [], announced, rateCountLine });
}

function parseRateLine(
	cursor: CfgCursor,
	position: number,
	count: number,
	lastBefore: number
): Result<RateLine, ReadProblem> {
	const expected = `sampling rate ${position} of ${count} (rate in Hz, number of the last sample at this rate, more than ${lastBefore})`;
	const row = nextRow(cursor, expected);
	if (!row.ok) return row;
	const samplingRate_Hz = finiteNumber(row.value.fields[0] ?? '');
	const lastSample = finiteNumber(row.value.fields[1] ?? '');
	const isReadable =
		samplingRate_Hz !== null &&
		samplingRate_Hz >= 0 &&
		lastSample !== null &&
		Number.isSafeInteger(lastSample) &&
		lastSample > lastBefore;
	if (!isReadable) return unexpected(cursor, row.value, 'cfg-rate-line', expected);
	return ok({ samplingRate_Hz, lastSample, line: row.value.line });
}

type Tail = Pick<ComtradeHeader, 'start' | 'dataFormat' | 'dataFormatLine' | 'stampUnit_s'>;

/** Times, data format, time multiplier and the 2013 time code. */
function parseTail(
	cursor: CfgCursor,
	revision: ComtradeRevision,
	remarks: ReadRemark[]
): Result<Tail, ReadProblem> {
	const first = nextRow(cursor, 'the date and time of the first sample');
	if (!first.ok) return first;
	const start = parseTimeLine(cursor.file, first.value, 'start of the recording', revision, remarks);
	const trigger = nextRow(cursor, 'the date and time of the trigger');
	if (!trigger.ok) return trigger;
	const triggerTime = parseTimeLine(cursor.file, trigger.value, 'trigger time', revision, []);
	const format = parseDataFormat(cursor);
	if (!format.ok) return format;
	const multiplier = parseTimeMultiplier(cursor, remarks);
	const utcOffset_min = parseTimeZoneLine(cursor, revision, remarks);
	parseClockLine(cursor, remarks);
	const nanoseconds = Math.max(start.decimals, triggerTime.decimals) > 6;
	return ok({
		start: start.clock === null ? null : { local: isoLocal(start.clock), utcOffset_min },
		...format.value,
		stampUnit_s: (nanoseconds ? 1e-9 : 1e-6) * multiplier
	});
}

function parseDataFormat(
	cursor: CfgCursor
): Result<Pick<ComtradeHeader, 'dataFormat' | 'dataFormatLine'>, ReadProblem> {
	const expected = `the data format (${DATA_FORMATS.join(', ')})`;
	const row = nextRow(cursor, expected);
	if (!row.ok) return row;
	const word = (row.value.fields[0] ?? '').toUpperCase();
	const dataFormat = DATA_FORMATS.find((known) => known === word);
	if (dataFormat === undefined) return unexpected(cursor, row.value, 'cfg-data-format', expected);
	return ok({ dataFormat, dataFormatLine: row.value.line });
}

/** Absent in the 1991 form, where stamps simply count microseconds. */
function parseTimeMultiplier(cursor: CfgCursor, remarks: ReadRemark[]): number {
	const row = peekRow(cursor);
	if (row === null) return 1;
	cursor.at++;
	const multiplier = finiteNumber(row.fields[0] ?? '');
	if (multiplier !== null && multiplier > 0) return multiplier;
	remarks.push(
		warning(
			'time-multiplier',
			`${cursor.file}, line ${row.line}: a time multiplier above zero was expected, but ${quoted(row.text)} was found; 1 was used.`
		)
	);
	return 1;
}
