import type { SteadyCase } from './steady-tones';

export const FUNDAMENTALS_HZ = {
	50: [42.5, 44.17, 46.13, 47.9, 49.5, 49.98, 50, 50.03, 51.3, 52.81, 55, 57.5],
	60: [51, 53.37, 55.5, 57.9, 59.95, 60, 60.02, 61.7, 63.71, 66.2, 69]
} as const;

export const SAMPLING_RATES_HZ = [
	6400, 7680, 8000, 9600, 10_000, 12_500, 12_800, 15_360, 16_000, 20_000, 25_600, 30_000, 44_100, 48_000,
	50_000, 96_000, 100_000, 204_800
] as const;

/** Every fundamental at every rate, and at exactly 128 samples a cycle. */
export function steadyGrid(bits: number | null): SteadyCase[] {
	return ([50, 60] as const).flatMap((nominalFrequency_Hz) =>
		FUNDAMENTALS_HZ[nominalFrequency_Hz].flatMap((frequency_Hz) =>
			[128 * frequency_Hz, ...SAMPLING_RATES_HZ].map((samplingRate_Hz) => ({
				nominalFrequency_Hz,
				frequency_Hz,
				samplingRate_Hz,
				bits
			}))
		)
	);
}
