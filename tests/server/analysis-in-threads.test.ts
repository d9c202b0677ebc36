import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { analyseCapture } from '$lib/harmonics/analyse-waveform';
import type { ChannelMapping, WaveformWindows } from '$lib/harmonics/waveform-analysis';
import { loadSamples } from '$lib/recording/load-samples';
import { openCapture } from '$lib/recording/read-capture';
import type { CaptureFile } from '$lib/recording/recording';
import { sourceOf } from '$lib/recording/sample-source';
import { analyseInThreads, threadCapture } from '$lib/server/analysis/pool/analyse-in-threads';
import { createWindowPool } from '$lib/server/analysis/pool/window-pool';
import { openFileHandle } from '$lib/server/storage/file-handle';
import { createScratchFolder } from '$lib/server/storage/scratch-folder';
import { writeComtrade } from '$lib/synthesis/comtrade-writer';
import { writeWav } from '$lib/synthesis/wav-writer';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { threePhaseChannels } from '$lib/synthesis/waveform-three-phase';

const root = mkdtempSync(join(tmpdir(), 'sinewright-threads-'));
const pool = createWindowPool(resolve('src/lib/server/analysis/pool/window-thread.ts'));
afterAll(async () => {
	await pool.close();
	rmSync(root, { recursive: true });
});

/** A minute of a point, 4 seconds of which are made and then repeated, in binary files on disk. */
function openOnDisk() {
	const recording = synthesiseRecording({
		frequency_Hz: 50,
		samplingRate_Hz: 6400,
		duration_s: 4,
		seed: 2,
		channels: threePhaseChannels({
			voltage_V: 230,
			voltageHarmonics: [{ order: 5, magnitude_pctOfFundamental: 3, phase_deg: 40 }],
			current_A: 100,
			currentHarmonics: [{ order: 7, magnitude_pctOfFundamental: 14, phase_deg: -30 }],
			lag_deg: 20,
			withNeutral: true
		})
	});
	for (const channel of recording.channels) {
		const once = channel.samples;
		channel.samples = new Float64Array(15 * once.length);
		for (let i = 0; i < 15; i++) channel.samples.set(once, i * once.length);
	}
	const sampleCount = recording.channels[0]!.samples.length;
	const files = writeComtrade(
		{
			...recording,
			sampleCount,
			segments: [{ samplingRate_Hz: 6400, fromSample: 0, toSample: sampleCount }],
			start: { local: '2026-03-10T09:59:30.000000', utcOffset_min: 0 }
		},
		{ revision: '2013', dataFormat: 'BINARY', stem: 'minute' }
	);
	const handles = files.map((file) => {
		writeFileSync(join(root, file.name), file.bytes);
		return openFileHandle(file.name, join(root, file.name));
	});
	const opened = openCapture(handles);
	if (!opened.ok || opened.value.kind !== 'waveform') throw new Error('not read');
	const mappings = recording.channels.map((channel): ChannelMapping => ({
		channelIndex: channel.index,
		quantity: channel.quantity === 'voltage' ? 'voltage' : 'current',
		phase: channel.phaseHint!,
		toPrimary: 1
	}));
	return { source: opened.value, mappings, close: () => handles.forEach((handle) => handle.close()) };
}

describe('windows turned into figures by threads', () => {
	it('give the figures of a single thread, digit for digit', async () => {
		const { source, mappings, close } = openOnDisk();
		const options = {
			nominalFrequency_Hz: 50,
			nominalVoltages_V: { L1: 230, L2: 230, L3: 230 },
			start_ms: Date.UTC(2026, 2, 10, 9, 59, 30)
		} as const;
		const alone: WaveformWindows[] = [];
		const steps = analyseCapture(source, mappings, options, (span) => alone.push(span));
		let step = steps.next();
		while (!step.done) step = steps.next();

		const together: WaveformWindows[] = [];
		const capture = threadCapture(source)!;
		const running = analyseInThreads(source, capture, pool, mappings, options, (span) => together.push(span));
		let turn = await running.next();
		while (!turn.done) turn = await running.next();
		close();
		expect(together.length).toBe(2);
		expect(together).toEqual(alone);
		expect(turn.value).toEqual(step.value);
	});
});

/** Two conductors of a point for six seconds, as files of every kind whose rows do not begin at byte 0 of a data file. */
function filesOf(form: string): CaptureFile[] {
	const recording = synthesiseRecording({
		frequency_Hz: 50.04,
		samplingRate_Hz: 6400,
		duration_s: 6,
		seed: 5,
		channels: threePhaseChannels({
			voltage_V: 230,
			voltageHarmonics: [{ order: 5, magnitude_pctOfFundamental: 3, phase_deg: 40 }],
			current_A: 100,
			currentHarmonics: [{ order: 7, magnitude_pctOfFundamental: 14, phase_deg: -30 }],
			lag_deg: 20,
			withNeutral: false
		})
	});
	const start = { local: '2026-03-10T09:30:00.000000', utcOffset_min: 0 };
	const { channels } = recording;
	switch (form) {
		case 'ASCII in scratch':
			return writeComtrade({ ...recording, start }, { revision: '2013', dataFormat: 'ASCII', stem: 'a' });
		case 'FLOAT32 inside a combined file':
			return writeComtrade(
				{ ...recording, start },
				{ revision: '2013', dataFormat: 'FLOAT32', stem: 'f', combined: true }
			);
		default:
			return [
				writeWav(
					{
						samplingRate_Hz: 6400,
						channels: channels.map(({ samples }) => samples.map((value) => value / 500))
					},
					{ stem: 'w', samples: 'int24', strangeChunks: true }
				)
			];
	}
}

describe.each(['ASCII in scratch', 'FLOAT32 inside a combined file', 'WAV of 24 bits'])('%s', (form) => {
	it('gives the figures of memory in threads, digit for digit', async () => {
		const folder = mkdtempSync(join(root, 'form-'));
		const scratch = createScratchFolder(join(folder, 'scratch'));
		const handles = filesOf(form).map((file) => {
			writeFileSync(join(folder, file.name), file.bytes);
			return openFileHandle(file.name, join(folder, file.name));
		});
		const opened = openCapture(handles, { scratch });
		if (!opened.ok || opened.value.kind !== 'waveform') throw new Error('not read');
		const source = opened.value;
		const mappings = source.channels.map(({ index }): ChannelMapping => ({
			channelIndex: index,
			quantity: index < 3 ? 'voltage' : 'current',
			phase: (['L1', 'L2', 'L3'] as const)[index % 3]!,
			toPrimary: form.startsWith('WAV') ? 500 : 1
		}));
		const options = { nominalFrequency_Hz: 50 } as const;
		const inMemory: WaveformWindows[] = [];
		const memory = sourceOf(loadSamples(source));
		expect(memory.samples.kind).toBe('memory');
		const steps = analyseCapture(memory, mappings, options, (span) => inMemory.push(span));
		let step = steps.next();
		while (!step.done) step = steps.next();
		const together: WaveformWindows[] = [];
		const capture = threadCapture(source);
		if (capture === null) throw new Error('threads cannot open it');
		const running = analyseInThreads(source, capture, pool, mappings, options, (span) => together.push(span));
		let turn = await running.next();
		while (!turn.done) turn = await running.next();
		for (const handle of handles) handle.close();
		scratch.close();
		expect(together).toEqual(inMemory);
		expect(together[0]!.windowCount).toBeGreaterThan(25);
		expect(turn.value).toEqual(step.value);
	});
});
