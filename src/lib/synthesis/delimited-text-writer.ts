import { parseIsoLocal } from '../recording/calendar';
import type { CaptureFile, RecordingStart, Trend, TrendSeries } from '../recording/recording';
import { parseUnit } from '../recording/unit-text';
import type { WaveformToWrite } from './comtrade-writer-header';

export interface DelimitedTextOptions {
	/** File name without extension; ".csv" is added. */
	stem: string;
	separator?: ',' | ';' | '\t' | '|' | ' ';
	decimal?: '.' | ',';
	/** Sign between groups of three digits before the decimal sign; fields that hold the separator are then quoted. */
	grouping?: '' | ' ' | "'" | ',' | '.';
	/** Significant digits of each value; waveforms default to 9, trends to 6. */
	digits?: number;
	/** Lines above the headings. */
	preamble?: readonly string[];
	/** Units in a line of their own below the headings, instead of in brackets behind them. */
	unitsRow?: boolean;
	encoding?: 'utf-8' | 'utf-8-mark' | 'utf-16le' | 'utf-16be';
	lineEnd?: '\r\n' | '\n' | '\r';
	/** How a clock time is written. "half-day": date and "3:21:43 PM.135" in columns of their own. */
	stamp?: StampStyle;
}

export type StampStyle =
	| 'year-first'
	| 'year-first-t'
	| 'day-first'
	| 'month-first'
	| 'date-and-clock'
	| 'half-day'
	| 'epoch-s'
	| 'epoch-ms';

export interface DelimitedWaveformOptions extends DelimitedTextOptions {
	/** Time from the first sample, stamps of the clock, or no time column but a sampling rate in front. */
	time?: 'seconds' | 'milliseconds' | 'microseconds' | 'stamps' | 'rate-line';
}

/** What is needed of a trend log to write it; every Trend is one. */
export type TrendToWrite = Pick<Trend, 'start' | 'intervalStarts_s' | 'flagged' | 'series'>;

interface Writing extends Required<Omit<DelimitedTextOptions, 'stem' | 'digits'>> {
	stem: string;
}

function writingOf(options: DelimitedTextOptions): Writing {
	const separator = options.separator ?? ',';
	const decimal = options.decimal ?? '.';
	if (separator === decimal) throw new Error('A decimal comma needs another separator than the comma.');
	const grouping = options.grouping ?? '';
	if (grouping === decimal) throw new Error('Digits are grouped by another sign than the decimal one.');
	return {
		stem: options.stem,
		separator,
		decimal,
		grouping,
		preamble: options.preamble ?? [],
		unitsRow: options.unitsRow ?? false,
		encoding: options.encoding ?? 'utf-8',
		lineEnd: options.lineEnd ?? '\r\n',
		stamp: options.stamp ?? 'year-first'
	};
}

function numberText(value: number, digits: number, { decimal, grouping, separator }: Writing): string {
	// Blanks in a row are one separator: an empty field would not be seen.
	if (Number.isNaN(value)) return separator === ' ' ? 'nan' : '';
	const [whole = '', ...rest] = String(Number(value.toPrecision(digits))).split('.');
	// Exponents are left alone: nobody groups their digits.
	const isPlain = !rest.join('').includes('e') && !whole.includes('e');
	const grouped = grouping !== '' && isPlain ? whole.replace(/\B(?=(\d{3})+$)/g, grouping) : whole;
	return [grouped, ...rest].join(decimal);
}

function rowText(fields: readonly string[], { separator }: Writing): string {
	return fields.map((field) => (field.includes(separator) ? `"${field}"` : field)).join(separator);
}

const UTF_16 = { 'utf-16le': true, 'utf-16be': false } as const;

function encoded(text: string, encoding: Writing['encoding']): Uint8Array {
	if (encoding === 'utf-8') return new TextEncoder().encode(text);
	if (encoding === 'utf-8-mark') return new TextEncoder().encode(`\ufeff${text}`);
	const bytes = new Uint8Array(2 * (text.length + 1));
	const view = new DataView(bytes.buffer);
	const isLittle = UTF_16[encoding];
	view.setUint16(0, 0xfeff, isLittle);
	for (let at = 0; at < text.length; at++) view.setUint16(2 + 2 * at, text.charCodeAt(at), isLittle);
	return bytes;
}

function textFile({ stem, preamble, encoding, lineEnd }: Writing, lines: readonly string[]): CaptureFile {
	const text = [...preamble, ...lines].map((line) => `${line}${lineEnd}`).join('');
	return { name: `${stem}.csv`, bytes: encoded(text, encoding) };
}

/** Heading line, with the units in brackets or in a line below. */
function headingLines(headings: readonly { name: string; unit: string }[], writing: Writing): string[] {
	if (!writing.unitsRow)
		return [
			rowText(
				headings.map(({ name, unit }) => (unit === '' ? name : `${name} (${unit})`)),
				writing
			)
		];
	return [
		rowText(
			headings.map(({ name }) => name),
			writing
		),
		rowText(
			headings.map(({ unit }) => (unit === '' ? '-' : unit)),
			writing
		)
	];
}

/** Headings of the columns that hold a clock time. */
function stampHeadings(stamp: StampStyle, name: string): { name: string; unit: string }[] {
	if (stamp === 'date-and-clock' || stamp === 'half-day')
		return [
			{ name: 'Date', unit: '' },
			{ name: 'Time', unit: '' }
		];
	return [{ name, unit: '' }];
}

/** Clock time of a moment `offset_s` after the start, to `decimals` digits, in one field or two. */
function stampFields(
	start: RecordingStart,
	offset_s: number,
	decimals: number,
	{ stamp, decimal }: Writing
): string[] {
	const clock = parseIsoLocal(start.local);
	if (clock === null) throw new Error(`A start must be a local ISO date and time, not "${start.local}".`);
	const scale = 10 ** decimals;
	const ofDay = clock.hour * 3600 + clock.minute * 60 + clock.second;
	const units = Math.round((ofDay + Number(`0.${clock.fraction || '0'}`) + offset_s) * scale);
	const whole = Math.floor(units / scale);
	const date = new Date(Date.UTC(clock.year, clock.month - 1, clock.day) + whole * 1000);
	const fraction = decimals === 0 ? '' : String(units - whole * scale).padStart(decimals, '0');
	const utc_s = date.getTime() / 1000 - 60 * (start.utcOffset_min ?? 0);
	if (stamp === 'epoch-s') return [fraction === '' ? String(utc_s) : `${utc_s}${decimal}${fraction}`];
	if (stamp === 'epoch-ms') return [String(utc_s * 1000 + Number(fraction.padEnd(3, '0').slice(0, 3)))];
	const [year, month, day] = date.toISOString().slice(0, 10).split('-') as [string, string, string];
	const time = date.toISOString().slice(11, 19);
	const point = fraction === '' ? '' : `.${fraction}`;
	const zone = zoneSuffix(start.utcOffset_min);
	switch (stamp) {
		case 'year-first':
			return [`${year}-${month}-${day} ${time}${point}${zone}`];
		case 'year-first-t':
			return [`${year}-${month}-${day}T${time}${point}${zone}`];
		case 'day-first':
			return [`${day}.${month}.${year} ${time}${point}${zone}`];
		case 'month-first':
			return [`${month}/${day}/${year} ${time}${point}${zone}`];
		case 'date-and-clock':
			return [`${year}-${month}-${day}`, `${time}${point}${zone}`];
		case 'half-day': {
			const hour = date.getUTCHours();
			return [
				`${year}-${month}-${day}`,
				`${hour % 12 || 12}${time.slice(2)} ${hour < 12 ? 'AM' : 'PM'}${point}`
			];
		}
	}
}

function zoneSuffix(utcOffset_min: number | null): string {
	if (utcOffset_min === null) return '';
	if (utcOffset_min === 0) return 'Z';
	const size = Math.abs(utcOffset_min);
	const two = (value: number) => String(value).padStart(2, '0');
	return `${utcOffset_min < 0 ? '-' : '+'}${two(Math.floor(size / 60))}:${two(size % 60)}`;
}

const ELAPSED = {
	seconds: { unit: 's', perSecond: 1 },
	milliseconds: { unit: 'ms', perSecond: 1e3 },
	microseconds: { unit: 'us', perSecond: 1e6 }
} as const;

/** Nine digits behind the second where a text can hold them; a count since 1970 holds six. */
function stampDecimals(stamp: StampStyle): number {
	return stamp === 'epoch-s' ? 6 : stamp === 'epoch-ms' ? 3 : 9;
}

/** One row per sample, channels headed "name (unit)"; one sampling rate only. */
export function writeDelimitedWaveform(
	waveform: WaveformToWrite,
	options: DelimitedWaveformOptions
): CaptureFile {
	const writing = writingOf(options);
	const digits = options.digits ?? 9;
	const time = options.time ?? 'seconds';
	const [segment, ...others] = waveform.segments;
	if (segment === undefined || others.length > 0)
		throw new Error('Delimited text is written for one sampling rate.');
	const units = waveform.channels.map(({ unitAsWritten }) => parseUnit(unitAsWritten));
	const lines = [];
	const plain = { ...writing, grouping: '' as const };
	if (time === 'rate-line')
		lines.push(rowText(['Sampling rate (Hz)', numberText(segment.samplingRate_Hz, 15, plain)], writing));
	const timeHeadings =
		time === 'rate-line'
			? []
			: time === 'stamps'
				? stampHeadings(writing.stamp, 'Time')
				: [{ name: 'Time', unit: ELAPSED[time].unit }];
	const channels = waveform.channels.map(({ name, unitAsWritten }) => ({ name, unit: unitAsWritten }));
	lines.push(...headingLines([...timeHeadings, ...channels], writing));
	for (let sample = 0; sample < waveform.sampleCount; sample++) {
		const offset_s = sample / segment.samplingRate_Hz;
		const row = [];
		if (time === 'stamps')
			row.push(...stampFields(waveform.start, offset_s, stampDecimals(writing.stamp), writing));
		else if (time !== 'rate-line') row.push(numberText(offset_s * ELAPSED[time].perSecond, 12, plain));
		for (const [index, { samples }] of waveform.channels.entries()) {
			const unit = units[index] as { times: number; over: number };
			row.push(numberText(((samples[sample] as number) * unit.over) / unit.times, digits, writing));
		}
		lines.push(rowText(row, writing));
	}
	return textFile(writing, lines);
}

/** "U_L1 rms (V)", "I_N h5 (%)", "U_L1L2 THD (%)", "Frequency (Hz)". */
export function trendHeading(
	series: Pick<TrendSeries, 'quantity' | 'phaseHint' | 'measure' | 'unit'>
): string {
	const { name, unit } = headingParts(series);
	return `${name} (${unit})`;
}

function headingParts(series: Pick<TrendSeries, 'quantity' | 'phaseHint' | 'measure' | 'unit'>): {
	name: string;
	unit: string;
} {
	const unit = series.unit === 'percent-of-fundamental' ? '%' : series.unit;
	if (series.measure.kind === 'frequency') return { name: 'Frequency', unit };
	const symbol = series.quantity === 'voltage' ? 'U' : 'I';
	const conductor = series.phaseHint === null ? '' : `_${series.phaseHint}`;
	const measure = { rms: 'rms', thd: 'THD', order: '' }[series.measure.kind];
	const word = series.measure.kind === 'order' ? `h${series.measure.order}` : measure;
	return { name: `${symbol}${conductor} ${word}`, unit };
}

/** One row per interval: start of the interval, the series, and "Flagged" (1 or 0) where the trend has flags. */
export function writeDelimitedTrend(trend: TrendToWrite, options: DelimitedTextOptions): CaptureFile {
	const writing = writingOf(options);
	const digits = options.digits ?? 6;
	const headings = [...stampHeadings(writing.stamp, 'Interval start'), ...trend.series.map(headingParts)];
	if (trend.flagged) headings.push({ name: 'Flagged', unit: '' });
	const lines = headingLines(headings, writing);
	for (const [interval, offset_s] of trend.intervalStarts_s.entries()) {
		const row = stampFields(trend.start, offset_s, Number.isInteger(offset_s) ? 0 : 3, writing);
		for (const { values } of trend.series) row.push(numberText(values[interval] as number, digits, writing));
		if (trend.flagged) row.push(String(trend.flagged[interval]));
		lines.push(rowText(row, writing));
	}
	return textFile(writing, lines);
}
