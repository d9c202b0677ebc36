import type { ChannelMapping } from '../harmonics/waveform-analysis';
import type { Phase } from '../recording/phase';
import type { Recording } from '../recording/recording';

/** One order of an exact signal; whole cycles of the fundamental times the order. */
export interface OrderTone {
	order: number;
	rms: number;
	/** degrees, cosine convention, when the fundamental's own argument is 0. */
	phase_deg: number;
}

export interface FreeTone {
	frequency_Hz: number;
	rms: number;
	/** degrees, cosine convention, at t = 0. */
	phase_deg: number;
}

export interface ExactChannel {
	quantity: 'voltage' | 'current';
	phase: Phase;
	orders: readonly OrderTone[];
	others?: readonly FreeTone[];
	/** Sinusoidal modulation of the whole channel; depth 0.05 swings between 95 % and 105 %. */
	modulation?: { frequency_Hz: number; depth: number };
}

/** A signal that can be asked for its value at any instant, so that its truth needs no sampling. */
export interface ExactSignal {
	/** At t = 0. */
	frequency_Hz: number;
	ramp_HzPerSecond?: number;
	channels: readonly ExactChannel[];
}

/** Cycles of the fundamental since t = 0. */
export function cyclesAt({ frequency_Hz, ramp_HzPerSecond = 0 }: ExactSignal, time_s: number): number {
	return (frequency_Hz + (ramp_HzPerSecond * time_s) / 2) * time_s;
}

/** The instant at which the fundamental has made so many cycles. */
export function instantOf(signal: ExactSignal, cycles: number): number {
	const { frequency_Hz, ramp_HzPerSecond = 0 } = signal;
	// The stable form of the quadratic's root: no difference of nearly equal numbers where the ramp is slow.
	return (2 * cycles) / (frequency_Hz + Math.sqrt(frequency_Hz ** 2 + 2 * ramp_HzPerSecond * cycles));
}

/** Value of a channel as a function of time, s. */
export function valueFunction(signal: ExactSignal, channel: ExactChannel): (time_s: number) => number {
	const highest = channel.orders.reduce((top, { order }) => Math.max(top, order), 0);
	const cos = new Float64Array(highest + 1);
	const sin = new Float64Array(highest + 1);
	const rad = Math.PI / 180;
	for (const { order, rms, phase_deg } of channel.orders) {
		cos[order]! += Math.SQRT2 * rms * Math.cos(phase_deg * rad);
		sin[order]! -= Math.SQRT2 * rms * Math.sin(phase_deg * rad);
	}
	const { others = [], modulation } = channel;
	return (time_s) => {
		const cycles = cyclesAt(signal, time_s);
		const angle = 2 * Math.PI * (cycles - Math.floor(cycles));
		const c = Math.cos(angle);
		const s = Math.sin(angle);
		// Powers of one rotation, one order after the other: the rounding of fifty steps stays near 1e-14.
		let re = 1;
		let im = 0;
		let value = cos[0] ?? 0;
		for (let order = 1; order <= highest; order++) {
			const next = re * c - im * s;
			im = re * s + im * c;
			re = next;
			value += cos[order]! * re + sin[order]! * im;
		}
		for (const { frequency_Hz, rms, phase_deg } of others)
			value += Math.SQRT2 * rms * Math.cos(2 * Math.PI * frequency_Hz * time_s + phase_deg * rad);
		if (!modulation) return value;
		return value * (1 + modulation.depth * Math.cos(2 * Math.PI * modulation.frequency_Hz * time_s));
	};
}

/** Sampled with steps of fullScale/2^(bits−1). */
export interface Quantisation {
	bits: number;
	fullScale: number;
}

/** Samples an exact signal from t = 0. */
export function sampleSignal(
	signal: ExactSignal,
	samplingRate_Hz: number,
	duration_s: number,
	quantisation?: Quantisation
): { recording: Recording; mappings: ChannelMapping[] } {
	const sampleCount = Math.round(duration_s * samplingRate_Hz);
	const step = quantisation ? quantisation.fullScale / 2 ** (quantisation.bits - 1) : 0;
	const channels = signal.channels.map((channel, index) => {
		const valueAt = valueFunction(signal, channel);
		const samples = new Float64Array(sampleCount);
		for (let n = 0; n < sampleCount; n++) {
			const value = valueAt(n / samplingRate_Hz);
			samples[n] = step > 0 ? Math.round(value / step) * step : value;
		}
		const unit = channel.quantity === 'voltage' ? ('V' as const) : ('A' as const);
		return {
			index,
			name: `${unit}${index + 1}`,
			phaseHint: channel.phase,
			unitAsWritten: unit,
			baseUnit: unit,
			quantity: channel.quantity,
			samples,
			valuesAre: 'primary' as const,
			ratio: null,
			range: null
		};
	});
	return {
		recording: {
			kind: 'waveform',
			format: 'COMTRADE',
			variant: 'computed',
			stationName: '',
			recorderName: '',
			nominalFrequency_Hz: null,
			start: null,
			sampleCount,
			segments: [{ samplingRate_Hz, fromSample: 0, toSample: sampleCount }],
			timeStamps_s: null,
			channels,
			statusChannelNames: [],
			remarks: []
		},
		mappings: signal.channels.map(({ quantity, phase }, channelIndex) => ({
			channelIndex,
			quantity,
			phase,
			toPrimary: 1
		}))
	};
}
