import { isoLocal, parseIsoLocal } from '../recording/calendar';
import type { CaptureFile, RecordingStart, Trend, TrendSeries } from '../recording/recording';
import { parseUnit } from '../recording/unit-text';
import type { WaveformToWrite } from './comtrade-writer-header';

export interface DelimitedTextOptions {
	/** File name without extension; ".csv" is added. */
	stem: string;
	separator?: ',' | ';' | '\t';
	decimal?: '.' | ',';
	/** Significant digits of each value; waveforms default to 9, trends to 6. */
	digits?: number;
}

export interface DelimitedWaveformOptions extends DelimitedTextOptions {
	/** Seconds from the first sample, stamps of the clock, or no time column but a sampling rate in front. */
	time?: 'seconds' | 'stamps' | 'rate-line';
}

/** What is needed of a trend log to write it; every Trend is one. */
export type TrendToWrite = Pick<Trend, 'start' | 'intervalStarts_s' | 'flagged' | 'series'>;

function layoutOf(options: DelimitedTextOptions): { separator: string; decimal: string } {
	const separator = options.separator ?? ',';
	const decimal = options.decimal ?? '.';
	if (separator === decimal) throw new Error('A decimal comma needs another separator than the comma.');
	return { separator, decimal };
}

function numberText(value: number, digits: number, decimal: string): string {
	if (Number.isNaN(value)) return '';
	const text = String(Number(value.toPrecision(digits)));
	return decimal === '.' ? text : text.replace('.', decimal);
}

function textFile(stem: string, lines: string[]): CaptureFile {
	return { name: `${stem}.csv`, bytes: new TextEncoder().encode(`${lines.join('\r\n')}\r\n`) };
}

/** Clock time of a moment `offset_s` after the start, to `decimals` digits, with the zone where it is known. */
function stampText(start: RecordingStart, offset_s: number, decimals: number): string {
	const clock = parseIsoLocal(start.local);
	if (clock === null) throw new Error(`A start must be a local ISO date and time, not "${start.local}".`);
	const scale = 10 ** decimals;
	const ofDay = clock.hour * 3600 + clock.minute * 60 + clock.second;
	const units = Math.round((ofDay + Number(`0.${clock.fraction || '0'}`) + offset_s) * scale);
	const whole = Math.floor(units / scale);
	const date = new Date(Date.UTC(clock.year, clock.month - 1, clock.day) + whole * 1000);
	const text = isoLocal({
		year: date.getUTCFullYear(),
		month: date.getUTCMonth() + 1,
		day: date.getUTCDate(),
		hour: date.getUTCHours(),
		minute: date.getUTCMinutes(),
		second: date.getUTCSeconds(),
		fraction: decimals === 0 ? '' : String(units - whole * scale).padStart(decimals, '0')
	});
	return text.replace('T', ' ') + zoneSuffix(start.utcOffset_min);
}

function zoneSuffix(utcOffset_min: number | null): string {
	if (utcOffset_min === null) return '';
	if (utcOffset_min === 0) return 'Z';
	const size = Math.abs(utcOffset_min);
	const two = (value: number) => String(value).padStart(2, '0');
	return `${utcOffset_min < 0 ? '-' : '+'}${two(Math.floor(size / 60))}:${two(size % 60)}`;
}

/** One row per sample, channels headed "name (unit)"; one sampling rate only. */
export function writeDelimitedWaveform(
	waveform: WaveformToWrite,
	options: DelimitedWaveformOptions
): CaptureFile {
	const { separator, decimal } = layoutOf(options);
	const digits = options.digits ?? 9;
	const time = options.time ?? 'seconds';
	const [segment, ...others] = waveform.segments;
	if (segment === undefined || others.length > 0)
		throw new Error('Delimited text is written for one sampling rate.');
	const units = waveform.channels.map(({ unitAsWritten }) => parseUnit(unitAsWritten));
	const headings = waveform.channels.map(({ name, unitAsWritten }) => `${name} (${unitAsWritten})`);
	const lines = [];
	if (time === 'rate-line')
		lines.push(`Sampling rate (Hz)${separator}${numberText(segment.samplingRate_Hz, 15, decimal)}`);
	const timeHeading = { seconds: ['Time (s)'], stamps: ['Time'], 'rate-line': [] }[time];
	lines.push([...timeHeading, ...headings].join(separator));
	for (let sample = 0; sample < waveform.sampleCount; sample++) {
		const offset_s = sample / segment.samplingRate_Hz;
		const row = [];
		if (time === 'seconds') row.push(numberText(offset_s, 12, decimal));
		else if (time === 'stamps') row.push(stampText(waveform.start, offset_s, 9));
		for (const [index, { samples }] of waveform.channels.entries()) {
			const unit = units[index] as { times: number; over: number };
			row.push(numberText(((samples[sample] as number) * unit.over) / unit.times, digits, decimal));
		}
		lines.push(row.join(separator));
	}
	return textFile(options.stem, lines);
}

/** "U_L1 rms (V)", "I_N h5 (%)", "U_L1L2 THD (%)", "Frequency (Hz)". */
export function trendHeading(
	series: Pick<TrendSeries, 'quantity' | 'phaseHint' | 'measure' | 'unit'>
): string {
	const unit = series.unit === 'percent-of-fundamental' ? '%' : series.unit;
	if (series.measure.kind === 'frequency') return `Frequency (${unit})`;
	const symbol = series.quantity === 'voltage' ? 'U' : 'I';
	const conductor = series.phaseHint === null ? '' : `_${series.phaseHint}`;
	const measure = { rms: 'rms', thd: 'THD', order: '' }[series.measure.kind];
	const word = series.measure.kind === 'order' ? `h${series.measure.order}` : measure;
	return `${symbol}${conductor} ${word} (${unit})`;
}

/** One row per interval: start of the interval, the series, and "Flagged" (1 or 0) where the trend has flags. */
export function writeDelimitedTrend(trend: TrendToWrite, options: DelimitedTextOptions): CaptureFile {
	const { separator, decimal } = layoutOf(options);
	const digits = options.digits ?? 6;
	const headings = ['Interval start', ...trend.series.map(trendHeading)];
	if (trend.flagged) headings.push('Flagged');
	const lines = [headings.join(separator)];
	for (const [interval, offset_s] of trend.intervalStarts_s.entries()) {
		const row = [stampText(trend.start, offset_s, Number.isInteger(offset_s) ? 0 : 3)];
		for (const { values } of trend.series) row.push(numberText(values[interval] as number, digits, decimal));
		if (trend.flagged) row.push(String(trend.flagged[interval]));
		lines.push(row.join(separator));
	}
	return textFile(options.stem, lines);
}
