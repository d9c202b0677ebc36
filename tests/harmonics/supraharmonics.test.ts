import { describe, expect, it } from 'vitest';
import { supraharmonicBands, supraharmonicsOf } from '$lib/harmonics/supraharmonics';

const RATE_HZ = 51_200;

function tones(list: readonly (readonly [number, number])[], count = RATE_HZ / 10): Float64Array {
	return Float64Array.from({ length: count }, (_, n) =>
		list.reduce((sum, [f, rms]) => sum + rms * Math.SQRT2 * Math.sin((2 * Math.PI * f * n) / RATE_HZ + f), 0)
	);
}

// Bands as IEC 61000-4-7:2002+A1:2008, annex B, defines them (from memory).
describe('bands of 200 Hz between 2 and 9 kHz', () => {
	it('take the lines from 95 Hz below to 100 Hz above their centre, each line once', () => {
		const lines = new Float64Array(1000);
		lines[200] = 3;
		lines[201] = 4;
		lines[220] = 12;
		lines[221] = 5;
		const { centres_Hz, rms } = supraharmonicBands(lines, 10, 9990);
		expect([...centres_Hz]).toEqual(Array.from({ length: 35 }, (_, i) => 2100 + 200 * i));
		// 2000 Hz is outside; 2010 and 2200 Hz belong to the first band, 2210 Hz to the second.
		expect(rms[0]).toBeCloseTo(Math.hypot(4, 12), 12);
		expect(rms[1]).toBe(5);
	});

	it('end where the sampling rate does', () => {
		expect(supraharmonicsOf(new Float64Array(1280), 12_800)!.centres_Hz.at(-1)).toBe(5500);
		expect(supraharmonicsOf(new Float64Array(490), 4_900)!.centres_Hz).toHaveLength(1);
		expect(supraharmonicsOf(new Float64Array(400), 4_000)!.centres_Hz).toHaveLength(0);
		expect(supraharmonicsOf(new Float64Array(100), 12_800)).toBeNull();
	});

	it('read a switching ripple beside a mains voltage that is not synchronised', () => {
		const { centres_Hz, rms } = supraharmonicsOf(
			tones([
				[49.7, 230],
				[248.5, 8],
				[4127.3, 1.6]
			]),
			RATE_HZ
		)!;
		const at = [...centres_Hz].indexOf(4100);
		expect(Math.abs(rms[at]! / 1.6 - 1)).toBeLessThan(0.03);
		rms.forEach((level, i) => {
			if (i !== at) expect(level, `${centres_Hz[i]} Hz`).toBeLessThan(1e-4 * 230);
		});
	});

	it('hold next to nothing of a fundamental, wherever between the lines it lies, at any rate', () => {
		let most = 0;
		for (const rate_Hz of [6_400, 12_345, 51_200])
			for (let frequency_Hz = 42.5; frequency_Hz <= 69; frequency_Hz += 1.7)
				for (const start of [0, 1, 2, 3]) {
					const samples = Float64Array.from(
						{ length: Math.round(rate_Hz / 10) },
						(_, n) => Math.SQRT2 * Math.cos((2 * Math.PI * frequency_Hz * n) / rate_Hz + start)
					);
					most = Math.max(most, ...supraharmonicsOf(samples, rate_Hz)!.rms);
				}
		expect(most).toBeLessThan(1e-6);
	});

	it('read a tone within 70 Hz of their centre within 1e-4, on a line or between lines', () => {
		for (let distance_Hz = -70; distance_Hz <= 70; distance_Hz += 3.5) {
			const { centres_Hz, rms } = supraharmonicsOf(tones([[6500 + distance_Hz, 1]]), RATE_HZ)!;
			expect(Math.abs(rms[[...centres_Hz].indexOf(6500)]! - 1), `${distance_Hz} Hz`).toBeLessThan(1e-4);
		}
	});

	it('keep apart from an order 100 Hz below them', () => {
		expect(supraharmonicsOf(tones([[1899.3, 1]]), RATE_HZ)!.rms[0]).toBeLessThan(3e-4);
	});

	it('have no value where a sample is missing', () => {
		const samples = tones([[4100, 1]]);
		samples[7] = NaN;
		expect([...supraharmonicsOf(samples, RATE_HZ)!.rms].every(Number.isNaN)).toBe(true);
	});

	it('share the power of a tone near a border', () => {
		const { rms } = supraharmonicsOf(tones([[2204.9, 2]]), RATE_HZ)!;
		expect(Math.abs(Math.hypot(rms[0]!, rms[1]!) / 2 - 1)).toBeLessThan(0.01);
	});
});
