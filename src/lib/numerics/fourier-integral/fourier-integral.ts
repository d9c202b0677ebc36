import type { LinePieces, PieceValues } from './line-pieces';

/** Half angles below this are taken by the series: its remainder is below 2e-16 there. */
const SERIES_BELOW = 0.25;
/** The rotating pointers are set afresh after so many steps; what they lose in between stays near 1e-15. */
const RENEW_EVERY = 32;

/** sin θ/θ by its series, of s = θ² */
function evenSeries(s: number): number {
	return 1 - s * (1 / 6 - s * (1 / 120 - s * (1 / 5040 - s * (1 / 362880 - s / 39916800))));
}

/** (sin θ − θ cos θ)/θ³ by its series, of s = θ² */
function oddSeries(s: number): number {
	return 1 / 3 - s * (1 / 30 - s * (1 / 840 - s * (1 / 45360 - s * (1 / 3991680 - s / 518918400))));
}

/** sin θ/θ */
function evenPart(theta: number): number {
	return Math.abs(theta) < SERIES_BELOW ? evenSeries(theta * theta) : Math.sin(theta) / theta;
}

/** (sin θ − θ cos θ)/θ², the odd companion of sin θ/θ; by its series near 0, where the difference loses its digits. */
function oddPart(theta: number): number {
	if (Math.abs(theta) < SERIES_BELOW) return theta * oddSeries(theta * theta);
	return (Math.sin(theta) - theta * Math.cos(theta)) / (theta * theta);
}

/**
 * Fourier integral ∫ x(t)·exp(−jω(t − from)) dt of a piecewise-linear function over the span of its pieces.
 *
 * On a piece of length Δ with middle value m and half rise r, integration by parts gives
 * Δ·exp(−jω·t_mid)·(m·sin θ/θ − j·r·(sin θ − θ cos θ)/θ²), θ = ωΔ/2; both factors are smooth at θ = 0.
 *
 * omega    radians per unit of time, any sign, 0 allowed
 * returns  re and im, unit of the values times that of time; NaN when a point is missing
 * error    exact for the piecewise-linear function but for rounding: about 1e-15 of ∫|x|dt
 */
export function fourierIntegral(
	pieces: LinePieces,
	values: PieceValues,
	omega: number
): { re: number; im: number } {
	let re = 0;
	let im = 0;
	for (let p = 0; p < pieces.count; p++) {
		const length = pieces.lengths[p]!;
		const theta = (omega * length) / 2;
		const even = length * values.middles[p]! * evenPart(theta);
		const odd = length * values.rises[p]! * oddPart(theta);
		const angle = omega * pieces.middles[p]!;
		const cos = Math.cos(angle);
		const sin = Math.sin(angle);
		re += even * cos - odd * sin;
		im -= even * sin + odd * cos;
	}
	return { re, im };
}

/**
 * The same integral at ω = 0, step, 2·step, … of several functions on the same pieces.
 * step       radians per unit of time, > 0
 * lineCount  K: number of frequencies
 * into       one array per function, [≥ 2K] interleaved re, im; written
 * cost       per piece and frequency two rotations, shared by all functions, and four products per function
 * error      below 1e-13 of ∫|x|dt for K up to some thousand
 */
export function fourierLines(
	pieces: LinePieces,
	functions: readonly PieceValues[],
	step: number,
	lineCount: number,
	into: readonly Float64Array[]
): void {
	const weights = createWeights(lineCount);
	for (const spectrum of into) spectrum.fill(0, 0, 2 * lineCount);
	for (let p = 0; p < pieces.count; p++) {
		fillWeights(weights, step, pieces.middles[p]!, pieces.lengths[p]!);
		const { evenRe, evenIm, oddRe, oddIm } = weights;
		for (let f = 0; f < functions.length; f++) {
			const middle = functions[f]!.middles[p]!;
			const rise = functions[f]!.rises[p]!;
			const spectrum = into[f]!;
			for (let k = 0, at = 0; k < lineCount; k++, at += 2) {
				spectrum[at]! += middle * evenRe[k]! + rise * oddRe[k]!;
				spectrum[at + 1]! += middle * evenIm[k]! + rise * oddIm[k]!;
			}
		}
	}
}

/** What one piece lends to every line: of its middle value (even) and of its half rise (odd). [lineCount] each. */
interface PieceWeights {
	evenRe: Float64Array;
	evenIm: Float64Array;
	oddRe: Float64Array;
	oddIm: Float64Array;
}

function createWeights(lineCount: number): PieceWeights {
	const row = () => new Float64Array(lineCount);
	return { evenRe: row(), evenIm: row(), oddRe: row(), oddIm: row() };
}

function fillWeights(weights: PieceWeights, step: number, middle: number, length: number): void {
	const { evenRe, evenIm, oddRe, oddIm } = weights;
	const lineCount = evenRe.length;
	const turn = step * middle;
	const halfTurn = (step * length) / 2;
	const turnCos = Math.cos(turn);
	const turnSin = Math.sin(turn);
	const halfCos = Math.cos(halfTurn);
	const halfSin = Math.sin(halfTurn);
	// Lines below this one are in the reach of the series.
	const closedFrom = Math.ceil(SERIES_BELOW / halfTurn);
	for (let from = 0; from < lineCount; from += RENEW_EVERY) {
		const to = Math.min(lineCount, from + RENEW_EVERY);
		const inSeries = Math.min(to, Math.max(from, closedFrom));
		let cos = Math.cos(from * turn);
		let sin = Math.sin(from * turn);
		for (let k = from; k < inSeries; k++) {
			const theta = k * halfTurn;
			const s = theta * theta;
			const even = length * evenSeries(s);
			const odd = length * theta * oddSeries(s);
			evenRe[k] = even * cos;
			evenIm[k] = -even * sin;
			oddRe[k] = -odd * sin;
			oddIm[k] = -odd * cos;
			const next = cos * turnCos - sin * turnSin;
			sin = sin * turnCos + cos * turnSin;
			cos = next;
		}
		if (inSeries === to) continue;
		let thetaCos = Math.cos(inSeries * halfTurn);
		let thetaSin = Math.sin(inSeries * halfTurn);
		for (let k = inSeries; k < to; k++) {
			const inverse = 1 / (k * halfTurn);
			const even = length * inverse * thetaSin;
			const odd = inverse * (even - length * thetaCos);
			evenRe[k] = even * cos;
			evenIm[k] = -even * sin;
			oddRe[k] = -odd * sin;
			oddIm[k] = -odd * cos;
			const next = cos * turnCos - sin * turnSin;
			sin = sin * turnCos + cos * turnSin;
			cos = next;
			const nextTheta = thetaCos * halfCos - thetaSin * halfSin;
			thetaSin = thetaSin * halfCos + thetaCos * halfSin;
			thetaCos = nextTheta;
		}
	}
}

/**
 * Share of a tone that is left when its samples are joined by straight lines: Σ Δ·(sin θ/θ)²/ΣΔ, θ = ωΔ/2, over the pieces.
 * It is what the Fourier integral of the joined samples of exp(jωt) gives at ω, however the instants lie.
 * returns  1 at ω = 0, falling; with even spacing (sin θ/θ)²
 */
export function interpolationResponse(pieces: LinePieces, omega: number): number {
	let sum = 0;
	let whole = 0;
	for (let p = 0; p < pieces.count; p++) {
		const length = pieces.lengths[p]!;
		const even = evenPart((omega * length) / 2);
		sum += length * even * even;
		whole += length;
	}
	return sum / whole;
}

/**
 * Tone near `frequency` seen through a Hann taper over the whole span of the pieces, by exact integration: the taper is a
 * constant and two exponentials, so that three Fourier integrals hold the tapered one.
 * frequency  cycles per unit of time; the span should hold a whole number of its cycles, ≥ 2
 * returns    amplitude, and phase (radians, cosine convention) at the middle of the span; NaN when a point is missing
 */
export function taperedIntegral(
	pieces: LinePieces,
	values: PieceValues,
	frequency: number
): { amplitude: number; phase_rad: number } {
	let span = 0;
	for (let p = 0; p < pieces.count; p++) span += pieces.lengths[p]!;
	const omega = 2 * Math.PI * frequency;
	const taper = (2 * Math.PI) / span;
	const at = fourierIntegral(pieces, values, omega);
	const below = fourierIntegral(pieces, values, omega - taper);
	const above = fourierIntegral(pieces, values, omega + taper);
	// The taper is 1 − cos(taper·t) with t from the start of the span.
	const re = at.re - (below.re + above.re) / 2;
	const im = at.im - (below.im + above.im) / 2;
	const turned = (omega * span) / 2;
	const phase_rad = Math.atan2(im, re) + turned;
	return {
		amplitude: (2 * Math.sqrt(re * re + im * im)) / span,
		phase_rad: phase_rad - 2 * Math.PI * Math.round(phase_rad / (2 * Math.PI))
	};
}
