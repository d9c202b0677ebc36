import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { handleOf } from '$lib/recording/capture-handle';
import { guessTableOf, readDelimitedText } from '$lib/recording/readers/delimited-text/read-delimited-text';
import { toldLayoutSchema } from '$lib/recording/readers/delimited-text/table-layout-told';
import type { Recording, Trend, TrendSeries } from '$lib/recording/recording';
import {
	writeDelimitedTrend,
	writeDelimitedWaveform,
	type DelimitedWaveformOptions,
	type TrendToWrite
} from '$lib/synthesis/delimited-text-writer';
import { PINNED_SEED, waveformArbitrary } from './waveform-arbitrary';

const LAYOUTS: Omit<DelimitedWaveformOptions, 'stem'>[] = [
	{ separator: ',', decimal: '.' },
	{ separator: ';', decimal: '.' },
	{ separator: ';', decimal: ',' },
	{ separator: '\t', decimal: '.' },
	{ separator: '\t', decimal: ',' }
];

function read(file: ReturnType<typeof writeDelimitedTrend>): Recording | Trend {
	const result = readDelimitedText([file]);
	if (!result.ok) throw new Error(result.problem.sentence);
	return result.value;
}

/** Nine significant digits in the file: half a unit of the ninth, relative to the value. */
const DIGITS_9 = 5.1e-9;

const evenWaveforms = waveformArbitrary.filter(
	({ segments, sampleCount, channels }) =>
		segments.length === 1 &&
		sampleCount >= 8 &&
		// A row without any value is no row, and a column without any value no channel.
		channels.every(({ samples }) => !samples.every(Number.isNaN)) &&
		Array.from({ length: sampleCount }, (_, n) => n).every((n) =>
			channels.some(({ samples }) => !Number.isNaN(samples[n] as number))
		) &&
		channels.every(
			({ samples }) => samples.filter((sample) => !Number.isNaN(sample)).length > sampleCount / 2
		)
);

describe('a waveform written as delimited text and read again', () => {
	it.each(
		LAYOUTS.flatMap((layout) =>
			(['seconds', 'stamps', 'rate-line'] as const).map((time) => ({ ...layout, time }))
		)
	)('separator $separator, decimal $decimal, time by $time', (layout) => {
		fc.assert(
			fc.property(evenWaveforms, (waveform) => {
				const recording = read(writeDelimitedWaveform(waveform, { ...layout, stem: 'x' }));
				if (recording.kind !== 'waveform') throw new Error('taken for a trend');
				expect(recording.sampleCount).toBe(waveform.sampleCount);
				const [segment] = recording.segments;
				const stated_Hz = waveform.segments[0]?.samplingRate_Hz as number;
				expect(Math.abs((segment?.samplingRate_Hz as number) / stated_Hz - 1)).toBeLessThan(1e-5);
				expect(recording.channels.map(({ name }) => name)).toEqual(waveform.channels.map(({ name }) => name));
				for (const [index, written] of waveform.channels.entries()) {
					const ours = recording.channels[index];
					expect(ours?.unitAsWritten).toBe(written.unitAsWritten);
					expect(ours?.phaseHint).toBe(written.phaseHint);
					for (const [n, sample] of written.samples.entries()) {
						const value = ours?.samples[n] as number;
						if (Number.isNaN(sample)) expect(value).toBeNaN();
						else expect(Math.abs(value - sample)).toBeLessThanOrEqual(DIGITS_9 * Math.abs(sample));
					}
				}
				if (layout.time === 'stamps')
					expect(recording.start).toEqual({
						local: '2024-03-05T10:20:30.123456000',
						utcOffset_min: waveform.start.utcOffset_min
					});
			}),
			{ seed: PINNED_SEED, numRuns: 25 }
		);
	});
});

/** Everything that the writer can vary beside separator and decimal sign. */
const forms = fc
	.record({
		separator: fc.constantFrom(',' as const, ';' as const, '\t' as const, '|' as const, ' ' as const),
		decimal: fc.constantFrom('.' as const, ',' as const),
		grouping: fc.constantFrom('' as const, ' ' as const, "'" as const, ',' as const, '.' as const),
		unitsRow: fc.boolean(),
		preamble: fc.constantFrom(
			[],
			['Recorder 1'],
			['Export of the recorder', '', 'Serial number: 1234', 'Firmware: 5.6']
		),
		encoding: fc.constantFrom(
			'utf-8' as const,
			'utf-8-mark' as const,
			'utf-16le' as const,
			'utf-16be' as const
		),
		lineEnd: fc.constantFrom('\r\n' as const, '\n' as const, '\r' as const)
	})
	.filter(({ separator, decimal, grouping }) => separator !== decimal && grouping !== decimal)
	// Two columns of a comma each cannot be told from one of grouped digits.
	.filter(({ separator, grouping }) => separator !== grouping);

/** Enough of a wave that its separators and grouped digits are seen, and none of its values in doubt. */
const wave = {
	stationName: '',
	recorderName: '',
	nominalFrequency_Hz: 50,
	start: { local: '2024-03-15T15:21:43.125', utcOffset_min: null },
	sampleCount: 60,
	segments: [{ samplingRate_Hz: 8000, fromSample: 0, toSample: 60 }],
	statusChannelNames: [],
	channels: [
		{ name: 'U_L1', phaseHint: 'L1' as const, unitAsWritten: 'V', amplitude: 16_330 },
		{ name: 'I_L1', phaseHint: 'L1' as const, unitAsWritten: 'mA', amplitude: 2.5 }
	].map(({ amplitude, ...channel }) => ({
		...channel,
		samples: Float64Array.from(
			{ length: 60 },
			(_, n) => amplitude * Math.sin((2 * Math.PI * 50 * n) / 8000 + 0.3)
		),
		valuesAre: 'primary' as const,
		ratio: null
	}))
};

describe('every form of a waveform that can be written', () => {
	const times = fc.oneof(
		fc
			.constantFrom(
				'seconds' as const,
				'milliseconds' as const,
				'microseconds' as const,
				'rate-line' as const
			)
			.map((time) => ({ time })),
		fc
			.constantFrom(
				'year-first' as const,
				'year-first-t' as const,
				'day-first' as const,
				'month-first' as const,
				'date-and-clock' as const,
				'half-day' as const,
				'epoch-s' as const
			)
			.map((stamp) => ({ time: 'stamps' as const, stamp }))
	);

	it('is read by the guess, and again by the guess told as a layout', () => {
		fc.assert(
			fc.property(forms, times, (form, time) => {
				const file = writeDelimitedWaveform(wave as never, { ...form, ...time, stem: 'x' });
				const recording = read(file);
				if (recording.kind !== 'waveform') throw new Error('taken for a trend');
				expect(recording.sampleCount).toBe(60);
				expect(Math.abs((recording.segments[0]?.samplingRate_Hz as number) / 8000 - 1)).toBeLessThan(1e-4);
				for (const [index, channel] of wave.channels.entries()) {
					expect(recording.channels[index]).toMatchObject({
						name: channel.name,
						phaseHint: 'L1',
						unitAsWritten: channel.unitAsWritten
					});
					for (const [n, sample] of channel.samples.entries())
						expect(Math.abs((recording.channels[index]!.samples[n] as number) - sample)).toBeLessThanOrEqual(
							DIGITS_9 * Math.abs(sample)
						);
				}
				if (time.time === 'stamps')
					expect(recording.start?.local.slice(0, 23)).toBe('2024-03-15T15:21:43.125');
				const guess = guessTableOf(handleOf(file));
				const layout = toldLayoutSchema.parse(JSON.parse(JSON.stringify(guess?.layout)));
				const told = readDelimitedText([file], { layout });
				expect(told).toMatchObject({
					ok: true,
					value: { segments: recording.segments, channels: recording.channels, start: recording.start }
				});
			}),
			{ seed: PINNED_SEED, numRuns: 80 }
		);
	});
});

function series(
	quantity: TrendSeries['quantity'],
	phaseHint: TrendSeries['phaseHint'],
	measure: TrendSeries['measure'],
	unit: TrendSeries['unit'],
	values: number[]
): TrendSeries {
	return { name: '', quantity, phaseHint, measure, unit, values: Float64Array.from(values) };
}

const week: TrendToWrite = {
	start: { local: '2024-03-04T00:00:00', utcOffset_min: 60 },
	intervalStarts_s: Float64Array.from({ length: 1008 }, (_, n) => n * 600),
	flagged: Uint8Array.from({ length: 1008 }, (_, n) => (n === 17 || n === 900 ? 1 : 0)),
	series: [
		series(
			'voltage',
			'L1',
			{ kind: 'rms' },
			'V',
			Array.from({ length: 1008 }, (_, n) => 230 + Math.sin(n / 50))
		),
		series(
			'voltage',
			'L1L2',
			{ kind: 'order', order: 5 },
			'percent-of-fundamental',
			Array.from({ length: 1008 }, (_, n) => 3 + (n % 7) / 10)
		),
		series(
			'voltage',
			'L2',
			{ kind: 'thd' },
			'percent-of-fundamental',
			Array.from({ length: 1008 }, () => 4.25)
		),
		series(
			'current',
			'N',
			{ kind: 'order', order: 3 },
			'A',
			Array.from({ length: 1008 }, (_, n) => (n === 5 ? NaN : 12.5))
		),
		series(
			'current',
			'L3',
			{ kind: 'order', order: 50 },
			'A',
			Array.from({ length: 1008 }, () => 0.0125)
		),
		series(
			'voltage',
			null,
			{ kind: 'frequency' },
			'Hz',
			Array.from({ length: 1008 }, () => 49.987)
		)
	]
};

describe('every form of a trend that can be written', () => {
	const stamps = fc.constantFrom(
		'year-first' as const,
		'year-first-t' as const,
		'day-first' as const,
		'month-first' as const,
		'date-and-clock' as const,
		'half-day' as const,
		'epoch-s' as const,
		'epoch-ms' as const
	);

	it('is read by the guess', () => {
		fc.assert(
			fc.property(forms, stamps, (form, stamp) => {
				const zoned = stamp !== 'half-day';
				const log = {
					...week,
					start: { local: '2024-03-14T23:50:00', utcOffset_min: zoned ? 60 : null },
					intervalStarts_s: week.intervalStarts_s.slice(0, 40),
					flagged: week.flagged?.slice(0, 40) ?? null,
					// Five figures before the decimal sign: grouped digits are seen.
					series: week.series.map((one, at) => ({
						...one,
						values: at === 0 ? one.values.map((value) => 50 * value).slice(0, 40) : one.values.slice(0, 40)
					}))
				};
				const trend = read(writeDelimitedTrend(log, { ...form, stamp, stem: 'log' }));
				if (trend.kind !== 'trend') throw new Error('taken for a waveform');
				expect(trend.interval_s).toBe(600);
				expect([...trend.intervalStarts_s]).toEqual([...log.intervalStarts_s]);
				expect([...(trend.flagged ?? [])]).toEqual([...(log.flagged ?? [])]);
				const isCounted = stamp === 'epoch-s' || stamp === 'epoch-ms';
				expect(trend.start).toEqual(
					isCounted ? { local: '2024-03-14T22:50:00', utcOffset_min: 0 } : { ...log.start }
				);
				expect(trend.series.map(({ measure, unit, phaseHint }) => [measure, unit, phaseHint])).toEqual(
					log.series.map(({ measure, unit, phaseHint }) => [measure, unit, phaseHint])
				);
				for (const [index, { values }] of log.series.entries())
					for (const [n, value] of values.entries()) {
						const ours = trend.series[index]?.values[n] as number;
						if (Number.isNaN(value)) expect(ours).toBeNaN();
						else expect(Math.abs(ours - value)).toBeLessThanOrEqual(5.1e-6 * Math.abs(value));
					}
			}),
			{ seed: PINNED_SEED, numRuns: 60 }
		);
	});
});

describe('a trend written as delimited text and read again', () => {
	it.each(LAYOUTS)('separator $separator, decimal $decimal', (layout) => {
		const trend = read(writeDelimitedTrend(week, { ...layout, stem: 'week' }));
		if (trend.kind !== 'trend') throw new Error('taken for a waveform');
		expect(trend.interval_s).toBe(600);
		expect(trend.start).toEqual(week.start);
		expect([...trend.intervalStarts_s]).toEqual([...week.intervalStarts_s]);
		expect([...(trend.flagged ?? [])]).toEqual([...(week.flagged ?? [])]);
		expect(trend.remarks).toEqual([]);
		const meaning = ({ quantity, phaseHint, measure, unit }: TrendSeries) => ({
			quantity,
			phaseHint,
			measure,
			unit
		});
		expect(trend.series.map(meaning)).toEqual(week.series.map(meaning));
		for (const [index, { values }] of week.series.entries())
			for (const [n, value] of values.entries()) {
				const ours = trend.series[index]?.values[n] as number;
				if (Number.isNaN(value)) expect(ours).toBeNaN();
				// Six significant digits are written.
				else expect(Math.abs(ours - value)).toBeLessThanOrEqual(5.1e-6 * value);
			}
	});

	it('keeps a gap as a larger step', () => {
		const starts = Float64Array.of(0, 600, 1200, 4800, 5400);
		const short = { ...week, flagged: null, intervalStarts_s: starts };
		const trend = read(writeDelimitedTrend(short, { stem: 'gap' }));
		if (trend.kind !== 'trend') throw new Error('taken for a waveform');
		expect([...trend.intervalStarts_s]).toEqual([...starts]);
		expect(trend.flagged).toBeNull();
		expect(trend.remarks.map(({ code }) => code)).toEqual(['trend-gaps']);
		expect(trend.remarks[0]?.sentence).toBe(
			'gap.csv: 5 intervals of 600 s are missing in one place; they count as no data.'
		);
	});
});
