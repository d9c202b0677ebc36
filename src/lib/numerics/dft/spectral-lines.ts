import type { RealDftPlan } from './real-dft';

/**
 * One-sided rms lines of the plan's last execution, convention as in convention.md.
 * out      [≥ count] receives |C[0]| … C[count−1]; note |mean| at index 0
 * count    number of lines wanted, ≤ plan.lineCount
 * returns  nothing; NaN samples give NaN in every line
 */
export function readLineRms(plan: RealDftPlan, out: Float64Array, count: number): void {
	const { spectrum, length } = plan;
	const scale = Math.SQRT2 / length;
	for (let k = 0; k < count; k++) {
		const re = spectrum[2 * k]!;
		const im = spectrum[2 * k + 1]!;
		out[k] = Math.sqrt(re * re + im * im) * scale;
	}
	if (count > 0) out[0] = Math.abs(spectrum[0]!) / length;
	const half = length / 2;
	if (Number.isInteger(half) && count > half) out[half] = Math.abs(spectrum[2 * half]!) / length;
}

/** Phase of line k in radians, cosine convention, at the first sample; (−π, π]. */
export function linePhase_rad(plan: RealDftPlan, k: number): number {
	return Math.atan2(plan.spectrum[2 * k + 1]!, plan.spectrum[2 * k]!);
}

/** Mean of the transformed samples, signed. */
export function lineMean(plan: RealDftPlan): number {
	return plan.spectrum[0]! / plan.length;
}
