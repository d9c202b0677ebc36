import { describe, expect, it } from 'vitest';
import { analyseWaveform } from '$lib/harmonics/analyse-waveform';
import { orderRowOf, type OrderRow } from '$lib/harmonics/shape/order-row';
import { partialSum, residualOf } from '$lib/harmonics/shape/reconstruction';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';

/** Square wave ±1, rising at θ = 0: b_n = 4/(nπ), n odd (Zwillinger, CRC Standard Mathematical Tables). */
function squareRow(highest: number): OrderRow {
	const components = new Float64Array(highest + 1).fill(NaN);
	const phases_deg = new Float64Array(highest + 1).fill(NaN);
	for (let n = 1; n <= highest; n++) {
		components[n] = n % 2 === 1 ? 4 / (n * Math.PI) / Math.SQRT2 : 0;
		phases_deg[n] = -90;
	}
	return { dc: 0, components, phases_deg };
}

const upTo = (highest: number) => Array.from({ length: highest }, (_, i) => i + 1);

describe('partial sums', () => {
	it('of a square wave overshoot by (2/π)·Si(π) = 1.17898, at 180°/(H + 1) after the step (Gibbs; from memory)', () => {
		for (const highest of [49, 199, 999]) {
			const { wave, peak, crestFactor, rms } = partialSum(squareRow(highest), {
				orders: upTo(highest),
				points: 100_000
			});
			expect(peak).toBeCloseTo(1.1789797, highest > 500 ? 5 : 3);
			// Four such crests, one on either side of the two steps, are equal but for rounding.
			const angle_deg = ((360 * wave.findIndex((value) => Math.abs(value) === peak)) / 100_000) % 180;
			expect(Math.min(angle_deg, 180 - angle_deg)).toBeCloseTo(180 / (highest + 1), 2);
			expect(rms).toBeLessThan(1);
			expect(1 - rms ** 2).toBeCloseTo(4 / (Math.PI ** 2 * (highest + 1)), 5);
			expect(crestFactor).toBeCloseTo(peak / rms, 12);
		}
	});

	it('start at the crest of the reference, or where they are told to', () => {
		const row: OrderRow = {
			dc: 5,
			components: Float64Array.of(NaN, 10, 0, 2),
			phases_deg: Float64Array.of(NaN, 0, NaN, 40)
		};
		const fundamental = partialSum(row, { orders: [1], points: 360 });
		expect(fundamental.wave[0]).toBeCloseTo(10 * Math.SQRT2, 12);
		expect(fundamental.crestFactor).toBeCloseTo(Math.SQRT2, 12);
		const turned = partialSum(row, {
			orders: [3, 1, 3, 2],
			withDc: true,
			points: 720,
			cycles: 2,
			start_deg: -90
		});
		expect(turned.missingOrders).toEqual([]);
		for (const n of [0, 17, 359, 719]) {
			const angle = ((n - 90) * Math.PI) / 180;
			const want = 5 + Math.SQRT2 * (10 * Math.cos(angle) + 2 * Math.cos(3 * angle + (40 * Math.PI) / 180));
			expect(turned.wave[n]).toBeCloseTo(want, 11);
		}
		expect(turned.rms).toBeCloseTo(Math.sqrt(25 + 100 + 4), 12);
	});

	it('name the orders that have no data, and nothing chosen is nothing', () => {
		const row = squareRow(5);
		row.components[3] = NaN;
		const sum = partialSum({ ...row, dc: NaN }, { orders: [1, 3, 9], withDc: true, points: 64 });
		expect(sum.missingOrders).toEqual([0, 3, 9]);
		expect(sum.rms).toBeCloseTo(4 / Math.PI / Math.SQRT2, 12);
		const nothing = partialSum(row, { orders: [], points: 64 });
		expect([nothing.rms, nothing.peak]).toEqual([0, 0]);
		expect(nothing.crestFactor).toBeNaN();
	});

	it('of an analysed window leave what was not chosen, with its rms and its place', () => {
		const f = 50;
		const recording = synthesiseRecording({
			frequency_Hz: f,
			samplingRate_Hz: 12_800,
			duration_s: 0.5,
			seed: 1,
			channels: [
				{
					name: 'I1',
					quantity: 'current',
					phase: 'L1',
					fundamental_rms: 100,
					fundamentalPhase_deg: 33,
					dc: 2,
					harmonics: [
						{ order: 5, magnitude_pctOfFundamental: 20, phase_deg: 12 },
						{ order: 7, magnitude_pctOfFundamental: 10, phase_deg: -70 }
					]
				}
			]
		});
		const outcome = analyseWaveform(
			recording,
			[{ channelIndex: 0, quantity: 'current', phase: 'L1', toPrimary: 1 }],
			{ nominalFrequency_Hz: 50 }
		);
		if (!outcome.ok) throw new Error(outcome.problem.sentence);
		const { channels, windowStarts_s } = outcome.value;
		const row = orderRowOf(channels[0]!, 0);
		// The first whole sample of the window, and the reference fundamental's phase there.
		const first = Math.ceil(windowStarts_s[0]! * 12_800);
		const start_deg = 33 + (360 * f * first) / 12_800;
		const measured = recording.channels[0]!.samples.slice(first, first + 256);
		const all = partialSum(row, { orders: upTo(50), withDc: true, points: 256, start_deg });
		expect(residualOf(measured, all.wave, 1).rms_pct).toBeLessThan(1e-3);
		const some = partialSum(row, { orders: [1, 5], withDc: true, points: 256, start_deg });
		const residual = residualOf(measured, some.wave, 1);
		const whole = Math.sqrt(4 + 100 ** 2 + 20 ** 2 + 10 ** 2);
		expect(residual.rms).toBeCloseTo(10, 3);
		expect(residual.rms_pct).toBeCloseTo(1000 / whole, 3);
		expect(Math.abs(residual.largest!.value)).toBeCloseTo(10 * Math.SQRT2, 1);
		expect(residual.largest!.angle_deg).toBeCloseTo((360 * residual.largest!.point) / 256, 9);
		measured[3] = NaN;
		const lost = residualOf(measured, some.wave, 1);
		expect(lost.rms).toBeNaN();
		expect(lost.rms_pct).toBeNaN();
		expect(lost.largest).toBeNull();
		expect(() => residualOf(measured, new Float64Array(3), 1)).toThrow(RangeError);
	});
});
