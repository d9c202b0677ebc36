import type { Phase } from '../recording/phase';
import type { CaptureEvent } from './flag-windows';
import type { ChannelFlicker } from './flicker/follow-flicker';

/** A channel as the engineer confirmed it: what it measures, on which conductor, and how to reach primary values. */
export interface ChannelMapping {
	/** Index into Recording.channels. */
	channelIndex: number;
	quantity: 'voltage' | 'current';
	phase: Phase;
	/** Factor from the recorded value to the primary value in V or A: ratio × (−1 when reversed). */
	toPrimary: number;
}

/** Per-channel result over all 10/12-cycle windows of a capture. Matrices are [windowCount × ORDER_STRIDE], row by row. */
export interface ChannelAnalysis {
	mapping: ChannelMapping;
	name: string;
	unit: 'V' | 'A';
	/** [windowCount] true rms, dc included. */
	rms: Float64Array;
	/** [windowCount] mean value. */
	dc: Float64Array;
	/** [windowCount] greatest absolute sample in the window. */
	peak: Float64Array;
	/** rms of the single spectral line at each order. */
	components: Float64Array;
	/** rms of the harmonic subgroup (line ±1) at each order, IEC 61000-4-7:2002+A1:2008, 3.2/5.6. Index 0: |dc|. */
	subgroups: Float64Array;
	/** rms of the harmonic group at each order, IEC 61000-4-7:2002+A1:2008, 3.2.3; index 0 is not used. */
	groups: Float64Array;
	/** rms of the interharmonic centred subgroup between order h and h+1; index 0 lies below the fundamental. */
	interharmonicSubgroups: Float64Array;
	/** rms of the interharmonic group between order h and h+1; index 0 lies below the fundamental. */
	interharmonicGroups: Float64Array;
	/** degrees, cosine convention, each order referred to the fundamental of the reference channel: φ_h − h·φ_ref,1; (−180, 180]. */
	phases_deg: Float64Array;
	/** [windowCount] √Σ_{2..H}(subgroup²)/subgroup₁ in percent; NaN when there is no fundamental. */
	thd_pctOfFundamental: Float64Array;
}

export type QualitySeverity = 'blocks' | 'warns' | 'notes';

/** A finding about the capture itself, made before anybody reads a verdict. */
export interface QualityRemark {
	severity: QualitySeverity;
	/** Stable code: `clipped`, `dead-channel`, `reversed-ct`, `wrong-nominal-frequency`, `rate-too-low`, … */
	code: string;
	/** What was found, with figures, and what to do about it. */
	sentence: string;
	/** Index into Recording.channels, or null when the whole capture is meant. */
	channelIndex: number | null;
}

/** Powers of one phase, window by window; load convention: P > 0 flows into the installation. Arrays are [windowCount]. */
export interface PhasePower {
	phase: Phase;
	voltageChannelIndex: number;
	currentChannelIndex: number;
	/** Mean of u·i over the window, harmonics included. */
	activePower_W: Float64Array;
	fundamentalActivePower_W: Float64Array;
	/** Positive when the current lags. */
	fundamentalReactivePower_var: Float64Array;
	/** cos φ1. */
	displacementFactor: Float64Array;
	/** P/(U·I), true rms. */
	powerFactor: Float64Array;
}

/** Consecutive windows of a capture with the figures of every mapped channel. Arrays are [windowCount]. */
export interface WaveformWindows {
	windowCount: number;
	/** Offset of the window start from sample 0, seconds. */
	windowStarts_s: Float64Array;
	/** Window length, seconds (N cycles of the measured fundamental). */
	windowLengths_s: Float64Array;
	/** Measured fundamental, Hz; NaN where it could not be measured. */
	frequency_Hz: Float64Array;
	/** 1 = flagged. */
	flagged: Uint8Array;
	/** 1 = first window of a train that starts at a ten-minute tick; it overlaps the one before. */
	resync: Uint8Array;
	channels: ChannelAnalysis[];
	/** One entry per phase with a voltage to neutral and a current; empty when there is none. */
	powers: PhasePower[];
}

/** What holds for a capture as a whole. */
export interface CaptureFindings {
	engineVersion: string;
	nominalFrequency_Hz: 50 | 60;
	/** 10 at 50 Hz, 12 at 60 Hz. */
	cyclesPerWindow: 10 | 12;
	/** Channel whose fundamental sets the window length and the phase reference; index into Recording.channels. */
	referenceChannelIndex: number;
	/** Highest order that the sampling rate supports, at most MAX_ORDER; orders above it are NaN. */
	highestOrder: number;
	/** Mean over the windows in which it could be measured, Hz. */
	meanFrequency_Hz: number;
	/** Every channel as one row: all windows without a flag taken together (all windows, where each has one). */
	whole: ChannelAnalysis[];
	/** Dips, swells and interruptions; null when no nominal voltage was given and nothing could be looked for. */
	events: CaptureEvent[] | null;
	/** Voltages for which a ten-minute interval of the clock was filled; empty when there is none. */
	flicker: ChannelFlicker[];
	quality: QualityRemark[];
}

/** What the analyser makes of one waveform recording (IEC 61000-4-7 windows, synchronised to the measured fundamental). */
export type WaveformAnalysis = CaptureFindings & WaveformWindows;
