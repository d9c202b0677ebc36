import { spawnSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { Flickermeter, type FlickerInterval } from '$lib/harmonics/flicker/flickermeter';
import { designPerceptionFilters, type Lamp } from '$lib/harmonics/flicker/perception-filters';
import { bilinear, butterworthLowPass, responseMagnitude } from '$lib/numerics/filters/sections';
import { seededRandom } from '$lib/synthesis/waveform-random';

const hasSciPy = spawnSync('python3', ['-c', 'import scipy.signal']).status === 0;
const PROGRAM = fileURLToPath(new URL('./python/flickermeter.py', import.meta.url));
/** IEC 61000-4-15:2010, block 3 (from memory); written out here once more, so that a slip in the product shows. */
const LAMPS = {
	'230 V': { k: 1.74802, lambda: 4.05981, w1: 9.15494, w2: 2.27979, w3: 1.22535, w4: 21.9 },
	'120 V': { k: 1.6357, lambda: 4.167375, w1: 9.077169, w2: 2.939902, w3: 1.394468, w4: 17.31512 }
} as const;
const UNIT_SWING = { '230 V': 0.0025, '120 V': 0.00321 } as const;
const RATE_HZ = 1600;
const FREQUENCIES_HZ = [0.02, 0.05, 0.5, 1, 3, 5, 8.8, 12, 20, 25, 30, 35, 40, 100, 300, 700];
const CASES = [
	['230 V', 50],
	['230 V', 60],
	['120 V', 50],
	['120 V', 60]
] as const;

const cornerOf_Hz = (mains_Hz: 50 | 60) => (mains_Hz === 50 ? 35 : 42);
const caseOf = (lamp: Lamp, mains_Hz: 50 | 60) => ({
	lamp: LAMPS[lamp],
	corner_Hz: cornerOf_Hz(mains_Hz),
	unitSwing: UNIT_SWING[lamp]
});

/** One answer per case. */
function askSciPy<Answer>(setup: object, voltage: Float64Array = new Float64Array(0)): Answer[] {
	const bytes = Buffer.from(voltage.buffer, voltage.byteOffset, voltage.byteLength);
	const run = spawnSync('python3', [PROGRAM], {
		input: Buffer.concat([Buffer.from(JSON.stringify(setup) + '\n'), bytes]),
		encoding: 'utf8'
	});
	if (run.status !== 0) throw new Error(run.stderr);
	return JSON.parse(run.stdout) as Answer[];
}

/** A voltage with everything: a mains frequency off nominal, harmonics, an interharmonic, noise in the level and steps. */
function livelyVoltage(rate_Hz: number, duration_s: number, mains_Hz: number): Float64Array {
	const random = seededRandom(7);
	const tones = Array.from({ length: 25 }, () => ({
		turn: 2 * Math.PI * (0.1 + 30 * random.uniform()),
		phase: 6 * random.uniform(),
		size: 0.0008 * random.uniform()
	}));
	const level = Float64Array.from({ length: duration_s * 200 }, (_, i) => {
		const t = i / 200;
		const slow = tones.reduce((sum, { turn, phase, size }) => sum + size * Math.sin(turn * t + phase), 1);
		return slow + (Math.floor(t / 17) % 2) * 0.006;
	});
	return Float64Array.from({ length: duration_s * rate_Hz }, (_, n) => {
		const t = n / rate_Hz;
		const angle = 2 * Math.PI * 1.004 * mains_Hz * t;
		const wave =
			Math.sin(angle) +
			0.05 * Math.sin(5 * angle + 1) +
			0.03 * Math.sin(31 * angle) +
			0.002 * Math.sin(2 * Math.PI * 183 * t);
		const at = t * 200;
		const before = Math.floor(at);
		const after = Math.min(level.length - 1, before + 1);
		return 230 * wave * (level[before]! + (at - before) * (level[after]! - level[before]!));
	});
}

describe.skipIf(!hasSciPy)('against SciPy (skipped where python3 has no scipy)', () => {
	it('designs the Butterworth low-pass to 1e-9, and follows the analogue filters to 0.2 % as far as flicker goes', () => {
		const answers = askSciPy<{ butterworth: number[]; analogue: number[] }>({
			rate_Hz: RATE_HZ,
			frequencies_Hz: FREQUENCIES_HZ,
			cases: CASES.map(([lamp, mains_Hz]) => caseOf(lamp, mains_Hz))
		});
		expect(answers).toHaveLength(CASES.length);
		answers.forEach(({ butterworth, analogue }, c) => {
			const [lamp, mains_Hz] = CASES[c]!;
			const corner_Hz = cornerOf_Hz(mains_Hz);
			const lowPass = butterworthLowPass(6, corner_Hz).map((section) =>
				bilinear(section, RATE_HZ, corner_Hz)
			);
			const { weighting } = designPerceptionFilters(RATE_HZ, mains_Hz, lamp);
			FREQUENCIES_HZ.forEach((frequency_Hz, i) => {
				const what = `${lamp}, ${mains_Hz} Hz mains, at ${frequency_Hz} Hz`;
				const ratio = responseMagnitude(lowPass, RATE_HZ, frequency_Hz) / butterworth[i]!;
				expect(Math.abs(ratio - 1), what).toBeLessThan(1e-9);
				if (frequency_Hz > corner_Hz) return;
				const whole = responseMagnitude(weighting, RATE_HZ, frequency_Hz) / analogue[i]!;
				expect(Math.abs(whole - 1), what).toBeLessThan(0.002);
			});
		});
	});

	it.each([
		['230 V', 50, 6400],
		['120 V', 60, 3200]
	] as const)(
		'gives the Pst that SciPy gives without thinning: %s, %i Hz at %i Hz',
		(lamp, mains_Hz, rate_Hz) => {
			const lead_s = 30;
			const voltage = livelyVoltage(rate_Hz, lead_s + 600, mains_Hz);
			const [other] = askSciPy<Pick<FlickerInterval, 'levels' | 'pst' | 'pInstMax'>>(
				{ rate_Hz, cases: [caseOf(lamp, mains_Hz)], from: lead_s * rate_Hz },
				voltage
			);
			const intervals: FlickerInterval[] = [];
			const meter = new Flickermeter({
				samplingRate_Hz: rate_Hz,
				nominalFrequency_Hz: mains_Hz,
				lamp,
				start_ms: -1000 * lead_s,
				onInterval: (interval) => intervals.push(interval)
			});
			meter.push(voltage);
			meter.finish();
			const ours = intervals.find(({ start_ms }) => start_ms === 0)!;
			const near = (figure: number, reference: number, what: string) =>
				expect(Math.abs(figure / reference - 1), what).toBeLessThan(0.003);
			near(ours.pst, other!.pst, 'Pst');
			near(ours.pInstMax, other!.pInstMax, 'P_inst,max');
			for (const key of ['p0_1', 'p1s', 'p3s', 'p10s', 'p50s'] as const)
				near(ours.levels[key], other!.levels[key], key);
		}
	);
});
