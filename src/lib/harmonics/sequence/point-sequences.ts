import { ORDER_STRIDE } from '../intervals';
import { angleOf_deg } from '../order-phasors';
import {
	currentReader,
	voltageReader,
	type ConductorReader,
	type PointWindows
} from '../power/point-windows';
import { lineVoltageDeviation_pct } from './line-deviation';
import { sequenceOfOrder, type Rotation } from './order-sequences';

/** One sequence at every order, over the windows chosen; [ORDER_STRIDE], NaN = not known. Index 0 is dc: zero sequence only. */
export interface SequenceRow {
	/** Root mean square of the windows. */
	rms: Float64Array;
	/** Angle of the sum of the windows' phasors, referred to the fundamental of the reference channel. */
	phase_deg: Float64Array;
}

export interface QuantitySequences {
	positive: SequenceRow;
	negative: SequenceRow;
	/** All NaN where only line-to-line voltages are measured. */
	zero: SequenceRow;
	/** Of the fundamental, percent of its positive sequence: root mean square of the windows' ratios. */
	u2_pct: number;
	u0_pct: number;
}

export interface PointSequences {
	/** By the voltages, else by the currents. */
	rotation: Rotation;
	rotationFrom: 'voltage' | 'current';
	/** Windows in which every conductor has data. */
	windowCount: number;
	voltage: QuantitySequences | null;
	current: QuantitySequences | null;
	/** Greatest deviation of the line-to-line fundamentals from their mean, percent; NaN without three. */
	lineDeviation_pct: number;
	/** Line-to-line fundamentals L1–L2, L2–L3, L3–L1, V. */
	lineToLine_V: [number, number, number] | null;
}

type Sense = 0 | 1 | -1;
const SENSES: readonly Sense[] = [1, -1, 0];

/** Sums of one quantity over windows, by sense for conductors that turn L1–L2–L3. */
class SequenceSums {
	readonly #squares = SENSES.map(() => new Float64Array(ORDER_STRIDE));
	readonly #re = SENSES.map(() => new Float64Array(ORDER_STRIDE));
	readonly #im = SENSES.map(() => new Float64Array(ORDER_STRIDE));
	/** Sums of (X2/X1)², (X0/X1)² and, for the other rotation, (X1/X2)², (X0/X2)². */
	readonly #ratios = new Float64Array(4);
	readonly pairs = new Float64Array(3);
	count = 0;

	constructor(
		readonly origin: ConductorReader['origin'],
		readonly highestOrder: number
	) {}

	add(reader: ConductorReader, window: number): void {
		if (!reader.read(window)) return;
		const [a, b, c] = reader.phasors as [
			ConductorReader['phasors'][0],
			ConductorReader['phasors'][0],
			ConductorReader['phasors'][0]
		];
		const first = [0, 0, 0];
		for (let order = 0; order <= this.highestOrder; order++) {
			SENSES.forEach((sense, s) => {
				const { re, im } = sequenceOfOrder(a, b, c, order, sense);
				const square = re * re + im * im;
				this.#squares[s]![order]! += square;
				this.#re[s]![order]! += re;
				this.#im[s]![order]! += im;
				if (order === 1) first[s] = square;
			});
		}
		const [positive, negative, zero] = first as [number, number, number];
		this.#ratios[0]! += negative / positive;
		this.#ratios[1]! += zero / positive;
		this.#ratios[2]! += positive / negative;
		this.#ratios[3]! += zero / negative;
		reader.phasors.forEach((phasor, i) => {
			const next = reader.phasors[(i + 1) % 3]!;
			this.pairs[i]! += (phasor.re[1]! - next.re[1]!) ** 2 + (phasor.im[1]! - next.im[1]!) ** 2;
		});
		this.count++;
	}

	get turns(): Rotation {
		return this.#squares[1]![1]! > this.#squares[0]![1]! ? 'L1-L3-L2' : 'L1-L2-L3';
	}

	finish(rotation: Rotation): QuantitySequences {
		const [positive, negative] = rotation === 'L1-L2-L3' ? [0, 1] : [1, 0];
		const ratio = rotation === 'L1-L2-L3' ? 0 : 2;
		const withoutZero = this.origin === 'virtual-star';
		const percent = (sum: number) => {
			const value = 100 * Math.sqrt(sum / this.count);
			return Number.isFinite(value) ? value : NaN;
		};
		return {
			positive: this.#row(positive!),
			negative: this.#row(negative!),
			zero: withoutZero ? emptyRow() : this.#row(2),
			u2_pct: percent(this.#ratios[ratio]!),
			u0_pct: withoutZero ? NaN : percent(this.#ratios[ratio + 1]!)
		};
	}

	#row(sense: number): SequenceRow {
		const row = emptyRow();
		for (let order = 0; order <= this.highestOrder; order++) {
			// Direct quantities do not turn: they have a zero sequence and nothing else.
			if (order === 0 && SENSES[sense] !== 0) continue;
			row.rms[order] = Math.sqrt(this.#squares[sense]![order]! / this.count);
			row.phase_deg[order] = angleOf_deg(this.#re[sense]![order]!, this.#im[sense]![order]!);
		}
		return row;
	}
}

function emptyRow(): SequenceRow {
	return {
		rms: new Float64Array(ORDER_STRIDE).fill(NaN),
		phase_deg: new Float64Array(ORDER_STRIDE).fill(NaN)
	};
}

/**
 * Gathers windows, stretch after stretch, from which the symmetrical components of every order of a three-phase point
 * follow.
 * source  Fortescue's transformation per order; u2 and u0: IEC 61000-4-30:2015, 5.7 (from memory)
 */
export class PointSequenceSums {
	#voltage: SequenceSums | null = null;
	#current: SequenceSums | null = null;

	/** windows: indexes; those in which a conductor has no data are left out. */
	add(point: PointWindows, windows: readonly number[]): void {
		if (point.system !== 'three-wire' && point.system !== 'four-wire') return;
		const voltages = threeOf(voltageReader(point));
		const currents = threeOf(currentReader(point));
		if (voltages) this.#voltage ??= new SequenceSums(voltages.origin, point.highestOrder);
		if (currents) this.#current ??= new SequenceSums(currents.origin, point.highestOrder);
		for (const window of windows) {
			if (voltages) this.#voltage?.add(voltages, window);
			if (currents) this.#current?.add(currents, window);
		}
	}

	/**
	 * Sequences named after the rotation found at the fundamental; null for a point without three phases or where neither
	 * three voltages nor three currents are measured.
	 */
	finish(): PointSequences | null {
		const voltage = this.#voltage?.count ? this.#voltage : null;
		const current = this.#current?.count ? this.#current : null;
		const leading = voltage ?? current;
		if (!leading) return null;
		const rotation = leading.turns;
		const pairs = voltage
			? ([0, 1, 2].map((i) => Math.sqrt(voltage.pairs[i]! / voltage.count)) as [number, number, number])
			: null;
		return {
			rotation,
			rotationFrom: voltage ? 'voltage' : 'current',
			windowCount: leading.count,
			voltage: voltage?.finish(rotation) ?? null,
			current: current?.finish(rotation) ?? null,
			lineDeviation_pct: pairs ? lineVoltageDeviation_pct(...pairs) : NaN,
			lineToLine_V: pairs
		};
	}
}

function threeOf(reader: ConductorReader | null): ConductorReader | null {
	return reader?.phases.length === 3 ? reader : null;
}

/** Sequences of the windows of one stretch; see PointSequenceSums. */
export function pointSequences(point: PointWindows, windows: readonly number[]): PointSequences | null {
	const sums = new PointSequenceSums();
	sums.add(point, windows);
	return sums.finish();
}
