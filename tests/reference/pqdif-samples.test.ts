import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { handleOf } from '$lib/recording/capture-handle';
import { loadSamples } from '$lib/recording/load-samples';
import { openCaptureParts } from '$lib/recording/read-capture';
import type { Recording, Trend, TrendSeries } from '$lib/recording/recording';
import { rootMeanSquare } from '$lib/numerics/stats/root-mean-square';
import {
	expectedFiles,
	samplesArePresent,
	samplesFolder,
	skipReason,
	type ExpectedSamples
} from './sample-files';

// Source of every expected figure: ../shared/samples/expected.json, made by an independent numpy reader.

interface ExpectedWaveform {
	observation: number;
	channel: string;
	fs_hz: number;
	all_samples: ExpectedSamples;
}
interface ExpectedLog {
	n: number;
	mean: number;
	min: number;
	max: number;
	p95: number;
	p99: number;
}
interface ExpectedPqdif {
	observation_kinds: Record<string, number>;
	waveforms: ExpectedWaveform[];
	trend: Record<string, ExpectedLog>;
	first_observation_start: string;
}

function expectedOf(path: string): ExpectedPqdif {
	return expectedFiles()[path] as unknown as ExpectedPqdif;
}

function parts(path: string) {
	const read = openCaptureParts([
		handleOf({ name: path, bytes: new Uint8Array(readFileSync(join(samplesFolder, path))) })
	]);
	if (!read.ok) throw new Error(read.problem.sentence);
	return read.value;
}

function waveformsAndTrend(path: string): { recording: Recording; trend: Trend } {
	const read = parts(path);
	const waveforms = read.find(({ content }) => content.kind === 'waveform')!.content;
	const trend = read.find(({ content }) => content.kind === 'trend')!.content;
	if (waveforms.kind !== 'waveform' || trend.kind !== 'trend') throw new Error('both kinds were expected');
	return { recording: loadSamples(waveforms), trend };
}

const WHOLE = [
	'pqdif/events_and_trends_zlib.pqd',
	'derived/pqdif/events_and_trends_plain.pqd',
	'derived/pqdif/events_and_trends_zero_checksum.pqd'
];

/** The stretch of a recording that one observation gave: found by its length and its first sample. */
function stretchOf(recording: Recording, expected: ExpectedWaveform): Float64Array | undefined {
	const channel = recording.channels.find(({ name }) => name === expected.channel)!;
	const rowsPerSample = recording.segments[0]!.samplingRate_Hz / expected.fs_hz;
	for (const { fromSample, toSample } of recording.segments) {
		const values = channel.samples.slice(fromSample, toSample).filter((_, row) => row % rowsPerSample === 0);
		const [first] = expected.all_samples.first3;
		if (values.length === expected.all_samples.n && Math.abs(values[0]! / first! - 1) < 1e-5) return values;
	}
	return undefined;
}

describe.skipIf(!samplesArePresent)(`PQDIF files of other makers${skipReason}`, () => {
	it.each(WHOLE)('%s gives the waveforms of an independent reader, at their own instants', (path) => {
		const { recording } = waveformsAndTrend(path);
		const expected = expectedOf(path);
		// 20 observations hold waveforms; twice one begins at the instant of another, by their own start times.
		expect(recording.segments).toHaveLength(18);
		expect(recording.remarks.map(({ code }) => code)).toContain('pqdif-overlap');
		for (const waveform of expected.waveforms) {
			const values = stretchOf(recording, waveform);
			expect(values, `${waveform.channel} of observation ${waveform.observation}`).toBeDefined();
			const { mean, rms, min, max, last } = waveform.all_samples;
			// Figures are printed to seven digits.
			const tolerance = 1e-6 * Math.max(Math.abs(min), Math.abs(max));
			const near = (ours: number, theirs: number) =>
				expect(Math.abs(ours - theirs)).toBeLessThanOrEqual(tolerance);
			near(values!.reduce((sum, value) => sum + value, 0) / values!.length, mean);
			near(rootMeanSquare(values!), rms);
			near(Math.min(...values!), min);
			near(Math.max(...values!), max);
			near(values!.at(-1)!, last);
		}
	});

	it.each(WHOLE)('%s gives the logged values of an independent reader', (path) => {
		const { trend } = waveformsAndTrend(path);
		const expected = expectedOf(path);
		expect(trend.interval_s).toBe(900);
		for (const [name, figures] of Object.entries(expected.trend)) {
			if (typeof figures === 'number') continue;
			const [, channel, kind] = /^(.*) (min|max|avg)$/.exec(name)!;
			const found: TrendSeries | undefined =
				kind === 'avg'
					? trend.series.find((series) => series.name === channel)
					: trend.extremes!.find((series) => series.name === `${channel} ${kind}`);
			const values = found!.values.filter((value) => !Number.isNaN(value));
			expect(values.length).toBe(figures.n);
			const near = (ours: number, theirs: number) => expect(Math.abs(ours / theirs - 1)).toBeLessThan(1e-6);
			near(values.reduce((sum, value) => sum + value, 0) / values.length, figures.mean);
			near(Math.min(...values), figures.min);
			near(Math.max(...values), figures.max);
		}
		expect(trend.start).toEqual({
			local: expectedOf(WHOLE[0]!).first_observation_start.replace(' ', 'T'),
			utcOffset_min: 0
		});
	});

	it('keeps what the file says of conductors, and no ratio where it states none', () => {
		const { recording, trend } = waveformsAndTrend(WHOLE[0]!);
		expect(recording.channels.map(({ name, phaseHint, quantity }) => [name, phaseHint, quantity])).toEqual([
			['Waveform VAB', 'L1L2', 'voltage'],
			['Waveform VBC', 'L2L3', 'voltage'],
			['Waveform VCA', 'L3L1', 'voltage'],
			['Waveform IA', 'L1', 'current'],
			['Waveform IB', 'L2', 'current'],
			['Waveform IC', 'L3', 'current']
		]);
		expect(recording.channels[0]).toMatchObject({ valuesAre: 'unknown', ratio: null, unitAsWritten: 'V' });
		expect(trend.series.map(({ phaseHint }) => phaseHint)).toEqual([
			'L1L2',
			'L2L3',
			'L3L1',
			'L1',
			'L2',
			'L3'
		]);
	});

	it('says that checksums are wrong only where they are', () => {
		for (const path of WHOLE)
			expect(parts(path)[0]!.content.remarks.map(({ code }) => code)).not.toContain('pqdif-checksum');
		const bytes = new Uint8Array(readFileSync(join(samplesFolder, WHOLE[1]!)));
		bytes[bytes.length - 40]! ^= 1;
		const read = openCaptureParts([handleOf({ name: 'changed.pqd', bytes })]);
		expect(read.ok && read.value[0]!.content.remarks.map(({ code }) => code)).toContain('pqdif-checksum');
	});

	it('reads a cut file up to the cut and says where it ends', () => {
		const read = parts('derived/pqdif/truncated.pqd');
		const remark = read[0]!.content.remarks.find(({ code }) => code === 'pqdif-truncated')!;
		expect(remark.sentence).toMatch(
			/ends at byte 274085, in the middle of the record at byte 272329: 12508 bytes/
		);
		expect(read.map(({ title }) => title)).toEqual(['Waveforms, 15.36 kHz', '15-minute values']);
	});
});
