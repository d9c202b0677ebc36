import { describe, expect, it } from 'vitest';
import { handleOf } from '$lib/recording/capture-handle';
import { guessTableOf, readDelimitedText } from '$lib/recording/readers/delimited-text/read-delimited-text';
import { toldLayoutSchema } from '$lib/recording/readers/delimited-text/table-layout-told';
import type { Recording, RecordingChannel, Trend } from '$lib/recording/recording';
import { expectSamples } from './expect-samples';
import {
	expectedFiles,
	sampleCapture,
	samplesArePresent,
	skipReason,
	type ExpectedChannel,
	type ExpectedFile
} from './sample-files';

// Source of every expected figure: ../shared/samples/expected.json, made by an independent numpy reader.

const all = expectedFiles();
const file = (path: string): ExpectedFile => all[path] as ExpectedFile;

function waveform(path: string, samplingRate_Hz?: number): Recording {
	const result = readDelimitedText(sampleCapture(path), samplingRate_Hz ? { samplingRate_Hz } : {});
	if (!result.ok) throw new Error(result.problem.sentence);
	if (result.value.kind !== 'waveform') throw new Error(`${path} was taken for a trend`);
	return result.value;
}

function trend(path: string): Trend {
	const result = readDelimitedText(sampleCapture(path));
	if (!result.ok) throw new Error(result.problem.sentence);
	if (result.value.kind !== 'trend') throw new Error(`${path} was taken for a waveform`);
	return result.value;
}

const codes = (content: Recording | Trend) => content.remarks.map(({ code }) => code);

describe.skipIf(!samplesArePresent)(`tables of samples without heading and time${skipReason}`, () => {
	const paths = [33, 398, 707, 1240].map((number) => `csv/plugload_${number}_30khz.csv`);

	it.each(paths)('%s is refused as long as nobody states the rate', (path) => {
		const result = readDelimitedText(sampleCapture(path));
		expect(result.ok).toBe(false);
		if (result.ok) return;
		expect(result.problem.code).toBe('sampling-rate-missing');
		expect(result.problem.sentence).toContain(path.slice(4));
		expect(result.problem.place).toBe('line 1');
	});

	it.each(paths)('%s is read with a stated rate', (path) => {
		const recording = waveform(path, 30_000);
		expect(recording.sampleCount).toBe(file(path).rows);
		expect(recording.segments).toEqual([
			{ samplingRate_Hz: 30_000, fromSample: 0, toSample: recording.sampleCount }
		]);
		for (const channel of file(path).channels ?? []) {
			// Columns count from 1 in the expected figures: current first, voltage second.
			const ours = recording.channels[(channel.index ?? NaN) - 1] as RecordingChannel;
			if (channel.all_samples) expectSamples(ours, '', channel.all_samples);
		}
	});
});

describe.skipIf(!samplesArePresent)(`a table of six channels with stamps${skipReason}`, () => {
	it('has the expected samples, quantities and conductors', () => {
		const recording = waveform('csv/three_phase_50khz_utc.csv');
		const expected = file('csv/three_phase_50khz_utc.csv');
		expect(recording.sampleCount).toBe(expected.rows);
		// The stamps themselves span 7999 steps in 0.159981756 s: 49 999.45 Hz, 11 ppm beside the nominal 50 kHz.
		const rate_Hz = recording.segments[0]?.samplingRate_Hz ?? NaN;
		expect(Math.abs(rate_Hz / (expected.fs_hz ?? NaN) - 1)).toBeLessThan(2e-5);
		expect(rate_Hz).toBeCloseTo(7999 / 0.159981756, 3);
		for (const [index, channel] of (expected.channels as ExpectedChannel[]).entries())
			expectSamples(
				recording.channels[index] as RecordingChannel,
				'',
				channel.all_samples as NonNullable<ExpectedChannel['all_samples']>
			);
		expect(recording.channels.map(({ quantity, phaseHint }) => `${quantity} ${phaseHint}`)).toEqual([
			'voltage L1',
			'voltage L2',
			'voltage L3',
			'current L1',
			'current L2',
			'current L3'
		]);
		// Its heading is “Time_UTC”.
		expect(recording.start).toEqual({ local: '2020-02-24T18:15:21.499998208', utcOffset_min: 0 });
	});
});

describe.skipIf(!samplesArePresent)(`one capture written in four ways${skipReason}`, () => {
	it.each([
		['derived/csv/semicolon_decimal_comma_bom.csv', 'semicolon separated, decimal comma'],
		['derived/csv/scope_preamble_negative_time.csv', 'comma separated'],
		['derived/csv/rounded_microseconds.csv', 'comma separated'],
		['derived/csv/tabs_milli_units_cr.csv', 'tab separated']
	])('%s gives the same figures', (path, variant) => {
		const recording = waveform(path);
		expect(recording.variant).toBe(variant);
		expect(recording.sampleCount).toBe(30_000);
		expect(recording.segments).toEqual([{ samplingRate_Hz: 30_000, fromSample: 0, toSample: 30_000 }]);
		for (const [index, channel] of (file(path).channels ?? []).entries()) {
			const window = channel.windows?.[0];
			if (!window) throw new Error('no expected window');
			const samples = (recording.channels[index] as RecordingChannel).samples.subarray(
				window.from_sample,
				window.to_sample
			);
			const rms = Math.sqrt(samples.reduce((sum, x) => sum + x * x, 0) / samples.length);
			const mean = samples.reduce((sum, x) => sum + x, 0) / samples.length;
			// Figures are printed to seven digits.
			expect(Math.abs(rms / window.rms - 1)).toBeLessThan(1e-6);
			expect(Math.abs(mean - window.dc)).toBeLessThan(1e-6 * Math.abs(window.rms));
		}
	});

	it('takes units from a row of their own, from brackets, and leaves open what nobody wrote', () => {
		const units = (path: string) =>
			waveform(`derived/csv/${path}`).channels.map(({ quantity, unitAsWritten }) => [
				quantity,
				unitAsWritten
			]);
		expect(units('semicolon_decimal_comma_bom.csv')).toEqual([
			['voltage', 'V'],
			['current', 'A']
		]);
		expect(units('tabs_milli_units_cr.csv')).toEqual([
			['voltage', 'V'],
			['current', 'mA']
		]);
		expect(units('rounded_microseconds.csv')).toEqual([
			['voltage', ''],
			['current', '']
		]);
		expect(units('scope_preamble_negative_time.csv')).toEqual([
			['other', ''],
			['other', '']
		]);
		expect(codes(waveform('derived/csv/scope_preamble_negative_time.csv'))).toContain('quantity-open');
	});
});

describe.skipIf(!samplesArePresent)(`logs of other makers${skipReason}`, () => {
	it('reads a log with a split, oddly written clock', () => {
		const log = trend('csv/logger_30s_odd_time.csv');
		const expected = file('csv/logger_30s_odd_time.csv');
		expect(log.intervalStarts_s.length).toBe(expected.rows);
		expect(log.interval_s).toBe(expected.step_s_most_common);
		expect(log.start.local).toBe('2019-08-31T15:21:43.135');
		expect(log.intervalStarts_s[2342]).toBeCloseTo(2342 * 30, 6);
		expect(log.series.map(({ quantity, phaseHint, measure }) => [quantity, phaseHint, measure.kind])).toEqual(
			[
				['voltage', 'L1', 'rms'],
				['voltage', 'L2', 'rms'],
				['voltage', 'L3', 'rms'],
				['voltage', 'N', 'rms'],
				['current', 'L1', 'rms'],
				['current', 'L2', 'rms'],
				['current', 'L3', 'rms']
			]
		);
		for (const series of log.series) expectColumn(series.values, expected, series.name);
		expect(codes(log)).toEqual(
			expect.arrayContaining(['columns-left-out', 'unusual-interval', 'unit-assumed'])
		);
	});

	it('keeps minima and maxima apart from averages, and gaps as gaps', () => {
		const log = trend('derived/csv/trend_rms_15min.csv');
		const expected = file('derived/csv/trend_rms_15min.csv');
		expect(log.intervalStarts_s.length).toBe(expected.rows);
		expect(log.interval_s).toBe(expected.step_s);
		expect(log.series.map(({ name, phaseHint }) => [name, phaseHint])).toEqual([
			['VAB_avg', 'L1L2'],
			['VBC_avg', 'L2L3'],
			['VCA_avg', 'L3L1'],
			['IA_avg', 'L1'],
			['IB_avg', 'L2'],
			['IC_avg', 'L3']
		]);
		expect(log.extremes?.length).toBe(12);
		for (const series of [...log.series, ...(log.extremes ?? [])])
			expectColumn(series.values, expected, series.name);
		expect(codes(log)).toContain('trend-gaps');
	});

	function expectColumn(values: Float64Array, expected: ExpectedFile, name: string): void {
		const column = expected.columns?.[name];
		if (!column) throw new Error(`no expected figures for ${name}`);
		const mean = values.reduce((sum, x) => sum + x, 0) / values.length;
		expect(Math.abs(mean / column.mean - 1)).toBeLessThan(1e-6);
		expect(Math.min(...values)).toBe(column.min);
		expect(Math.max(...values)).toBe(column.max);
	}
});

describe.skipIf(!samplesArePresent)(`damaged tables${skipReason}`, () => {
	it('refuses an empty file by name', () => {
		const result = readDelimitedText(sampleCapture('derived/malformed/empty.csv'));
		expect(!result.ok && result.problem.sentence).toBe(
			'empty.csv is empty (0 bytes); a table of numbers was expected.'
		);
	});
});

describe.skipIf(!samplesArePresent)(`the samples of text${skipReason}`, () => {
	it('are all covered above, by name', () => {
		const text = Object.keys(all).filter((path) => path.endsWith('.csv'));
		expect(text.sort()).toEqual(
			[
				'csv/logger_30s_odd_time.csv',
				'csv/plugload_1240_30khz.csv',
				'csv/plugload_33_30khz.csv',
				'csv/plugload_398_30khz.csv',
				'csv/plugload_707_30khz.csv',
				'csv/three_phase_50khz_utc.csv',
				'derived/csv/rounded_microseconds.csv',
				'derived/csv/scope_preamble_negative_time.csv',
				'derived/csv/semicolon_decimal_comma_bom.csv',
				'derived/csv/tabs_milli_units_cr.csv',
				'derived/csv/trend_rms_15min.csv',
				'derived/malformed/empty.csv'
			].sort()
		);
	});

	it.each(Object.keys(all).filter((path) => path.endsWith('.csv') && !path.includes('malformed')))(
		'%s is read again by its own guess, told as a layout',
		(path) => {
			const files = sampleCapture(path);
			const guess = guessTableOf(handleOf(files[0]!));
			const rate = file(path).fs_source?.startsWith('stated') ? 30_000 : null;
			const guessed = guess!.layout;
			const layout = toldLayoutSchema.parse({
				...guessed,
				time: { ...guessed.time, samplingRate_Hz: guessed.time.samplingRate_Hz ?? rate }
			});
			const told = readDelimitedText(files, { layout });
			const read = readDelimitedText(files, rate === null ? {} : { samplingRate_Hz: rate });
			if (!told.ok || !read.ok) throw new Error('not read');
			const { remarks: _told, ...one } = told.value;
			const { remarks: _read, ...other } = read.value;
			expect(one).toEqual(other);
		}
	);
});
