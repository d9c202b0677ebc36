import { describe, expect, it } from 'vitest';
import { drawWave, readWholeBand, WHOLE_BAND_MARGIN } from '$lib/harmonics/whole-band';

describe('a window with all that the sampling rate carries', () => {
	const rate_Hz = 20_000;
	const f_Hz = 49.93;
	const turn = (2 * Math.PI * f_Hz) / rate_Hz;
	const truth = [
		[1, 230, 20],
		[5, 9, -70],
		[50, 1.2, 100],
		[77, 0.8, -15],
		[179, 0.5, 160]
	] as const;
	const length = (10 * rate_Hz) / f_Hz;
	const start = WHOLE_BAND_MARGIN + 0.37;
	const samples = Float64Array.from({ length: Math.ceil(length) + 2 * WHOLE_BAND_MARGIN + 2 }, (_, n) =>
		truth.reduce(
			(sum, [order, rms, phase_deg]) =>
				sum + rms * Math.SQRT2 * Math.cos(order * turn * (n - start) + (phase_deg * Math.PI) / 180),
			1.5
		)
	);

	it('gives orders far above fifty, with their angles, and the mean', () => {
		const window = readWholeBand(samples, start, length, 10);
		expect(window.highestOrder).toBe(180);
		expect(Math.abs(window.dc - 1.5)).toBeLessThan(1e-3);
		for (const [order, rms, phase_deg] of truth) {
			expect(Math.abs(window.components[order]! - rms), `order ${order}`).toBeLessThan(2e-3);
			expect(Math.abs(window.phases_deg[order]! - phase_deg), `order ${order}`).toBeLessThan(0.1);
		}
		expect(window.components[120]).toBeLessThan(2e-3);
	});

	it('draws the wave between the samples, so that all its orders together leave nothing out', () => {
		const points = 640;
		const cycles = 2;
		const wave = drawWave(samples, start, (length * cycles) / 10, points);
		for (let n = 0; n < points; n++) {
			const angle = (2 * Math.PI * cycles * n) / points;
			const expected = truth.reduce(
				(sum, [order, rms, phase_deg]) =>
					sum + rms * Math.SQRT2 * Math.cos(order * angle + (phase_deg * Math.PI) / 180),
				1.5
			);
			expect(Math.abs(wave[n]! - expected), `point ${n}`).toBeLessThan(4e-3);
		}
	});

	it('is no data when a sample is missing', () => {
		const holed = samples.slice();
		holed[500] = NaN;
		expect(readWholeBand(holed, start, length, 10).components[1]).toBeNaN();
	});
});
