import fc from 'fast-check';
import type { RateSegment } from '$lib/recording/recording';
import type { WaveformChannelToWrite, WaveformToWrite } from '$lib/synthesis/comtrade-writer-header';

/** Every property run uses this seed, so that a failure can be repeated. */
export const PINNED_SEED = 20_240_331;

const PHASES = ['L1', 'L2', 'L3', 'N'] as const;

function channelArbitrary(index: number, sampleCount: number): fc.Arbitrary<WaveformChannelToWrite> {
	const sample = fc.oneof(
		{ weight: 12, arbitrary: fc.integer({ min: -30_000_000, max: 30_000_000 }).map((value) => value / 1000) },
		{ weight: 1, arbitrary: fc.constant(NaN) },
		{ weight: 1, arbitrary: fc.constant(0) }
	);
	return fc
		.record({
			isVoltage: fc.boolean(),
			prefix: fc.constantFrom('', 'k', 'm'),
			values: fc.array(sample, { minLength: sampleCount, maxLength: sampleCount }),
			valuesAre: fc.constantFrom('primary' as const, 'secondary' as const),
			ratio: fc.constantFrom({ primary: 100, secondary: 5 }, { primary: 13.8, secondary: 0.12 })
		})
		.map(({ isVoltage, prefix, values, valuesAre, ratio }) => ({
			name: `${isVoltage ? 'U' : 'I'}_${PHASES[index % 4]}`,
			phaseHint: PHASES[index % 4] as (typeof PHASES)[number],
			unitAsWritten: `${prefix}${isVoltage ? 'V' : 'A'}`,
			samples: Float64Array.from(values),
			valuesAre,
			ratio
		}));
}

function segmentsOf(sampleCount: number, rates: readonly number[]): RateSegment[] {
	const share = Math.floor(sampleCount / rates.length);
	return rates.map((samplingRate_Hz, index) => ({
		samplingRate_Hz,
		fromSample: index * share,
		toSample: index === rates.length - 1 ? sampleCount : (index + 1) * share
	}));
}

/** Small waveforms of every kind that the writers can express. */
export const waveformArbitrary: fc.Arbitrary<WaveformToWrite> = fc
	.record({
		sampleCount: fc.integer({ min: 2, max: 40 }),
		channelCount: fc.integer({ min: 1, max: 5 }),
		statusCount: fc.constantFrom(0, 1, 16, 17),
		rates: fc.constantFrom([10_240], [50_000], [7_680, 15_360]),
		utcOffset_min: fc.constantFrom(null, 0, -330, 120),
		statusSeed: fc.nat(1000)
	})
	.chain(({ sampleCount, channelCount, statusCount, rates, utcOffset_min, statusSeed }) =>
		fc
			.tuple(...Array.from({ length: channelCount }, (_, index) => channelArbitrary(index, sampleCount)))
			.map((channels) => ({
				stationName: 'Ostler Lane',
				recorderName: 'Recorder 1',
				nominalFrequency_Hz: 60,
				start: { local: '2024-03-05T10:20:30.123456', utcOffset_min },
				sampleCount,
				segments: segmentsOf(sampleCount, rates),
				channels,
				statusChannelNames: Array.from({ length: statusCount }, (_, index) => `D${index + 1}`),
				// A third of the channels never change; the others turn over every few samples.
				statusStates: Array.from({ length: statusCount }, (_, index) =>
					Uint8Array.from({ length: sampleCount }, (__, n) =>
						(statusSeed + index) % 3 === 0 ? index % 2 : Math.floor((n + statusSeed) / (3 + index)) % 2
					)
				),
				normalStates: Array.from({ length: statusCount }, (_, index) => (index % 2) as 0 | 1)
			}))
	);
