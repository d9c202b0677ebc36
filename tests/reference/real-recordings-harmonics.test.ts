import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { analyseWaveform } from '$lib/harmonics/analyse-waveform';
import { ORDER_STRIDE } from '$lib/harmonics/intervals';
import type { ChannelAnalysis } from '$lib/harmonics/waveform-analysis';
import { rootMeanSquare } from '$lib/numerics/stats/root-mean-square';
import { readCapture } from '$lib/recording/read-capture';
import { readDelimitedText } from '$lib/recording/readers/delimited-text/read-delimited-text';
import type { Recording } from '$lib/recording/recording';
import { sampleCapture, samplesArePresent, samplesFolder, skipReason } from './sample-files';

// Recordings of live networks, with figures computed by an independent program (NumPy; single lines over the whole of
// a steady stretch of many cycles, see “method” in expected.json). They stand beside the repository and are never part of it.

interface ExpectedWindow {
	cycles: number;
	f1_hz: number;
	h1_rms: number;
	rms: number;
	max_order: number;
	h_pct: number[];
	thd40_pct?: number;
	thd50_pct?: number;
	err_pct_of_h1: number;
	f1_err_hz: number;
	h1_rms_half_diff_pct: number;
	from_sample: number;
	to_sample: number;
	fs_hz: number;
}
interface ExpectedChannel {
	index?: number;
	name: string;
	unit: string;
	windows?: ExpectedWindow[];
}

/**
 * Every recording whose stretch holds a window of ten or twelve cycles at one rate and that the product reads. Not among
 * them: eight cycles of 50 kS/s and their copies, forty samples in all, two rates with four cycles each; 83 rates, which
 * the reference takes for one. A sound file means volts and amperes by `fullScale`, which expected.json states as its scale.
 */
const RECORDINGS: {
	path: string;
	samplingRate_Hz?: number;
	fullScale?: Record<string, number>;
	comparisons: number;
}[] = [
	{ path: 'comtrade/gen50_binary_1999.cfg', comparisons: 12 },
	{ path: 'comtrade/gen60_binary_1999.cfg', comparisons: 12 },
	{ path: 'comtrade/relay_ascii_1991_cp866.cfg', comparisons: 3 },
	{ path: 'comtrade/sim_float32_2013.cfg', comparisons: 6 },
	...[33, 398, 707, 1240].map((number) => ({
		path: `csv/plugload_${number}_30khz.csv`,
		samplingRate_Hz: 30_000,
		comparisons: 2
	})),
	...[
		'semicolon_decimal_comma_bom',
		'scope_preamble_negative_time',
		'rounded_microseconds',
		'tabs_milli_units_cr'
	].map((name) => ({ path: `derived/csv/${name}.csv`, comparisons: 2 })),
	...['pcm16_stereo', 'pcm24_extensible', 'float32_stereo'].map((form) => ({
		path: `derived/wav/plugload_398_${form}.wav`,
		fullScale: { V: 250, A: 25 },
		comparisons: 2
	})),
	...['092', '117'].map((number) => ({
		path: `wav/mains_reference_400hz_${number}.wav`,
		fullScale: { '(counts)': 32_768 },
		comparisons: 1
	}))
];

function load(path: string, samplingRate_Hz?: number): Recording {
	const files = sampleCapture(path);
	const read =
		samplingRate_Hz === undefined ? readCapture(files) : readDelimitedText(files, { samplingRate_Hz });
	if (!read.ok) throw new Error(read.problem.sentence);
	if (read.value.kind !== 'waveform') throw new Error(`${path} was taken for a trend`);
	return read.value;
}

/** Counts of a converter at the mains are a voltage in a scale of their own. */
const isVoltage = (unit: string) => unit.toUpperCase().endsWith('V') || unit === '(counts)';

/** Mean of the line phasors over windows: what single lines over the whole stretch see. */
function coherentLine(channel: ChannelAnalysis, windows: readonly number[], order: number): number {
	let re = 0;
	let im = 0;
	for (const w of windows) {
		const at = w * ORDER_STRIDE + order;
		const angle = (channel.phases_deg[at]! * Math.PI) / 180;
		re += channel.components[at]! * Math.cos(angle);
		im += channel.components[at]! * Math.sin(angle);
	}
	return Math.hypot(re, im) / windows.length;
}

/**
 * The reference rounds its stretch to whole samples, so that it holds M + δ cycles, and reads sin(πδ)/(πδ) of the
 * fundamental: 0.08 % low in the relay recording, where 300 cycles are 5999.45 samples.
 */
function roundingLoss(truth: ExpectedWindow): number {
	const excess = ((truth.to_sample - truth.from_sample) * truth.f1_hz) / truth.fs_hz - truth.cycles;
	return excess === 0 ? 1 : Math.sin(Math.PI * excess) / (Math.PI * excess);
}

/** The stretch with a little more on either side, for the interpolation's margin. */
function cutOut(recording: Recording, { from_sample, to_sample, fs_hz }: ExpectedWindow): Recording {
	const margin = 60;
	const from = Math.max(0, from_sample - margin);
	const to = Math.min(recording.sampleCount, to_sample + margin);
	return {
		...recording,
		sampleCount: to - from,
		segments: [{ samplingRate_Hz: fs_hz, fromSample: 0, toSample: to - from }],
		timeStamps_s: null,
		channels: recording.channels.map((c) => ({ ...c, samples: c.samples.slice(from, to) }))
	};
}

/** Root of the sum of squares of orders 2 … highest, percent of the first. */
function distortion_pct(lines: readonly number[], highest: number): number {
	return (100 * Math.hypot(...lines.slice(2, highest + 1))) / lines[1]!;
}

describe.skipIf(!samplesArePresent)(`recordings of live networks${skipReason}`, () => {
	const expected = samplesArePresent
		? (JSON.parse(readFileSync(join(samplesFolder, 'expected.json'), 'utf8')) as {
				files: Record<string, { channels: ExpectedChannel[] }>;
			})
		: { files: {} };

	describe.each(RECORDINGS)('$path', ({ path, samplingRate_Hz, fullScale, comparisons }) => {
		it('orders 1 … 15, THD to 40 and 50, rms and frequency agree within the stated errors', () => {
			const recording = load(path, samplingRate_Hz);
			const listed = expected.files[path]!.channels.filter((c) => (c.windows ?? []).length > 0);
			const positionOf = (entry: ExpectedChannel) => (entry.index ?? listed.indexOf(entry) + 1) - 1;
			let compared = 0;
			for (const entry of listed) {
				for (const truth of entry.windows!) {
					// Where the reference itself is unsure by half a percent there is nothing to hold on to.
					if (truth.err_pct_of_h1 > 0.5) continue;
					compare(recording, positionOf(entry), entry, truth, fullScale?.[entry.unit] ?? 1);
					compared++;
				}
			}
			expect(compared).toBeGreaterThanOrEqual(comparisons);
		});
	});

	function compare(
		recording: Recording,
		position: number,
		entry: ExpectedChannel,
		truth: ExpectedWindow,
		toPrimary: number
	): void {
		const outcome = analyseWaveform(
			cutOut(recording, truth),
			[
				{
					channelIndex: recording.channels[position]!.index,
					quantity: isVoltage(entry.unit) ? 'voltage' : 'current',
					phase: 'L1',
					toPrimary
				}
			],
			{ nominalFrequency_Hz: null }
		);
		if (!outcome.ok) throw new Error(`${entry.name}: ${outcome.problem.sentence}`);
		const { channels, windowCount, highestOrder, frequency_Hz } = outcome.value;
		const windows = Array.from({ length: windowCount }, (_, w) => w);
		const measured = channels[0]!;
		const scale = entry.unit.startsWith('k') ? 1000 : entry.unit.startsWith('m') ? 1e-3 : 1;
		const lines = Array.from({ length: highestOrder + 1 }, (_, order) =>
			order === 0 ? 0 : coherentLine(measured, windows, order)
		);
		// Windows cover whole tens of cycles, the reference a few more: unsteadiness of the load shows in both.
		const steady_pct = truth.h1_rms_half_diff_pct + 0.01;
		const h1 = (truth.h1_rms * scale) / roundingLoss(truth);
		expect(Math.abs(lines[1]! / h1 - 1) * 100, entry.name).toBeLessThan(steady_pct);
		expect(Math.abs(rootMeanSquare(measured.rms) / (truth.rms * scale) - 1) * 100).toBeLessThan(steady_pct);
		const mean_Hz = frequency_Hz.reduce((sum, f) => sum + f, 0) / windowCount;
		expect(Math.abs(mean_Hz - truth.f1_hz)).toBeLessThan(Math.max(0.01, 3 * truth.f1_err_hz));
		for (let order = 2; order <= Math.min(15, highestOrder); order++) {
			const difference = Math.abs((100 * lines[order]!) / lines[1]! - truth.h_pct[order - 1]!);
			expect(difference, `${entry.name} order ${order}`).toBeLessThan(truth.err_pct_of_h1 + 0.01);
		}
		for (const [highest, thd_pct] of [
			[40, truth.thd40_pct],
			[50, truth.thd50_pct]
		] as const) {
			if (thd_pct === undefined || highest > Math.min(highestOrder, truth.max_order)) continue;
			const difference = Math.abs(distortion_pct(lines, highest) - thd_pct);
			expect(difference, `${entry.name} THD to ${highest}`).toBeLessThan(2 * truth.err_pct_of_h1 + 0.01);
		}
	}

	it('the generator’s capture draws no remark that stops a verdict', () => {
		const recording = load('comtrade/gen50_binary_1999.cfg');
		const outcome = analyseWaveform(
			recording,
			recording.channels.map((c) => ({
				channelIndex: c.index,
				quantity: c.quantity === 'voltage' ? 'voltage' : 'current',
				phase: c.phaseHint!,
				toPrimary: 1
			})),
			{ nominalFrequency_Hz: 50 }
		);
		if (!outcome.ok) throw new Error(outcome.problem.sentence);
		expect(outcome.value.windowCount).toBe(21);
		expect(outcome.value.quality.filter((q) => q.severity !== 'notes')).toEqual([]);
	});
});
