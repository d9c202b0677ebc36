import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { handleOf } from '$lib/recording/capture-handle';
import { loadSamples } from '$lib/recording/load-samples';
import { openCaptureParts, readCapture } from '$lib/recording/read-capture';
import type { CaptureFile, Recording, Trend, TrendSeries } from '$lib/recording/recording';
import { writePqdifTrend, writePqdifWaveform, type PqdifWriteOptions } from '$lib/synthesis/pqdif-writer';

const options: fc.Arbitrary<PqdifWriteOptions> = fc.record({
	stem: fc.constant('made'),
	compression: fc.constantFrom('none', 'records', 'whole'),
	checksums: fc.constantFrom('adler', 'crc', 'none'),
	values: fc.constantFrom('plain', 'scaled'),
	times: fc.constantFrom('listed', 'increment')
});

function contentOf(file: CaptureFile): Recording | Trend {
	const read = openCaptureParts([handleOf(file)]);
	if (!read.ok) throw new Error(read.problem.sentence);
	expect(read.value).toHaveLength(1);
	const { content } = read.value[0]!;
	return content.kind === 'trend' ? content : loadSamples(content);
}

function waveform(samples: Float64Array[], segments: Recording['segments']) {
	return {
		stationName: 'Bay 4',
		recorderName: '',
		nominalFrequency_Hz: 50,
		start: { local: '2026-03-01T12:00:00.250000', utcOffset_min: 60 },
		sampleCount: samples[0]!.length,
		segments,
		channels: samples.map((values, index) => ({
			name: index === 0 ? 'U L1' : 'I L1',
			phaseHint: 'L1' as const,
			unitAsWritten: index === 0 ? 'V' : 'A',
			valuesAre: 'secondary' as const,
			ratio: index === 0 ? { primary: 11_000, secondary: 110 } : { primary: 400, secondary: 5 },
			samples: values
		}))
	};
}

function trendSeries(measure: TrendSeries['measure'], values: Float64Array): TrendSeries {
	const unit = measure.kind === 'thd' ? 'percent-of-fundamental' : measure.kind === 'frequency' ? 'Hz' : 'V';
	return {
		name: '',
		quantity: 'voltage',
		phaseHint: measure.kind === 'frequency' ? null : 'L2',
		measure,
		unit,
		values
	};
}

/** 16-bit steps of the largest value round by half a step. */
function expectNear(ours: Float64Array, theirs: Float64Array, { values }: PqdifWriteOptions): void {
	expect(ours.length).toBe(theirs.length);
	const largest = theirs.reduce((most, value) => Math.max(most, Math.abs(value) || 0), 0);
	// Steps below the smallest ordinary double cannot be expressed.
	const tolerance = values === 'scaled' ? (0.5001 * largest) / 32_767 + 1e-300 : 0;
	for (let at = 0; at < ours.length; at++) {
		if (Number.isNaN(theirs[at]!)) expect(ours[at]).toBeNaN();
		else expect(Math.abs(ours[at]! - theirs[at]!)).toBeLessThanOrEqual(tolerance);
	}
}

describe('a PQDIF file that was written', () => {
	it('gives back its samples, stretches, sides and ratios, however it is packed', () => {
		const sample = fc.double({ min: -1e5, max: 1e5, noNaN: true });
		const columns = fc.integer({ min: 8, max: 60 }).chain((count) =>
			fc.tuple(
				fc.float64Array({ minLength: count, maxLength: count, min: -1e5, max: 1e5, noNaN: true }),
				fc.array(sample, { minLength: count, maxLength: count }).map((values) => Float64Array.from(values))
			)
		);
		fc.assert(
			fc.property(columns, options, (samples, chosen) => {
				const count = samples[0].length;
				const segments = [
					{ samplingRate_Hz: 6400, fromSample: 0, toSample: 4 },
					{ samplingRate_Hz: 6400, fromSample: 4, toSample: count, gapBefore_s: 0.5 }
				];
				const read = contentOf(writePqdifWaveform(waveform(samples, segments), chosen));
				if (read.kind !== 'waveform') throw new Error('a waveform was written');
				expect(read.start).toEqual({ local: '2026-03-01T11:00:00.250000', utcOffset_min: 0 });
				expect(read.nominalFrequency_Hz).toBe(50);
				expect(read.segments).toEqual([segments[0], { ...segments[1], gapBefore_s: expect.closeTo(0.5, 6) }]);
				expect(
					read.channels.map(({ phaseHint, quantity, valuesAre, ratio }) => [
						phaseHint,
						quantity,
						valuesAre,
						ratio
					])
				).toEqual([
					['L1', 'voltage', 'secondary', { primary: 11_000, secondary: 110 }],
					['L1', 'current', 'secondary', { primary: 400, secondary: 5 }]
				]);
				for (const [index, values] of samples.entries())
					for (const { fromSample, toSample } of segments)
						expectNear(
							read.channels[index]!.samples.subarray(fromSample, toSample),
							values.subarray(fromSample, toSample),
							chosen
						);
				expect(read.remarks.filter(({ severity }) => severity === 'warning')).toEqual([]);
			}),
			{ numRuns: 60 }
		);
	});

	it('gives back its logged values, gaps and flags', () => {
		fc.assert(
			fc.property(fc.integer({ min: 3, max: 400 }), options, (count, chosen) => {
				const starts = Float64Array.from({ length: count }, (_, i) => 600 * (i < count / 2 ? i : i + 3));
				const value = (i: number) => (i % 37 === 5 ? NaN : 230 + Math.sin(i));
				const series = [
					trendSeries(
						{ kind: 'frequency' },
						starts.map((_, i) => 50 + 0.01 * Math.cos(i))
					),
					trendSeries(
						{ kind: 'rms' },
						starts.map((_, i) => value(i))
					),
					trendSeries(
						{ kind: 'order', order: 1 },
						starts.map((_, i) => 229 + Math.cos(i))
					),
					trendSeries(
						{ kind: 'order', order: 5 },
						starts.map((_, i) => 8 + Math.cos(i))
					),
					trendSeries(
						{ kind: 'thd' },
						starts.map((_, i) => 4 + Math.cos(i))
					)
				];
				const flagged = Uint8Array.from(starts, (_, i) => (i % 50 === 1 ? 1 : 0));
				const written = {
					start: { local: '2026-03-01T00:00:00', utcOffset_min: 0 },
					intervalStarts_s: starts,
					flagged,
					series
				};
				const read = contentOf(writePqdifTrend(written, chosen));
				if (read.kind !== 'trend') throw new Error('a trend was written');
				expect(read.interval_s).toBe(600);
				expect([...read.intervalStarts_s]).toEqual([...starts]);
				expect([...read.flagged!]).toEqual([...flagged]);
				expect(read.series.map(({ measure, unit, phaseHint }) => ({ measure, unit, phaseHint }))).toEqual(
					series.map(({ measure, unit, phaseHint }) => ({ measure, unit, phaseHint }))
				);
				for (const [index, { values }] of series.entries())
					expectNear(read.series[index]!.values, values, chosen);
			}),
			{ numRuns: 40, examples: [[400, { stem: 'made', compression: 'records', times: 'increment' }]] }
		);
	});
});

describe('a PQDIF file with changed bytes', () => {
	it('is read or refused with a sentence that names it, and never throws', () => {
		const samples = [new Float64Array(64).fill(325), new Float64Array(64).fill(5)];
		const plain = writePqdifWaveform(
			waveform(samples, [{ samplingRate_Hz: 6400, fromSample: 0, toSample: 64 }]),
			{ stem: 'made' }
		);
		const packed = writePqdifWaveform(
			waveform(samples, [{ samplingRate_Hz: 6400, fromSample: 0, toSample: 64 }]),
			{ stem: 'made', compression: 'records' }
		);
		const change = fc.tuple(fc.nat({ max: plain.bytes.length - 1 }), fc.integer({ min: 0, max: 255 }));
		fc.assert(
			fc.property(
				fc.constantFrom(plain, packed),
				fc.array(change, { minLength: 1, maxLength: 6 }),
				fc.nat(),
				(file, changes, cut) => {
					const bytes = file.bytes.slice(0, cut % 3 === 0 ? cut % file.bytes.length : file.bytes.length);
					for (const [at, value] of changes) if (at < bytes.length) bytes[at] = value;
					const read = readCapture([{ name: 'changed.pqd', bytes }]);
					if (!read.ok) expect(read.problem.sentence).toContain('changed.pqd');
				}
			),
			{ numRuns: 400 }
		);
	});

	it('does not follow records in a circle', () => {
		const { bytes } = writePqdifWaveform(
			waveform([new Float64Array(8).fill(1)], [{ samplingRate_Hz: 6400, fromSample: 0, toSample: 8 }]),
			{ stem: 'made' }
		);
		const view = new DataView(bytes.buffer);
		const second = view.getInt32(40, true);
		const last = view.getInt32(view.getInt32(second + 40, true) + 40, true);
		view.setInt32(last + 40, second, true);
		const read = contentOf({ name: 'circle.pqd', bytes });
		expect(read.remarks.map(({ code }) => code)).toContain('pqdif-link-circle');
	});
});
