import { describe, expect, it } from 'vitest';
import { findNotches, notchLimits } from '$lib/harmonics/shape/notches';
import { seededRandom } from '$lib/synthesis/waveform-random';

const f = 60;
const U_V = 480;
const PEAK_V = Math.SQRT2 * U_V;
const OMEGA = 2 * Math.PI * f;

/**
 * Line-to-line voltage at a point between source and bridge: while two phases commutate, at α and half a cycle later, it
 * falls by the share L_L/ΣL. Commutation ends when the volt-seconds have turned the current round: ∫e dt = 2·ΣL·I_d.
 */
function notched(setup: {
	rate_Hz: number;
	cycles: number;
	share: number;
	firing_deg: number;
	reversed_Vs: number;
	background?: (t: number) => number;
}) {
	const { rate_Hz, cycles, share, firing_deg, reversed_Vs, background = () => 0 } = setup;
	const start = (firing_deg * Math.PI) / 180;
	const end = Math.acos(Math.cos(start) - (OMEGA * reversed_Vs) / PEAK_V);
	const samples = Float64Array.from({ length: Math.round((rate_Hz * cycles) / f) }, (_, n) => {
		const t = n / rate_Hz;
		const angle = (OMEGA * t + 0.3) % Math.PI;
		const e = PEAK_V * Math.sin(OMEGA * t + 0.3);
		return (angle >= start && angle < end ? (1 - share) * e : e) + background(t);
	});
	return { samples, width_us: ((end - start) / OMEGA) * 1e6, start, end };
}

// Formulas of the notch, IEEE Std 519, annex on commutation notches (from memory): V_N = e·L_L/ΣL, t_N = 2·ΣL·I_d/e,
// A_N = 2·I_d·L_L. The last one is exact for any e(t), because commutation is a matter of volt-seconds.
describe('commutation notches', () => {
	const direct_A = 300;
	const L_L_H = 20e-6;
	const sum_H = 100e-6;
	const share = L_L_H / sum_H;
	const reversed_Vs = 2 * sum_H * direct_A;
	const area_Vus = 2 * direct_A * L_L_H * 1e6;

	it.each([500_000, 100_000, 50_000])(
		'have the area 2·I_d·L_L and the depth e·L_L/ΣL at %i samples per second',
		(rate_Hz) => {
			const wave = notched({ rate_Hz, cycles: 3, share, firing_deg: 60, reversed_Vs });
			const survey = findNotches(wave.samples, rate_Hz, f)!;
			expect(survey.isCertain).toBe(true);
			expect(survey.caution).toBeNull();
			expect(Math.abs(survey.fundamentalPeak_V / PEAK_V - 1)).toBeLessThan(0.001);
			expect(survey.notches).toHaveLength(6);
			const step_us = 1e6 / rate_Hz;
			survey.notches.forEach((notch, i) => {
				expect(Math.abs(notch.width_us - wave.width_us)).toBeLessThan(1.05 * step_us);
				expect(Math.abs(notch.area_Vus - area_Vus)).toBeLessThan(
					(0.01 + (1.05 * step_us) / wave.width_us) * area_Vus
				);
				expect(Math.abs(notch.depth_V / (area_Vus / wave.width_us) - 1)).toBeLessThan(0.02);
				expect(Math.abs(notch.depth_pctOfInstantaneous - 100 * share)).toBeLessThan(0.5);
				expect(notch.direction).toBe('towards-zero');
				const start_s = (wave.start - 0.3 + i * Math.PI) / OMEGA;
				expect(Math.abs(notch.start_s - start_s) * 1e6).toBeLessThan(1.05 * step_us);
			});
			// t_N = 2·ΣL·I_d/e with e at the middle of the notch, a chord for an arc.
			const e = PEAK_V * Math.sin((wave.start + wave.end) / 2);
			expect(Math.abs(survey.notches[0]!.width_us / ((reversed_Vs / e) * 1e6) - 1)).toBeLessThan(
				0.01 + step_us / wave.width_us
			);
		}
	);

	it('are found beside fifth, third order and noise, and those are none themselves', () => {
		const random = seededRandom(2);
		const background = (t: number) =>
			0.04 * PEAK_V * Math.cos(5 * OMEGA * t + 1) +
			0.02 * PEAK_V * Math.cos(3 * OMEGA * t) +
			1.5 * random.normal();
		const with_ = notched({
			rate_Hz: 200_000,
			cycles: 2,
			share: 0.3,
			firing_deg: 100,
			reversed_Vs,
			background
		});
		const survey = findNotches(with_.samples, 200_000, f)!;
		expect(survey.notches).toHaveLength(4);
		for (const notch of survey.notches) {
			expect(Math.abs(notch.area_Vus / (0.3 * reversed_Vs * 1e6) - 1)).toBeLessThan(0.05);
		}
		const without = notched({
			rate_Hz: 200_000,
			cycles: 2,
			share: 0,
			firing_deg: 100,
			reversed_Vs,
			background
		});
		expect(findNotches(without.samples, 200_000, f)!.notches).toEqual([]);
	});

	it('a bump away from zero is told apart, and one at the zero crossing has no percentage', () => {
		const samples = Float64Array.from({ length: 20_000 }, (_, n) => {
			const angle = (2 * Math.PI * n) / 10_000;
			const bump = (n > 2400 && n < 2460) || Math.abs(n - 5000) < 30 ? 100 : 0;
			return PEAK_V * Math.sin(angle) + bump;
		});
		const { notches } = findNotches(samples, 600_000, f)!;
		expect(notches.map(({ direction }) => direction)).toHaveLength(2);
		expect(notches[0]!.direction).toBe('away-from-zero');
		expect(notches[0]!.depth_pctOfInstantaneous).toBeCloseTo(10000 / PEAK_V, 0);
		expect(notches[1]!.depth_pctOfInstantaneous).toBeNaN();
		expect(notches[1]!.area_Vus).toBeCloseTo((59 * 100) / 0.6, -2);
	});

	it('coarse sampling is said to be coarse, missing samples and fragments give nothing', () => {
		const wave = notched({ rate_Hz: 12_800, cycles: 2, share: 0.5, firing_deg: 60, reversed_Vs });
		const survey = findNotches(wave.samples, 12_800, f)!;
		expect(survey.isCertain).toBe(false);
		expect(survey.caution).toContain('every 78.1 µs');
		expect(findNotches(wave.samples.subarray(0, 100), 12_800, f)).toBeNull();
		const lost = wave.samples.slice();
		lost[7] = NaN;
		expect(findNotches(lost, 12_800, f)).toBeNull();
		expect(findNotches(new Float64Array(1000), 12_800, f)).toBeNull();
	});

	it('limits scale with the voltage (IEEE Std 519-1992, table 10.2, from memory)', () => {
		expect(notchLimits(480).map(({ depth_pct, area_Vus: area }) => [depth_pct, area])).toEqual([
			[10, 16400],
			[20, 22800],
			[50, 36500]
		]);
		expect(notchLimits(400)[1]!.area_Vus).toBeCloseTo(19000, 9);
	});
});
