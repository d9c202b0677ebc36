import { describe, expect, it } from 'vitest';
import { isUnevenlySampled } from '$lib/harmonics/engine/stretches';
import { analyseUneven } from '$lib/harmonics/uneven/analyse-uneven';
import type { ChannelMapping } from '$lib/harmonics/waveform-analysis';
import { fourierLines } from '$lib/numerics/fourier-integral/fourier-integral';
import { cutPieces, productIntegral, valuesOnPieces } from '$lib/numerics/fourier-integral/line-pieces';
import { readComtrade } from '$lib/recording/readers/comtrade/read-comtrade';
import { expectedFiles, sampleCapture, samplesArePresent, skipReason } from './sample-files';

// One recording of a live network twice: whole, and with every fifth sample of a part taken out, so that only its time
// stamps tell when the others were taken. The figures of the whole one are by NumPy (“method” in expected.json beside it):
// single lines over 8 cycles, samples 0 to 6671 at 50 kHz.
const UNEVEN = 'derived/comtrade/uneven_stamps_ascii_1999.cfg';
const WHOLE = 'derived/comtrade/enc_ascii_1999.cfg';

interface WholeFigures {
	cycles: number;
	rms: number;
	dc: number;
	h1_rms: number;
	h_pct: number[];
	from_sample: number;
	to_sample: number;
	fs_hz: number;
}

function load() {
	const read = readComtrade(sampleCapture(UNEVEN));
	if (!read.ok) throw new Error(read.problem.sentence);
	return read.value;
}

describe.skipIf(!samplesArePresent)(
	`a recording with samples missing between its time stamps${skipReason}`,
	() => {
		it('has the harmonic figures of the whole recording, by the Fourier integral over the same eight cycles', () => {
			const recording = load();
			const expected = expectedFiles()[WHOLE]!.channels!;
			expect(expected).toHaveLength(6);
			recording.channels.forEach((channel, c) => {
				const figures = expected[c]!.windows![0] as WholeFigures;
				const to_s = figures.to_sample / figures.fs_hz;
				const pieces = cutPieces(recording.timeStamps_s!, figures.from_sample / figures.fs_hz, to_s);
				const wave = valuesOnPieces(pieces, channel.samples);
				const lines = new Float64Array(2 * 16 * figures.cycles);
				fourierLines(pieces, [wave], (2 * Math.PI) / to_s, 16 * figures.cycles, [lines]);
				const level = (order: number) =>
					(Math.SQRT2 / to_s) *
					Math.hypot(lines[2 * order * figures.cycles]!, lines[2 * order * figures.cycles + 1]!);
				// The straight lines cut off (π·15·60/50 000)²/3 of order 15, a thousandth of its reading, and the samples that are
				// missing bring some noise; the printed figures are rounded to 0.0001.
				expect(Math.abs(level(1) / figures.h1_rms - 1)).toBeLessThan(5e-5);
				expect(
					Math.abs(Math.sqrt(productIntegral(pieces, wave, wave) / to_s) / figures.rms - 1)
				).toBeLessThan(5e-5);
				expect(Math.abs(lines[0]! / to_s - figures.dc)).toBeLessThan(1e-4 * figures.h1_rms);
				figures.h_pct.forEach((pct, i) => {
					expect(Math.abs((100 * level(i + 1)) / level(1) - pct)).toBeLessThan(0.004);
				});
			});
		});

		it('is refused by the analyser for its length, never computed as if its samples were even', () => {
			const recording = load();
			expect(isUnevenlySampled(recording)).toBe(true);
			const mappings = recording.channels.map((channel, channelIndex): ChannelMapping => ({
				channelIndex,
				quantity: channel.quantity === 'voltage' ? 'voltage' : 'current',
				phase: channel.phaseHint!,
				toPrimary: 1
			}));
			const outcome = analyseUneven(recording, mappings, { nominalFrequency_Hz: 60 });
			expect(outcome).toMatchObject({
				ok: false,
				problem: { code: 'record-too-short', have_s: expect.closeTo(0.15998, 8) }
			});
		});
	}
);
