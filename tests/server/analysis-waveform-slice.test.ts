import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import type { Recording } from '$lib/recording/recording';
import { sourceOf } from '$lib/recording/sample-source';
import {
	layOutSamples,
	OVERVIEW_BLOCK,
	samplesStream,
	type SamplesLayout
} from '$lib/server/analysis/samples-blob';
import { readWaveformSlice } from '$lib/server/analysis/waveform-slice';
import { createDiskBlobStore } from '$lib/server/storage/disk-blob-store';

const root = mkdtempSync(join(tmpdir(), 'sinewright-slice-'));
const blobs = createDiskBlobStore(root);
afterAll(() => rmSync(root, { recursive: true }));

function recording(samples: Float64Array, over: Partial<Recording> = {}): Recording {
	const channel = {
		index: 0,
		name: 'U1',
		phaseHint: null,
		unitAsWritten: 'V',
		baseUnit: 'V',
		quantity: 'voltage' as const,
		samples,
		valuesAre: 'primary' as const,
		ratio: null,
		range: null
	};
	return {
		kind: 'waveform',
		format: 'COMTRADE',
		variant: '',
		stationName: '',
		recorderName: '',
		nominalFrequency_Hz: 50,
		start: null,
		sampleCount: samples.length,
		segments: [{ samplingRate_Hz: 1000, fromSample: 0, toSample: samples.length }],
		timeStamps_s: null,
		channels: [channel],
		statusChannelNames: [],
		remarks: [],
		...over
	};
}

async function store(source: Recording, toPrimary = 1): Promise<SamplesLayout> {
	const mappings = [{ channelIndex: 0, quantity: 'voltage' as const, phase: 'L1' as const, toPrimary }];
	const { sha256 } = await blobs.putStream(
		samplesStream(sourceOf(source), mappings),
		Number.MAX_SAFE_INTEGER
	);
	return { sha256, ...layOutSamples(sourceOf(source), mappings) };
}
const ask = (layout: SamplesLayout, from_s: number, to_s: number, points: number) =>
	readWaveformSlice(blobs, layout, { from_s, to_s, points }, [0]);

describe('the waveform view', () => {
	it('gives single samples, in primary values, where they are few', async () => {
		const layout = await store(recording(Float64Array.of(1, 2, 3, 4, 5)), -80);
		const slice = await ask(layout, 0.001, 0.004, 100);
		expect(slice.decimated).toBe(false);
		expect(slice.channels[0]!.points).toEqual([0.001, -160, 0.002, -240, 0.003, -320]);
	});

	it('breaks the line at missing samples instead of drawing zero', async () => {
		const layout = await store(recording(Float64Array.of(1, NaN, 3)));
		expect((await ask(layout, 0, 1, 100)).channels[0]!.points).toEqual([0, 1, 0.001, null, 0.002, 3]);
	});

	it.each([
		['from the samples', 20_000],
		['from the overview', 4_000_000]
	])('loses no peak when a long stretch is thinned %s', async (_, length) => {
		const samples = new Float64Array(length);
		samples[12_345] = 999;
		samples[length - 5] = -777;
		const layout = await store(recording(samples));
		const slice = await ask(layout, 0, length / 1000, 200);
		const values = slice.channels[0]!.points.filter((__, i) => i % 2 === 1);
		expect(slice.decimated).toBe(true);
		expect(slice.sampleCount).toBe(length);
		expect(values.length).toBeLessThanOrEqual(200);
		expect(Math.max(...(values as number[]))).toBe(999);
		expect(Math.min(...(values as number[]))).toBe(-777);
	});

	it('knows the time across a change of rate and a gap', async () => {
		const source = recording(
			Float64Array.from({ length: 8 }, (_, i) => i),
			{
				segments: [
					{ samplingRate_Hz: 1000, fromSample: 0, toSample: 4 },
					{ samplingRate_Hz: 100, fromSample: 4, toSample: 8, gapBefore_s: 1 }
				]
			}
		);
		const layout = await store(source);
		expect(layout.duration_s).toBeCloseTo(0.004 + 1 + 0.04, 12);
		expect((await ask(layout, 0.003, 1.02, 100)).channels[0]!.points).toEqual([0.003, 3, 1.004, 4, 1.014, 5]);
	});

	it('goes by time stamps where the file has no rate', async () => {
		const source = recording(Float64Array.of(5, 6, 7), {
			segments: [],
			timeStamps_s: Float64Array.of(0, 0.5, 0.6)
		});
		const layout = await store(source);
		expect((await ask(layout, 0.4, 2, 100)).channels[0]!.points).toEqual([0.5, 6, 0.6, 7]);
	});

	it('reads few bytes for a long stretch', async () => {
		const length = 1_000_000;
		const layout = await store(recording(new Float64Array(length)));
		let read_bytes = 0;
		const counting = {
			...blobs,
			readSlice: (sha256: string, offset: number, bytes: number) => {
				read_bytes += bytes;
				return blobs.readSlice(sha256, offset, bytes);
			}
		};
		await readWaveformSlice(counting, layout, { from_s: 0, to_s: 1000, points: 400 }, [0]);
		expect(read_bytes).toBeLessThan((3 * 4 * length) / OVERVIEW_BLOCK);
	});
});
