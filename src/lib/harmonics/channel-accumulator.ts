import { executeRealDft } from '../numerics/dft/real-dft';
import { lineMean, linePhase_rad, readLineRms } from '../numerics/dft/spectral-lines';
import { windowedPeak, windowedRms } from '../numerics/stats/windowed-rms';
import type { RecordingChannel } from '../recording/recording';
import { thd_pctOfFundamental } from './distortion';
import { harmonicSubgroup } from './harmonic-subgroup';
import { interharmonicCentredSubgroup } from './interharmonics';
import { ORDER_STRIDE } from './intervals';
import { wrapDegrees } from './phasor';
import type { WindowSpectrumPlan } from './window-spectrum';
import type { TrackedWindow } from './window-tracker';
import type { ChannelAnalysis, ChannelMapping } from './waveform-analysis';

/** Gathers the figures of one channel, window by window. */
export class ChannelAccumulator {
	/** [≥ points] the window in hand, resampled, in primary values once `finishWindow` has run. */
	readonly window: Float64Array;
	readonly samples: Float64Array;
	readonly mapping: ChannelMapping;
	private readonly name: string;
	private readonly hasMissing: boolean;
	private readonly lines: Float64Array;
	private readonly rms: Float64Array;
	private readonly dc: Float64Array;
	private readonly peak: Float64Array;
	private readonly thd: Float64Array;
	private readonly components: Float64Array;
	private readonly subgroups: Float64Array;
	private readonly interharmonics: Float64Array;
	private readonly phases: Float64Array;

	constructor(
		channel: RecordingChannel,
		mapping: ChannelMapping,
		private readonly plan: WindowSpectrumPlan,
		private readonly cyclesPerWindow: 10 | 12,
		capacity: number
	) {
		this.mapping = mapping;
		this.name = channel.name;
		this.samples = channel.samples;
		this.hasMissing = containsMissing(channel.samples);
		this.window = new Float64Array(plan.points);
		this.lines = new Float64Array(plan.lineCount);
		this.rms = new Float64Array(capacity).fill(NaN);
		this.dc = new Float64Array(capacity).fill(NaN);
		this.peak = new Float64Array(capacity).fill(NaN);
		this.thd = new Float64Array(capacity).fill(NaN);
		this.components = new Float64Array(capacity * ORDER_STRIDE).fill(NaN);
		this.subgroups = new Float64Array(capacity * ORDER_STRIDE).fill(NaN);
		this.interharmonics = new Float64Array(capacity * ORDER_STRIDE).fill(NaN);
		this.phases = new Float64Array(capacity * ORDER_STRIDE).fill(NaN);
	}

	/** Whether a sample that the window needs is missing; such a window stays "no data". */
	isMissing(window: TrackedWindow): boolean {
		if (!this.hasMissing) return false;
		const guard = this.plan.interpolator.guard;
		const last = Math.ceil(window.start + window.length) + guard;
		for (let i = Math.floor(window.start) - guard; i <= last; i++) {
			if (Number.isNaN(this.samples[i])) return true;
		}
		return false;
	}

	/**
	 * Turns the resampled window into figures. Phases stay absolute (first point of the window) until `referPhases`.
	 * returns  phase of the fundamental, degrees
	 */
	finishWindow(index: number, window: TrackedWindow): number {
		const { plan, cyclesPerWindow, lines } = this;
		const scale = this.mapping.toPrimary;
		for (let m = 0; m < plan.points; m++) this.window[m]! *= scale;
		executeRealDft(plan.transform, this.window);
		readLineRms(plan.transform, lines, plan.lineCount);
		const row = index * ORDER_STRIDE;
		const end = window.start + window.length;
		this.rms[index] = windowedRms(this.samples, window.start, end) * Math.abs(scale);
		this.peak[index] = windowedPeak(this.samples, window.start, end) * Math.abs(scale);
		this.dc[index] = lineMean(plan.transform);
		this.components[row] = lines[0]!;
		this.subgroups[row] = lines[0]!;
		this.interharmonics[row] = interharmonicCentredSubgroup(lines, 0, cyclesPerWindow);
		for (let order = 1; order <= plan.highestOrder; order++) {
			const line = order * cyclesPerWindow;
			this.components[row + order] = lines[line]!;
			this.subgroups[row + order] = harmonicSubgroup(lines, line);
			this.phases[row + order] = (linePhase_rad(plan.transform, line) * 180) / Math.PI;
			if (order < plan.highestOrder || plan.reachesBeyondHighest) {
				this.interharmonics[row + order] = interharmonicCentredSubgroup(lines, line, cyclesPerWindow);
			}
		}
		this.thd[index] = thd_pctOfFundamental(
			this.subgroups.subarray(row, row + ORDER_STRIDE),
			this.rms[index]!,
			plan.highestOrder
		);
		return this.phases[row + 1]!;
	}

	/** Refers the phases of one window to the fundamental of the reference channel: φ_h − h·φ_ref,1. */
	referPhases(index: number, reference_deg: number): void {
		const row = index * ORDER_STRIDE;
		for (let order = 1; order <= this.plan.highestOrder; order++) {
			this.phases[row + order] = wrapDegrees(this.phases[row + order]! - order * reference_deg);
		}
	}

	toAnalysis(windowCount: number): ChannelAnalysis {
		const cells = windowCount * ORDER_STRIDE;
		return {
			mapping: this.mapping,
			name: this.name,
			unit: this.mapping.quantity === 'voltage' ? 'V' : 'A',
			rms: this.rms.slice(0, windowCount),
			dc: this.dc.slice(0, windowCount),
			peak: this.peak.slice(0, windowCount),
			components: this.components.slice(0, cells),
			subgroups: this.subgroups.slice(0, cells),
			interharmonicSubgroups: this.interharmonics.slice(0, cells),
			phases_deg: this.phases.slice(0, cells),
			thd_pctOfFundamental: this.thd.slice(0, windowCount)
		};
	}
}

function containsMissing(samples: Float64Array): boolean {
	for (let i = 0; i < samples.length; i++) if (samples[i] !== samples[i]) return true;
	return false;
}
