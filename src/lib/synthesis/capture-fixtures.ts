import type { CaptureFile, TrendSeries } from '../recording/recording';
import { writeComtrade } from './comtrade-writer';
import type { WaveformChannelToWrite, WaveformToWrite } from './comtrade-writer-header';
import { writeWav } from './wav-writer';
import { writeDelimitedTrend, writeDelimitedWaveform, type TrendToWrite } from './delimited-text-writer';

/** Peak of the fundamental and percent of it at the orders of a six-pulse spectrum, rounded. */
const VOLTAGE = { peak: 391.9, orders: { 5: 3, 7: 2, 11: 1 } as Record<number, number> };
const CURRENT = { peak: 480, orders: { 5: 28, 7: 10, 11: 7, 13: 4 } as Record<number, number> };

const SHIFTS: [string, 'L1' | 'L2' | 'L3', number][] = [
	['A', 'L1', 0],
	['B', 'L2', -120],
	['C', 'L3', 120]
];

function samples(
	shape: { peak: number; orders: Record<number, number> },
	shift_deg: number,
	sampleCount: number,
	samplesPerCycle: number
): Float64Array {
	return Float64Array.from({ length: sampleCount }, (_, n) => {
		const angle = 2 * Math.PI * (n / samplesPerCycle + shift_deg / 360);
		const harmonics = Object.entries(shape.orders).reduce(
			(sum, [order, percent]) => sum + (percent / 100) * Math.sin(Number(order) * angle),
			0
		);
		return shape.peak * (Math.sin(angle) + harmonics);
	});
}

/** Twelve cycles of 60 Hz at 64 samples per cycle, four-wire, primary values, six channels. */
function fourWireCapture(): WaveformToWrite {
	const samplesPerCycle = 64;
	const sampleCount = 12 * samplesPerCycle;
	const channel = (
		symbol: 'V' | 'I',
		[letter, phaseHint, shift_deg]: (typeof SHIFTS)[number]
	): WaveformChannelToWrite => ({
		name: `${symbol}${letter}`,
		phaseHint,
		unitAsWritten: symbol === 'V' ? 'V' : 'A',
		valuesAre: 'primary',
		ratio: symbol === 'V' ? { primary: 1, secondary: 1 } : { primary: 800, secondary: 5 },
		samples: samples(symbol === 'V' ? VOLTAGE : CURRENT, shift_deg, sampleCount, samplesPerCycle)
	});
	return {
		stationName: 'Bellwether Cold Store',
		recorderName: 'Fixture',
		nominalFrequency_Hz: 60,
		start: { local: '2024-03-05T10:20:30.000000', utcOffset_min: -300 },
		sampleCount,
		segments: [{ samplingRate_Hz: 60 * samplesPerCycle, fromSample: 0, toSample: sampleCount }],
		channels: [...SHIFTS.map((shift) => channel('V', shift)), ...SHIFTS.map((shift) => channel('I', shift))]
	};
}

/** One day of ten-minute values of one phase: rms, fifth order, THD; two flagged intervals and one without data. */
function dayOfTrend(): TrendToWrite {
	const count = 144;
	const series = (
		quantity: TrendSeries['quantity'],
		measure: TrendSeries['measure'],
		unit: TrendSeries['unit'],
		valueOf: (interval: number) => number
	): TrendSeries => ({
		name: '',
		quantity,
		phaseHint: 'L1',
		measure,
		unit,
		values: Float64Array.from({ length: count }, (_, interval) => (interval === 50 ? NaN : valueOf(interval)))
	});
	const slow = (interval: number) => Math.sin((2 * Math.PI * interval) / count);
	return {
		start: { local: '2024-03-05T00:00:00', utcOffset_min: null },
		intervalStarts_s: Float64Array.from({ length: count }, (_, interval) => interval * 600),
		flagged: Uint8Array.from({ length: count }, (_, interval) =>
			interval === 12 || interval === 97 ? 1 : 0
		),
		series: [
			series('voltage', { kind: 'rms' }, 'V', (interval) => 230 + 3 * slow(interval)),
			series(
				'voltage',
				{ kind: 'order', order: 5 },
				'percent-of-fundamental',
				(interval) => 3 + slow(interval)
			),
			series('voltage', { kind: 'thd' }, 'percent-of-fundamental', (interval) => 4 + slow(interval)),
			series('current', { kind: 'order', order: 5 }, 'A', (interval) => 20 + 5 * slow(interval))
		]
	};
}

/** What 1.0 means in the channels of the WAV fixture. */
export const WAV_FULL_SCALE = { voltage_V: 500, current_A: 800 };

/** The same six channels as parts of full scale, with texts and a start. */
function soundFixture(waveform: WaveformToWrite): CaptureFile {
	return writeWav(
		{
			samplingRate_Hz: waveform.segments[0]!.samplingRate_Hz,
			channels: waveform.channels.map(({ samples: values, unitAsWritten }) => {
				const fullScale = unitAsWritten === 'V' ? WAV_FULL_SCALE.voltage_V : WAV_FULL_SCALE.current_A;
				return values.map((value) => value / fullScale);
			})
		},
		{
			stem: 'four-wire-24-bit',
			samples: 'int24',
			extensible: true,
			strangeChunks: true,
			info: {
				ICMT: 'Channels 1 to 3: voltage, 500 V full scale. Channels 4 to 6: current, 800 A full scale.'
			},
			broadcast: { description: 'Fixture', originator: 'Fixture', local: '2024-03-05T10:20:30.000000' }
		}
	);
}

/** The same as a combined ASCII file with status channels, notes and a clock that had lost its source. */
function statusFixture(waveform: WaveformToWrite): CaptureFile[] {
	return writeComtrade(
		{
			...waveform,
			statusChannelNames: ['Breaker closed', 'Capacitor step 2'],
			statusStates: [
				new Uint8Array(waveform.sampleCount).fill(1),
				Uint8Array.from({ length: waveform.sampleCount }, (_, n) => (n >= 384 ? 1 : 0))
			],
			normalStates: [1, 0]
		},
		{
			revision: '2013',
			dataFormat: 'ASCII',
			stem: 'four-wire-2013-status',
			combined: true,
			clock: { localOffset_min: -300, quality: '6', leapSecond: 0 },
			notes: { hdr: 'Step 2 of the capacitor bank is switched in after 0.1 s.' }
		}
	);
}

/** The small captures kept under fixtures/captures, made anew from their known truth. */
export function captureFixtures(): CaptureFile[] {
	const waveform = fourWireCapture();
	return [
		...writeComtrade(waveform, { revision: '1999', dataFormat: 'BINARY', stem: 'four-wire-1999-binary' }),
		...writeComtrade(waveform, { revision: '1999', dataFormat: 'ASCII', stem: 'four-wire-1999-ascii' }),
		...writeComtrade(waveform, {
			revision: '2013',
			dataFormat: 'FLOAT32',
			stem: 'four-wire-2013-float32',
			combined: true
		}),
		...statusFixture(waveform),
		soundFixture(waveform),
		writeDelimitedWaveform(waveform, {
			stem: 'four-wire-decimal-comma',
			separator: ';',
			decimal: ',',
			digits: 7
		}),
		writeDelimitedTrend(dayOfTrend(), { stem: 'one-day-ten-minutes' })
	];
}
