import { fourierLines } from '../../numerics/fourier-integral/fourier-integral';
import {
	cutPieces,
	lastAtOrBefore,
	productIntegral,
	valuesOnPieces,
	type LinePieces
} from '../../numerics/fourier-integral/line-pieces';
import type { CaptureSource } from '../../recording/sample-source';
import { emptyChannel, fillWindow, referPhases } from '../engine/channel-figures';
import { addPiece, addResolution, noFlatTops } from '../engine/flat-tops';
import { readStretch } from '../engine/read-stretch';
import { noSums } from '../engine/overall-figures';
import { completeBlock, type AnalystSetup, type WindowBlock } from '../engine/window-analyst';
import { createHalfCycles, halfCyclesOf, type HalfCycles } from '../events/half-cycle-rms';
import { ORDER_STRIDE } from '../intervals';
import type { TrackedWindow } from '../window-tracker';
import { instantOf } from './uneven-stretches';

/** The samples that one block of windows needs. */
interface BlockSamples {
	/** [n] seconds */
	times: Float64Array;
	/** Per mapping, [n]. */
	values: Float64Array[];
}

/**
 * Turns tracked windows of one stretch into figures, every one of them the exact integral of the wave that straight lines
 * between the samples make: lines, mean, square, product of voltage and current, half-cycle rms.
 * The counterpart of WindowAnalyst; windows count in mean steps, see UnevenStretches.
 * error  of the piecewise-linear wave: rounding, about 1e-13; what the lines cut off is faithfulOrders' affair
 */
export class UnevenAnalyst {
	private readonly spectra: Float64Array[];
	private readonly lines: Float64Array;
	private readonly half: HalfCycles;

	constructor(
		private readonly source: CaptureSource,
		private readonly stamps_s: Float64Array,
		private readonly setup: AnalystSetup
	) {
		const { lineCount } = setup.plan.spectrum;
		this.spectra = setup.mappings.map(() => new Float64Array(2 * lineCount));
		this.lines = new Float64Array(lineCount);
		this.half = createHalfCycles(setup.plan.cyclesPerWindow);
	}

	/** windows  consecutive, in order of time; they may overlap at a tick */
	analyse(windows: readonly TrackedWindow[]): WindowBlock {
		const { mappings, pairs, plan } = this.setup;
		const empty = (length: number) => new Float64Array(length).fill(NaN);
		const block: WindowBlock = {
			windows: [...windows],
			channels: mappings.map((m) => emptyChannel(this.source.channels[m.channelIndex]!, m, windows.length)),
			powers: [],
			sums: mappings.map(noSums),
			halfCycles: mappings.map((m) =>
				m.quantity === 'voltage'
					? { first: empty(windows.length), rms: empty(windows.length * 2 * plan.cyclesPerWindow) }
					: null
			),
			flatTops: mappings.map(noFlatTops),
			missingSamples: mappings.map(() => 0)
		};
		const samples = this.samplesFor(windows);
		const products_W = pairs.map(() => empty(windows.length));
		windows.forEach((window, row) => this.addWindow(block, products_W, samples, window, row));
		completeBlock(block, pairs, products_W);
		return block;
	}

	private samplesFor(windows: readonly TrackedWindow[]): BlockSamples {
		const { plan, mappings } = this.setup;
		const { stretch, cyclesPerWindow } = plan;
		const times = this.stamps_s.subarray(stretch.fromSample, stretch.toSample);
		const first = windows[0]!;
		const last = windows.at(-1)!;
		// Half-cycle values that start in the last window end up to one cycle behind it.
		const end = last.start + last.length * (1 + 1.1 / cyclesPerWindow);
		const from = lastAtOrBefore(times, instantOf(stretch, this.stamps_s, first.start));
		const to = Math.min(times.length, lastAtOrBefore(times, instantOf(stretch, this.stamps_s, end)) + 2);
		return {
			times: times.subarray(from, to),
			values: readStretch(
				this.source,
				mappings.map((m) => m.channelIndex),
				stretch.fromSample + from,
				stretch.fromSample + to
			)
		};
	}

	private addWindow(
		block: WindowBlock,
		products_W: Float64Array[],
		samples: BlockSamples,
		window: TrackedWindow,
		row: number
	): void {
		const { plan, mappings, reference, pairs } = this.setup;
		const { stretch, spectrum } = plan;
		const { times, values } = samples;
		const start_s = instantOf(stretch, this.stamps_s, window.start);
		const length_s = window.length / stretch.samplingRate_Hz;
		const pieces = cutPieces(times, start_s, Math.min(start_s + length_s, times[times.length - 1]!));
		const onPieces = values.map((channel) => valuesOnPieces(pieces, channel));
		fourierLines(pieces, onPieces, (2 * Math.PI) / length_s, spectrum.lineCount, this.spectra);
		const complete = mappings.map((_, m) => {
			const wave = onPieces[m]!;
			const square = productIntegral(pieces, wave, wave) / length_s;
			const isComplete = !Number.isNaN(square);
			if (isComplete) this.fill(block, pieces, square, row, m, values[m]!);
			else block.missingSamples[m]! += countMissing(values[m]!, pieces);
			return isComplete;
		});
		const phase_deg = complete[reference]
			? block.channels[reference]!.phases_deg[row * ORDER_STRIDE + 1]!
			: NaN;
		mappings.forEach((mapping, m) => {
			if (mapping.quantity === 'voltage') this.addHalfCycles(block, samples, start_s, length_s, row, m);
			referPhases(block.channels[m]!, row, phase_deg, spectrum.highestOrder);
		});
		pairs.forEach(({ voltage, current }, p) => {
			const product = productIntegral(pieces, onPieces[voltage]!, onPieces[current]!) / length_s;
			products_W[p]![row] = product * mappings[voltage]!.toPrimary * mappings[current]!.toPrimary;
		});
	}

	private fill(
		block: WindowBlock,
		pieces: LinePieces,
		square: number,
		row: number,
		m: number,
		samples: Float64Array
	): void {
		const { plan } = this.setup;
		const spectrum = this.spectra[m]!;
		let length_s = 0;
		for (let p = 0; p < pieces.count; p++) length_s += pieces.lengths[p]!;
		for (let i = 0; i < spectrum.length; i++) spectrum[i]! /= length_s;
		const first = pieces.firstPoint + 1;
		const last = pieces.firstPoint + pieces.count;
		let least = Infinity;
		let greatest = -Infinity;
		for (let i = first; i < last; i++) {
			if (samples[i]! < least) least = samples[i]!;
			if (samples[i]! > greatest) greatest = samples[i]!;
		}
		addPiece(block.flatTops[m]!, samples, first, last, least, greatest);
		if (row === 0) addResolution(block.flatTops[m]!, samples, first, last);
		fillWindow(block.channels[m]!, row, spectrum, this.lines, plan.spectrum, plan.cyclesPerWindow, {
			rms: Math.sqrt(square),
			peak: Math.max(Math.abs(least), Math.abs(greatest))
		});
	}

	private addHalfCycles(
		block: WindowBlock,
		{ times, values }: BlockSamples,
		start_s: number,
		length_s: number,
		row: number,
		m: number
	): void {
		const { half, setup } = this;
		const rows = block.halfCycles[m]!;
		const end_s = times[times.length - 1]!;
		halfCyclesOf(
			(from, to) => {
				if (to > end_s) return NaN;
				const pieces = cutPieces(times, from, to);
				const wave = valuesOnPieces(pieces, values[m]!);
				return productIntegral(pieces, wave, wave);
			},
			{ start: start_s, length: length_s },
			block.channels[m]!.phases_deg[row * ORDER_STRIDE + 1]!,
			half
		);
		const size = Math.abs(setup.mappings[m]!.toPrimary);
		rows.first[row] = half.first;
		for (let k = 0; k < half.rms.length; k++) rows.rms[row * half.rms.length + k] = half.rms[k]! * size;
	}
}

function countMissing(samples: Float64Array, { firstPoint, count, head }: LinePieces): number {
	let missing = 0;
	for (let i = firstPoint + (head > 0 ? 1 : 0); i < firstPoint + count; i++) {
		if (Number.isNaN(samples[i]!)) missing++;
	}
	return missing;
}
