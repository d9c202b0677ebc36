import type { QualityRemark } from '../waveform-analysis';
import type { OrderRow } from './order-row';

/**
 * How far a wave is from each symmetry: the rms of the part that breaks it, percent of the rms of all orders and dc.
 * 0 = perfectly symmetrical. NaN where there is no fundamental to align with, or no data.
 */
export interface WaveSymmetry {
	/** x(t + T/2) = −x(t): broken by dc and even orders. */
	halfWave_pctOfRms: number;
	/** Odd about the rising zero crossing of its own fundamental. */
	odd_pctOfRms: number;
	/** Even about the crest of its own fundamental. */
	even_pctOfRms: number;
	/** Half-wave and odd together: a quarter cycle tells all. */
	quarterWave_pctOfRms: number;
	/** Root-sum-square of the even orders, percent of the fundamental. */
	evenOrders_pctOfFundamental: number;
	/** The strongest even order; null when there is none. */
	strongestEven: { order: number; pctOfFundamental: number } | null;
	/** With its sign. */
	dc_pctOfFundamental: number;
}

/**
 * Symmetries of a wave from its orders; exact for the orders given, those without data are left out.
 * With ψ_h = φ_h − h·(φ_1 + 90°) the phase of order h at the fundamental's rising zero crossing, the wave is odd there
 * where all cos ψ_h and dc vanish; with χ_h = φ_h − h·φ_1 it is even at the crest where all sin χ_h vanish.
 * source  parts of a Fourier series by symmetry (any text on Fourier series)
 */
export function waveSymmetry(row: OrderRow): WaveSymmetry {
	const { dc, components, phases_deg } = row;
	let square = dc * dc;
	let even = 0;
	let oddBreaking = dc * dc;
	let evenBreaking = 0;
	let oddOrdersCos = 0;
	let strongest: { order: number; rms: number } | null = null;
	for (let order = 1; order < components.length; order++) {
		const rms = components[order]!;
		if (Number.isNaN(rms)) continue;
		square += rms * rms;
		const psi = radians(phases_deg[order]! - order * (phases_deg[1]! + 90));
		const chi = radians(phases_deg[order]! - order * phases_deg[1]!);
		// A phase is missing only where there is nothing to have one.
		const cosPart = rms > 0 ? (rms * Math.cos(psi)) ** 2 : 0;
		oddBreaking += cosPart;
		evenBreaking += rms > 0 ? (rms * Math.sin(chi)) ** 2 : 0;
		if (order % 2 === 1) {
			oddOrdersCos += cosPart;
			continue;
		}
		even += rms * rms;
		if (!strongest || rms > strongest.rms) strongest = { order, rms };
	}
	const fundamental = components[1]! > 0 ? components[1]! : NaN;
	const share = (part: number) => (square > 0 ? 100 * Math.sqrt(part / square) : NaN);
	const aligned = Number.isNaN(fundamental) ? NaN : 0;
	return {
		halfWave_pctOfRms: share(dc * dc + even),
		odd_pctOfRms: share(oddBreaking) + aligned,
		even_pctOfRms: share(evenBreaking) + aligned,
		quarterWave_pctOfRms: share(dc * dc + even + oddOrdersCos) + aligned,
		evenOrders_pctOfFundamental: (100 * Math.sqrt(even)) / fundamental,
		strongestEven:
			strongest && strongest.rms > 0
				? { order: strongest.order, pctOfFundamental: (100 * strongest.rms) / fundamental }
				: null,
		dc_pctOfFundamental: (100 * dc) / fundamental
	};
}

function radians(degrees: number): number {
	return (degrees * Math.PI) / 180;
}

/**
 * How far one cycle is from half-wave symmetry, straight from its samples: rms of (x(t) + x(t + T/2))/2, percent of the rms.
 * cycle    [even number] samples of exactly one cycle
 * returns  NaN when a sample is missing or there is no signal
 */
export function halfWaveAsymmetry_pctOfRms(cycle: Float64Array): number {
	const half = cycle.length / 2;
	if (!Number.isInteger(half) || half === 0)
		throw new RangeError(`${cycle.length} samples have no two halves`);
	let part = 0;
	let square = 0;
	for (let n = 0; n < half; n++) {
		const first = cycle[n]!;
		const second = cycle[n + half]!;
		part += 2 * ((first + second) / 2) ** 2;
		square += first * first + second * second;
	}
	return square > 0 ? 100 * Math.sqrt(part / square) : NaN;
}

/** From these on, in percent of the fundamental, even orders or dc are worth a word; common practice. */
const TELLING_PCT = { voltage: { even: 1, dc: 0.5 }, current: { even: 3, dc: 1 } };

/**
 * A remark where even orders or dc hint at halves of the wave that differ; possible causes, not a diagnosis.
 * returns  null when there is nothing to say
 */
export function describeHalfWaveFault(
	symmetry: WaveSymmetry,
	channel: { name: string; quantity: 'voltage' | 'current'; channelIndex: number }
): QualityRemark | null {
	const { evenOrders_pctOfFundamental: even, dc_pctOfFundamental: dc, strongestEven } = symmetry;
	const telling = TELLING_PCT[channel.quantity];
	const hasEven = even >= telling.even && strongestEven !== null;
	const hasDc = Math.abs(dc) >= telling.dc;
	if (!hasEven && !hasDc) return null;
	const evenWords = hasEven
		? `even orders make up ${figure(even)} % of the fundamental (most of all order ${strongestEven.order} with ` +
			`${figure(strongestEven.pctOfFundamental)} %)`
		: null;
	const dcWords = hasDc ? `a constant part of ${figure(dc)} %` : null;
	const found =
		evenWords && dcWords
			? `${evenWords}, with ${dcWords}`
			: (evenWords ?? `${dcWords} of the fundamental stands beside hardly any even orders`);
	return {
		severity: 'notes',
		code: 'half-waves-differ',
		channelIndex: channel.channelIndex,
		sentence: `${channel.name}: ${found}; the positive and negative half-waves differ. ${causes(hasEven, hasDc)}`
	};
}

function causes(hasEven: boolean, hasDc: boolean): string {
	if (hasEven && hasDc)
		return 'Possible causes to look for: a half-wave rectifier, a thyristor pair fired unequally or with one valve failed, a transformer biased by direct current.';
	if (hasEven)
		return 'Possible causes to look for: unequal firing of a converter, a transformer biased by direct current upstream, an arc furnace, or a load that changed during the window.';
	return 'Check the zero of the sensor first; then look for a source of direct current.';
}

function figure(value: number): string {
	return String(Number(value.toPrecision(3)));
}
