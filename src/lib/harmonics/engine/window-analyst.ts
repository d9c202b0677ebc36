import { createSignalKernels } from '../../numerics/kernels/create-kernels';
import type { KernelShape, SignalKernels } from '../../numerics/kernels/signal-kernels';
import { squaresAtEnds } from '../../numerics/stats/windowed-rms';
import type { CaptureSource } from '../../recording/sample-source';
import { createHalfCycles, measureHalfCycles, type HalfCycles } from '../events/half-cycle-rms';
import { ORDER_STRIDE } from '../intervals';
import { meanProduct, phasePower } from '../powers';
import type { ChannelAnalysis, ChannelMapping, PhasePower } from '../waveform-analysis';
import type { TrackedWindow } from '../window-tracker';
import { emptyChannel, fillWindow, referPhases } from './channel-figures';
import { addPiece, addResolution, noFlatTops, type FlatTops } from './flat-tops';
import { addWindow, noSums, type ChannelSums } from './overall-figures';
import { SampleFeed } from './sample-feed';
import { kernelShapeFor, type SegmentPlan } from './segment-plan';

/** Figures of consecutive windows of one stretch. Plain data: it crosses to other threads. */
export interface WindowBlock {
	windows: TrackedWindow[];
	/** One per mapping, in its order. */
	channels: ChannelAnalysis[];
	/** Per pair of voltage and current. */
	powers: PhasePower[];
	/** Per mapping: sums over all windows of the block. */
	sums: ChannelSums[];
	/** Per mapping: Urms(1/2) of voltages in primary volts; null for currents. */
	halfCycles: (HalfCycleRows | null)[];
	/** Per mapping. */
	flatTops: FlatTops[];
	missingSamples: number[];
}

/** HalfCycles of consecutive windows. */
export interface HalfCycleRows {
	/** [windows] */
	first: Float64Array;
	/** [windows × 2·cyclesPerWindow] */
	rms: Float64Array;
}

export interface AnalystSetup {
	plan: SegmentPlan;
	mappings: readonly ChannelMapping[];
	/** Position in `mappings` of the channel that phases refer to. */
	reference: number;
	/** Positions in `mappings` of the voltage and current of one conductor. */
	pairs: readonly { voltage: number; current: number }[];
}

export type KernelFactory = (shape: KernelShape) => SignalKernels;

/** Turns tracked windows of one stretch into figures. Keeps buffers between calls; not to be shared between threads. */
export class WindowAnalyst {
	private readonly kernels: SignalKernels;
	private readonly feed: SampleFeed;
	private readonly lines: Float64Array;
	private readonly half: HalfCycles;
	/** Per mapping: seconds by which its samples are taken later than their instant says. */
	private readonly skews: number[];

	constructor(
		private readonly source: CaptureSource,
		private readonly setup: AnalystSetup,
		createKernels: KernelFactory = (shape) => createSignalKernels(shape)
	) {
		const { plan, mappings } = setup;
		this.kernels = createKernels(kernelShapeFor(plan, mappings.length, source.samples));
		const indexes = mappings.map((m) => m.channelIndex);
		this.feed = new SampleFeed(source.samples, source.sampleCount, indexes, this.kernels);
		this.lines = new Float64Array(plan.spectrum.lineCount);
		this.half = createHalfCycles(plan.cyclesPerWindow);
		this.skews = indexes.map((index) => source.channels[index]!.skew_s ?? 0);
	}

	/** windows  consecutive, in order of time; they may overlap at a tick */
	analyse(windows: readonly TrackedWindow[]): WindowBlock {
		const { mappings, pairs, plan } = this.setup;
		// Places in the buffer round differently by where it begins; figures must not depend on which thread had what before.
		this.feed.restart();
		const block: WindowBlock = {
			windows: [...windows],
			channels: mappings.map((m) => emptyChannel(this.source.channels[m.channelIndex]!, m, windows.length)),
			powers: [],
			sums: mappings.map(noSums),
			halfCycles: mappings.map((m) =>
				m.quantity === 'voltage' ? emptyHalfCycles(windows.length, plan.cyclesPerWindow) : null
			),
			flatTops: mappings.map(noFlatTops),
			missingSamples: mappings.map(() => 0)
		};
		const products_W = pairs.map(() => new Float64Array(windows.length).fill(NaN));
		windows.forEach((window, row) => this.addWindow(block, products_W, window, row));
		completeBlock(block, pairs, products_W);
		return block;
	}

	private addWindow(
		block: WindowBlock,
		products_W: Float64Array[],
		window: TrackedWindow,
		row: number
	): void {
		const { plan, mappings, reference, pairs } = this.setup;
		const { spectrum, cyclesPerWindow, stretch } = plan;
		const { kernels, feed } = this;
		const cycle = window.length / cyclesPerWindow;
		const end = window.start + window.length;
		const from = Math.floor(window.start) - kernels.guard;
		feed.cover(
			Math.max(stretch.fromSample, from),
			Math.min(stretch.toSample, Math.ceil(end + Math.max(kernels.guard, 1.1 * cycle)) + 3)
		);
		const start = window.start - feed.base;
		// Points stand in the middle of their steps: what is not synchronous jumps where the window closes, and a point on
		// the jump would count whole at one end and not at all at the other. All lines turn by k halves of a step.
		const step = window.length / spectrum.points;
		kernels.transformWindow(start + step / 2, step);
		mappings.forEach((_, m) => {
			const late = this.skews[m]! * stretch.samplingRate_Hz;
			if (late !== 0) turnBack(kernels.spectra[m]!, spectrum.lineCount, late / window.length);
		});
		const complete = mappings.map((_, m) => this.fill(block, window, row, m, start));
		const phase_deg = complete[reference]
			? block.channels[reference]!.phases_deg[row * ORDER_STRIDE + 1]!
			: NaN;
		mappings.forEach((mapping, m) => {
			if (mapping.quantity === 'voltage') this.addHalfCycles(block, window, row, m);
			referPhases(block.channels[m]!, row, phase_deg, spectrum.highestOrder);
		});
		pairs.forEach(({ voltage, current }, p) => {
			if (!complete[voltage] || !complete[current]) return;
			const product = meanProduct(
				kernels.spectra[voltage]!,
				kernels.spectra[current]!,
				spectrum.lineCount,
				spectrum.points
			);
			products_W[p]![row] = product * mappings[voltage]!.toPrimary * mappings[current]!.toPrimary;
		});
	}

	/** returns  false when a sample that the window needs is missing; its row then stays "no data" */
	private fill(block: WindowBlock, window: TrackedWindow, row: number, m: number, start: number): boolean {
		const { kernels, setup } = this;
		const { plan } = setup;
		const samples = kernels.samples[m]!;
		const first = Math.ceil(start);
		const last = Math.floor(start + window.length);
		const { squares, least, greatest } = kernels.stretch(m, first, last + 1);
		if (Number.isNaN(squares)) {
			block.missingSamples[m]! += countMissing(samples, first, Math.ceil(start + window.length));
			return false;
		}
		// Samples just outside feed the interpolation only; one missing there spoils the spectrum as well.
		if (Number.isNaN(kernels.spectra[m]![2])) return false;
		addPiece(block.flatTops[m]!, samples, first, last, least, greatest);
		if (row === 0) addResolution(block.flatTops[m]!, samples, first, last);
		const mean = (squares + squaresAtEnds(samples, start, start + window.length)) / window.length;
		fillWindow(
			block.channels[m]!,
			row,
			kernels.spectra[m]!,
			this.lines,
			plan.spectrum,
			plan.cyclesPerWindow,
			{ rms: Math.sqrt(mean), peak: Math.max(Math.abs(least), Math.abs(greatest)) }
		);
		return true;
	}

	private addHalfCycles(block: WindowBlock, window: TrackedWindow, row: number, m: number): void {
		const { kernels, setup, feed, source, half } = this;
		const rows = block.halfCycles[m]!;
		const { base } = feed;
		const end = Math.min(source.sampleCount, setup.plan.stretch.toSample, base + kernels.shape.capacity);
		const { cyclesPerWindow, spectrum } = setup.plan;
		const halfStep_deg = (180 * cyclesPerWindow) / spectrum.points;
		const phase_deg = block.channels[m]!.phases_deg[row * ORDER_STRIDE + 1]! - halfStep_deg;
		measureHalfCycles({ samples: kernels.samples[m]!, base, end }, window, phase_deg, half);
		const size = Math.abs(setup.mappings[m]!.toPrimary);
		rows.first[row] = half.first;
		for (let k = 0; k < half.rms.length; k++) rows.rms[row * half.rms.length + k] = half.rms[k]! * size;
	}
}

/** What follows from the channels of a block once all their windows are there: powers of the pairs, and sums. */
export function completeBlock(
	block: WindowBlock,
	pairs: readonly { voltage: number; current: number }[],
	products_W: readonly Float64Array[]
): void {
	block.powers = pairs.map(({ voltage, current }, p) =>
		phasePower(block.channels[voltage]!, block.channels[current]!, products_W[p]!)
	);
	block.channels.forEach((channel, m) => {
		for (let w = 0; w < block.windows.length; w++) addWindow(block.sums[m]!, channel, w);
	});
}

/**
 * Turns every line back by the delay of its channel, so that angles and powers between channels are those of one instant.
 * late  delay in lengths of the window: line k, with k cycles in it, turns by k·late
 */
function turnBack(spectrum: Float64Array, lineCount: number, late: number): void {
	for (let k = 1; k < lineCount; k++) {
		const angle = -2 * Math.PI * k * late;
		const cos = Math.cos(angle);
		const sin = Math.sin(angle);
		const re = spectrum[2 * k]!;
		const im = spectrum[2 * k + 1]!;
		spectrum[2 * k] = re * cos - im * sin;
		spectrum[2 * k + 1] = im * cos + re * sin;
	}
}

function countMissing(samples: Float64Array, from: number, to: number): number {
	let count = 0;
	for (let i = from; i < to; i++) if (Number.isNaN(samples[i]!)) count++;
	return count;
}

function emptyHalfCycles(windows: number, cyclesPerWindow: number): HalfCycleRows {
	return {
		first: new Float64Array(windows).fill(NaN),
		rms: new Float64Array(windows * 2 * cyclesPerWindow).fill(NaN)
	};
}
