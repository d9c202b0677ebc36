/** NumPy, SciPy and mathjs on the same samples as ours. Python's part is skipped where it is not installed. */
import { complex, fft, type Complex } from 'mathjs';
import { describe, expect, it } from 'vitest';
import { analyseWaveform } from '$lib/harmonics/analyse-waveform';
import { ORDER_STRIDE } from '$lib/harmonics/intervals';
import { joinLines } from '$lib/harmonics/line-groups';
import { designWindowSpectrum } from '$lib/harmonics/window-spectrum';
import { executeRealDft, planRealDft } from '$lib/numerics/dft/real-dft';
import { createSignalKernels } from '$lib/numerics/kernels/create-kernels';
import { seededRandom } from '$lib/synthesis/waveform-random';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { pythonHas, runPython } from './python-program';

const ROWS = ['components', 'subgroups', 'groups', 'interharmonicSubgroups', 'interharmonicGroups'] as const;
type WindowFigures = { lines: number[]; rms: number } & Record<(typeof ROWS)[number], (number | null)[]>;

function noise(length: number): Float64Array {
	const random = seededRandom(length);
	return Float64Array.from({ length }, () => 3 + 100 * random.normal());
}

describe('against mathjs', () => {
	// Its transform of lengths that are no power of two is Bluestein's; ours is another path again.
	it.each([2048, 2560, 1000, 1229])('lines of %i samples within 1e-11 of the largest', (length) => {
		const samples = noise(length);
		const other = fft(Array.from(samples, (value) => complex(value, 0))) as unknown as Complex[];
		const plan = planRealDft(length);
		executeRealDft(plan, samples);
		const largest = Math.max(...other.map((line) => Math.hypot(line.re, line.im)));
		for (let k = 0; k < plan.lineCount; k++) {
			expect(Math.abs(plan.spectrum[2 * k]! - other[k]!.re)).toBeLessThan(1e-11 * largest);
			expect(Math.abs(plan.spectrum[2 * k + 1]! - other[k]!.im)).toBeLessThan(1e-11 * largest);
		}
	});
});

describe.skipIf(!pythonHas('numpy'))('against NumPy (skipped where python3 has no numpy)', () => {
	it.each([
		[10, 2560],
		[12, 3072],
		[10, 2048]
	] as const)('lines, groups and rms of %i cycles in %i samples within 1e-9', (cycles, length) => {
		const samples = noise(length);
		const orders = 50;
		const other = runPython<WindowFigures>('window_figures.py', { samples: [...samples], cycles, orders });
		const plan = planRealDft(length);
		executeRealDft(plan, samples);
		const squares = Float64Array.from({ length: plan.lineCount }, (_, k) => {
			const scale = k === 0 ? 1 / length : Math.SQRT2 / length;
			return (plan.spectrum[2 * k]! * scale) ** 2 + (plan.spectrum[2 * k + 1]! * scale) ** 2;
		});
		squares.forEach((square, k) => {
			const line = Math.hypot(other.lines[2 * k]!, other.lines[2 * k + 1]!);
			expect(Math.abs(Math.sqrt(square) - line)).toBeLessThan(1e-9 * other.rms);
		});
		const rows = Object.fromEntries(ROWS.map((name) => [name, new Float64Array(orders + 1)])) as Record<
			(typeof ROWS)[number],
			Float64Array
		>;
		joinLines(squares, cycles, orders, true, rows, 0);
		let compared = 0;
		for (const name of ROWS) {
			other[name].forEach((value, order) => {
				if (value === null) return;
				expect(Math.abs(rows[name][order]! / value - 1), `${name} ${order}`).toBeLessThan(1e-9);
				compared++;
			});
		}
		expect(compared).toBe(5 * (orders + 1) - 2);
		const kernels = createSignalKernels({
			channelCount: 1,
			capacity: length,
			points: 1024,
			lineCount: 400,
			kernel: { cutoff: 0.3, halfWidth: 8, beta: 10 },
			rawCapacity: 0
		});
		kernels.samples[0]!.set(samples);
		const rms = Math.sqrt(kernels.stretch(0, 0, length).squares / length);
		expect(Math.abs(rms / other.rms - 1)).toBeLessThan(1e-9);
	});

	it.each([
		[50, 10, 12_800],
		[60, 12, 15_360],
		[50, 10, 25_600]
	] as const)(
		'whole windows of a %i Hz capture, %i cycles at %i S/s',
		(frequency_Hz, cycles, samplingRate_Hz) => {
			const lineSpacing_Hz = frequency_Hz / cycles;
			const recording = synthesiseRecording({
				frequency_Hz,
				samplingRate_Hz,
				duration_s: 1,
				seed: 5,
				channels: [
					{
						name: 'U',
						quantity: 'voltage',
						phase: 'L1',
						fundamental_rms: 230,
						fundamentalPhase_deg: 31,
						dc: 1.5,
						harmonics: Array.from({ length: 49 }, (_, i) => ({
							order: i + 2,
							magnitude_pctOfFundamental: 100 / (i + 2) ** 1.3,
							phase_deg: 47 * i
						})),
						// On lines of the window, so that both programs see whole periods.
						interharmonics: [37, 64, 133, 248, 466].map((line, i) => ({
							frequency_Hz: line * lineSpacing_Hz,
							magnitude_pctOfFundamental: 1 + i / 3,
							phase_deg: 80 * i
						}))
					}
				]
			});
			const { samples } = recording.channels[0]!;
			const outcome = analyseWaveform(
				recording,
				[{ channelIndex: 0, quantity: 'voltage', phase: 'L1', toPrimary: 1 }],
				{ nominalFrequency_Hz: frequency_Hz }
			);
			if (!outcome.ok) throw new Error(outcome.problem.sentence);
			const { windowCount, windowStarts_s, channels } = outcome.value;
			expect(windowCount).toBeGreaterThanOrEqual(4);
			const measured = channels[0]!;
			const length = (samplingRate_Hz * cycles) / frequency_Hz;
			for (let w = 0; w < windowCount; w++) {
				const from = Math.round(windowStarts_s[w]! * samplingRate_Hz);
				const other = runPython<WindowFigures>('window_figures.py', {
					samples: [...samples.subarray(from, from + length)],
					cycles,
					orders: 50
				});
				expect(Math.abs(measured.rms[w]! / other.rms - 1)).toBeLessThan(1e-6);
				for (const name of ROWS) {
					other[name].forEach((value, order) => {
						if (value === null) return;
						const difference = Math.abs(measured[name][w * ORDER_STRIDE + order]! - value);
						// 0.001 % of the fundamental: the windows are interpolated, and placed by what was measured.
						expect(difference / 230, `${name} ${order}`).toBeLessThan(1e-5);
					});
				}
			}
		}
	);
});

describe.skipIf(!pythonHas('scipy'))('against scipy.signal (skipped where python3 has no scipy)', () => {
	// scipy.signal.resample interpolates a periodic signal by its own transform, a way that shares nothing with a kernel.
	it.each([
		[50, 10, 12_800],
		[60, 12, 12_800],
		[50, 10, 9600],
		[50, 10, 50_000]
	] as const)(
		'interpolated windows of %i Hz, %i cycles at %i S/s',
		(frequency_Hz, cycles, samplingRate_Hz) => {
			const length = (samplingRate_Hz * cycles) / frequency_Hz;
			const { points, kernel, lineCount } = designWindowSpectrum(samplingRate_Hz, frequency_Hz, cycles);
			const random = seededRandom(3);
			const highest = 50 * cycles;
			// Every line up to order 50, so every frequency of the passband is tried.
			const window = new Float64Array(length);
			for (let k = 0; k <= highest; k++) {
				const phase = 2 * Math.PI * random.uniform();
				for (let n = 0; n < length; n++) window[n]! += Math.cos((2 * Math.PI * k * n) / length + phase);
			}
			const other = runPython<{ lines: number[] }>('resampled_lines.py', { samples: [...window], points });
			const kernels = createSignalKernels({
				channelCount: 1,
				capacity: 3 * length,
				points,
				lineCount,
				kernel,
				rawCapacity: 0
			});
			for (let i = 0; i < 3; i++) kernels.samples[0]!.set(window, i * length);
			kernels.transformWindow(length, length / points);
			for (let i = 0; i <= 2 * highest + 1; i++) {
				// Lines are points/2 large; each has images 120 dB below it.
				expect(Math.abs(kernels.spectra[0]![i]! - other.lines[i]!)).toBeLessThan(3e-6 * (points / 2));
			}
		}
	);
});
