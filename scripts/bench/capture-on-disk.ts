import { closeSync, openSync, writeFileSync, writeSync } from 'node:fs';
import { join } from 'node:path';
import type { ChannelMapping } from '../../src/lib/harmonics/waveform-analysis';
import { openCapture } from '../../src/lib/recording/read-capture';
import type { CaptureSource } from '../../src/lib/recording/sample-source';
import { openFileHandle } from '../../src/lib/server/storage/file-handle';
import { writeComtrade } from '../../src/lib/synthesis/comtrade-writer';
import type { ChannelTruth } from '../../src/lib/synthesis/waveform';
import { synthesiseRecording } from '../../src/lib/synthesis/waveform-recording';
import { threePhaseChannels } from '../../src/lib/synthesis/waveform-three-phase';

export const SAMPLING_RATE_HZ = 12_800;
/** Five hundred cycles fill a whole number of samples, so that the stretch can be repeated without a seam. */
const STRETCH_SAMPLES = 127_923;
export const FREQUENCY_HZ = (500 * SAMPLING_RATE_HZ) / STRETCH_SAMPLES;
export const NOMINAL_VOLTAGES_V = { L1: 230, L2: 230, L3: 230 } as const;
/** 18 March 2026, half a minute before a ten-minute tick. */
export const START_MS = Date.UTC(2026, 2, 18, 9, 59, 30);
/** Two 32-bit numbers, then eight 16-bit values (IEEE C37.111, binary data). */
export const ROW_BYTES = 8 + 2 * 8;
/** Time stamps count microseconds in 32 bits. */
const LONGEST_S = 4294;

const orders = (levels: Record<number, number>) =>
	Object.entries(levels).map(([order, magnitude_pctOfFundamental]) => ({
		order: Number(order),
		magnitude_pctOfFundamental,
		phase_deg: (37 * Number(order)) % 360
	}));

function benchChannels(): ChannelTruth[] {
	const point = threePhaseChannels({
		voltage_V: 230,
		voltageHarmonics: orders({ 3: 1.1, 5: 3, 7: 2, 11: 1, 13: 0.7, 17: 0.4, 25: 0.3 }),
		current_A: 100,
		currentHarmonics: orders({
			3: 9,
			5: 20,
			7: 14,
			9: 3,
			11: 9,
			13: 6,
			17: 3,
			19: 2.5,
			23: 2,
			25: 1.5,
			49: 0.4
		}),
		currentFactors: [1, 0.9, 1.05],
		lag_deg: 20,
		withNeutral: true,
		noise_pctOfFundamental: 0.05
	});
	const neutralVoltage: ChannelTruth = {
		name: 'UN',
		quantity: 'voltage',
		phase: 'N',
		fundamental_rms: 1.5,
		fundamentalPhase_deg: 70,
		harmonics: orders({ 3: 120, 9: 30 }),
		noise_pctOfFundamental: 1
	};
	return [...point, neutralVoltage];
}

export interface CaptureOnDisk {
	cfg: string;
	dat: string;
	bytes: number;
	sampleCount: number;
	duration_s: number;
	/** [8] value in volts or amperes = factor × raw. */
	factors: number[];
	mappings: ChannelMapping[];
}

/** Writes a binary capture of eight channels, repeating ten seconds of it; memory does not grow with the duration. */
export function makeCapture(folder: string, wanted_s: number): CaptureOnDisk {
	if (wanted_s > LONGEST_S) throw new Error(`At most ${LONGEST_S} s: the time stamps end there.`);
	const recording = synthesiseRecording({
		frequency_Hz: FREQUENCY_HZ,
		samplingRate_Hz: SAMPLING_RATE_HZ,
		duration_s: STRETCH_SAMPLES / SAMPLING_RATE_HZ,
		seed: 3,
		channels: benchChannels()
	});
	const start = { local: new Date(START_MS).toISOString().slice(0, 23), utcOffset_min: 0 };
	const [header, data] = writeComtrade(
		{ ...recording, start },
		{ revision: '2013', dataFormat: 'BINARY', stem: 'bench' }
	);
	const sampleCount = Math.round(wanted_s * SAMPLING_RATE_HZ);
	const rateLine = (count: number) => `\r\n${SAMPLING_RATE_HZ},${count}\r\n`;
	const cfg = join(folder, 'bench.cfg');
	const dat = join(folder, 'bench.dat');
	const text = new TextDecoder().decode(header!.bytes);
	writeFileSync(cfg, text.replace(rateLine(STRETCH_SAMPLES), rateLine(sampleCount)));
	repeatRows(dat, data!.bytes, sampleCount);
	const { source, close } = openOnDisk({ cfg, dat });
	close();
	if (source.samples.kind !== 'rows' || source.sampleCount !== sampleCount)
		throw new Error('The capture does not read as it was written.');
	return {
		cfg,
		dat,
		bytes: sampleCount * ROW_BYTES,
		sampleCount,
		duration_s: sampleCount / SAMPLING_RATE_HZ,
		factors: [...source.samples.layout.factors],
		mappings: mappingsOf(source)
	};
}

function repeatRows(path: string, stretch: Uint8Array, sampleCount: number): void {
	const file = openSync(path, 'w');
	const view = new DataView(stretch.buffer, stretch.byteOffset, stretch.byteLength);
	for (let done = 0; done < sampleCount; done += STRETCH_SAMPLES) {
		const count = Math.min(STRETCH_SAMPLES, sampleCount - done);
		for (let i = 0; i < count; i++) {
			view.setUint32(i * ROW_BYTES, done + i + 1, true);
			view.setUint32(i * ROW_BYTES + 4, Math.round(((done + i) * 1e6) / SAMPLING_RATE_HZ), true);
		}
		writeSync(file, stretch, 0, count * ROW_BYTES);
	}
	closeSync(file);
}

/** Opens a capture the way the worker does: binary samples stay in their file. */
export function openOnDisk({ cfg, dat }: { cfg: string; dat: string }): {
	source: CaptureSource;
	close: () => void;
} {
	const handles = [openFileHandle('bench.cfg', cfg), openFileHandle('bench.dat', dat)];
	const opened = openCapture(handles);
	if (!opened.ok) throw new Error(opened.problem.sentence);
	if (opened.value.kind !== 'waveform') throw new Error('The capture reads as a trend.');
	return { source: opened.value, close: () => handles.forEach((handle) => handle.close()) };
}

export function mappingsOf(source: CaptureSource): ChannelMapping[] {
	return source.channels.map((channel): ChannelMapping => ({
		channelIndex: channel.index,
		quantity: channel.quantity === 'voltage' ? 'voltage' : 'current',
		phase: channel.phaseHint!,
		toPrimary: 1
	}));
}
