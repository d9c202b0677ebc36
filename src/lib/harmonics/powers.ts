import { ORDER_STRIDE } from './intervals';
import type { ChannelAnalysis, PhasePower } from './waveform-analysis';

/**
 * Mean of u·i over a window from the spectra of both, dc and every line that was kept: W for volts and amperes.
 * a, b       [≥ 2·lineCount] interleaved, convention of numerics/dft/convention.md, on the same window
 * points     length of the transform
 */
export function meanProduct(a: Float64Array, b: Float64Array, lineCount: number, points: number): number {
	let sum = (a[0]! * b[0]!) / 2;
	for (let k = 2; k < 2 * lineCount; k += 2) sum += a[k]! * b[k]! + a[k + 1]! * b[k + 1]!;
	return (2 * sum) / (points * points);
}

/**
 * Powers of one phase from its voltage to neutral and its current, window by window.
 * voltage, current   analyses on the same windows
 * activePower_W      [windowCount] mean of u·i over each window
 * returns            sign by the load convention: P > 0 into the load; Q1 > 0 inductive; NaN where data are missing
 * source             IEEE Std 1459-2010, 3.1.2 (from memory): P1 = U1·I1·cos φ1, Q1 = U1·I1·sin φ1, PF1 = P1/S1, PF = P/(U·I)
 */
export function phasePower(
	voltage: ChannelAnalysis,
	current: ChannelAnalysis,
	activePower_W: Float64Array
): PhasePower {
	const count = activePower_W.length;
	const power: PhasePower = {
		phase: current.mapping.phase,
		voltageChannelIndex: voltage.mapping.channelIndex,
		currentChannelIndex: current.mapping.channelIndex,
		activePower_W,
		fundamentalActivePower_W: new Float64Array(count),
		fundamentalReactivePower_var: new Float64Array(count),
		displacementFactor: new Float64Array(count),
		powerFactor: new Float64Array(count)
	};
	for (let w = 0; w < count; w++) {
		const at = w * ORDER_STRIDE + 1;
		const angle = ((voltage.phases_deg[at]! - current.phases_deg[at]!) * Math.PI) / 180;
		const apparent_VA = voltage.components[at]! * current.components[at]!;
		power.fundamentalActivePower_W[w] = apparent_VA * Math.cos(angle);
		power.fundamentalReactivePower_var[w] = apparent_VA * Math.sin(angle);
		power.displacementFactor[w] = apparent_VA > 0 ? Math.cos(angle) : NaN;
		const total_VA = voltage.rms[w]! * current.rms[w]!;
		power.powerFactor[w] = total_VA > 0 ? activePower_W[w]! / total_VA : NaN;
	}
	return power;
}
