import type { CaptureFile, TrendSeries } from '../recording/recording';
import { writeComtrade } from './comtrade-writer';
import type { WaveformChannelToWrite, WaveformToWrite } from './comtrade-writer-header';
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
		writeDelimitedWaveform(waveform, {
			stem: 'four-wire-decimal-comma',
			separator: ';',
			decimal: ',',
			digits: 7
		}),
		writeDelimitedTrend(dayOfTrend(), { stem: 'one-day-ten-minutes' })
	];
}
