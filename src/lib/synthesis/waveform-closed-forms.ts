/**
 * Waves with known Fourier series, as functions of the angle θ in radians (period 2π), amplitude 1.
 * Series and sources: Zwillinger, CRC Standard Mathematical Tables and Formulae; pulses and bridge currents derived
 * from the Fourier integral. The values to order 25 stand in tests/reference.
 */
export type ClosedForm = (theta: number) => number;

const TWO_PI = 2 * Math.PI;

/** θ brought into [−π, π). */
function centred(theta: number): number {
	return theta - TWO_PI * Math.floor((theta + Math.PI) / TWO_PI);
}

/** +1 for 0 < θ < π, −1 for π < θ < 2π; b_n = 4/(nπ), n odd. */
export const squareWave: ClosedForm = (theta) => {
	const at = centred(theta);
	if (at === 0 || at === -Math.PI) return 0;
	return at > 0 ? 1 : -1;
};

/** θ/π for −π < θ < π; b_n = 2(−1)^(n+1)/(nπ). */
export const sawtoothWave: ClosedForm = (theta) => {
	const at = centred(theta);
	return at === -Math.PI ? 0 : at / Math.PI;
};

/** 1 − 2|θ|/π for −π < θ < π; a_n = 8/(π²n²), n odd. */
export const triangleWave: ClosedForm = (theta) => 1 - (2 * Math.abs(centred(theta))) / Math.PI;

/** θ² for −π < θ < π; dc π²/3, a_n = 4(−1)^n/n². */
export const parabolaWave: ClosedForm = (theta) => centred(theta) ** 2;

/**
 * Triangular pulses of height +1 at 0 and −1 at π, as a capacitor-input rectifier draws them; a_n = 4k·sinc²(nk), n odd.
 * k  half of a pulse's base as a share of the period, 0 < k ≤ 1/4
 */
export function trianglePulses(k: number): ClosedForm {
	const halfBase = TWO_PI * k;
	return (theta) =>
		Math.max(0, 1 - Math.abs(centred(theta)) / halfBase) -
		Math.max(0, 1 - Math.abs(centred(theta - Math.PI)) / halfBase);
}

/** Ideal six-pulse line current: blocks of 120°, +1 about 0 and −1 about π; a_n = 4 sin(nπ/3)/(nπ), n odd. */
export const sixPulseCurrent: ClosedForm = (theta) => {
	const away = Math.abs(centred(theta));
	const edge = Math.PI / 3;
	if (away === edge || away === Math.PI - edge) return away === edge ? 0.5 : -0.5;
	return away < edge ? 1 : away > Math.PI - edge ? -1 : 0;
};

/**
 * Six-pulse line current with commutation overlap at constant direct current 1; rises from θ = 0.
 * firing_rad   delay angle α, overlap_rad  μ > 0, α + μ < π
 * source       Kimbark, Direct Current Transmission, vol. 1, 1971 (from memory; checked by quadrature)
 */
export function sixPulseCurrentWithOverlap(firing_rad: number, overlap_rad: number): ClosedForm {
	const span = Math.cos(firing_rad) - Math.cos(firing_rad + overlap_rad);
	const commutated = (x: number) => (Math.cos(firing_rad) - Math.cos(firing_rad + x)) / span;
	const block = (2 * Math.PI) / 3;
	const halfWave = (at: number): number => {
		if (at < 0 || at >= block + overlap_rad) return 0;
		if (at < overlap_rad) return commutated(at);
		return at < block ? 1 : 1 - commutated(at - block);
	};
	return (theta) => {
		const at = theta - TWO_PI * Math.floor(theta / TWO_PI);
		return halfWave(at) - halfWave(at < Math.PI ? at + Math.PI : at - Math.PI);
	};
}

/** `count` samples of one period, from θ = 0 on. */
export function samplePeriod(wave: ClosedForm, count: number): Float64Array {
	return Float64Array.from({ length: count }, (_, n) => wave((TWO_PI * n) / count));
}
