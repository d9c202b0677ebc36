import { existsSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { writeComtrade } from '$lib/synthesis/comtrade-writer';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { threePhaseChannels } from '$lib/synthesis/waveform-three-phase';

export interface BrowserFile {
	name: string;
	mimeType: string;
	buffer: Buffer;
}

const asFile = (name: string, bytes: Uint8Array): BrowserFile => ({
	name,
	mimeType: 'application/octet-stream',
	buffer: Buffer.from(bytes)
});

/** Six seconds at a 6 kV, 50 Hz point whose 5th harmonic current is far over any limit; truth known. */
export function ownCapture(): BrowserFile[] {
	const recording = synthesiseRecording(
		{
			frequency_Hz: 50.01,
			samplingRate_Hz: 12_800,
			duration_s: 6,
			seed: 3,
			channels: threePhaseChannels({
				voltage_V: 3466,
				voltageHarmonics: [{ order: 5, magnitude_pctOfFundamental: 1.1, phase_deg: 40 }],
				current_A: 1400,
				currentHarmonics: [
					{ order: 5, magnitude_pctOfFundamental: 14, phase_deg: 170 },
					{ order: 7, magnitude_pctOfFundamental: 5, phase_deg: 10 }
				],
				lag_deg: 20
			})
		},
		{ stationName: 'Millbrook', nominalFrequency_Hz: 50 }
	);
	const start = { local: '2026-03-03T10:00:00.000', utcOffset_min: null };
	return writeComtrade(
		{ ...recording, start },
		{ revision: '1999', dataFormat: 'BINARY', stem: 'millbrook' }
	).map((file) => asFile(file.name, file.bytes));
}

const SAMPLE = fileURLToPath(
	new URL('../../../../shared/samples/comtrade/gen50_binary_1999', import.meta.url)
);

/** A recording made by somebody else's recorder; beside the checkout only, never in it. */
export const realCaptureIsHere = existsSync(`${SAMPLE}.cfg`);

export function realCapture(): BrowserFile[] {
	return ['cfg', 'dat'].map((end) => asFile(`gen50.${end}`, readFileSync(`${SAMPLE}.${end}`)));
}
