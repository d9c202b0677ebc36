import { ORDER_STRIDE } from '../intervals';
import {
	emptyOrderPhasors,
	readOrderPhasors,
	squareOfOrders,
	type OrderPhasors,
	type WindowRows
} from '../order-phasors';
import {
	currentReader,
	lineConductors,
	type ConductorReader,
	type PointWindows
} from '../power/point-windows';

/** The neutral current over the windows chosen. Rows are [ORDER_STRIDE], index 0 dc; NaN = no data. */
export interface NeutralLevels {
	/** True rms where measured, of dc and orders where computed. */
	rms_A: number;
	/** rms of each order, root mean square of the windows. */
	orders_A: Float64Array;
	/** Share of rms² in the orders 3, 9, 15, … (0 … 1). */
	oddTriplenShare: number;
	/** Share of rms² in all multiples of three. */
	multiplesOfThreeShare: number;
}

export interface NeutralCurrent {
	windowCount: number;
	measured: NeutralLevels | null;
	/** Sum of the line currents; null where one of them is not measured. */
	computed: NeutralLevels | null;
	/** Where both exist. */
	comparison: {
		/** rms of the sum of phasors that are left over, A; dc and orders. */
		difference_A: number;
		/** In percent of the measured rms. */
		difference_pct: number;
		/** True when the measured one agrees with the sum turned round: its transducer points back to the source. */
		turned: boolean;
	} | null;
	/** Neutral rms beside the greatest line current, ratio of rms; NaN without line currents. */
	ratioToLine: number;
}

class ConductorSums {
	readonly #orders = new Float64Array(ORDER_STRIDE);
	#square = 0;

	add(phasors: OrderPhasors, square: number, highestOrder: number): void {
		for (let order = 0; order <= highestOrder; order++)
			this.#orders[order]! += phasors.re[order]! ** 2 + phasors.im[order]! ** 2;
		this.#square += square;
	}

	finish(count: number, highestOrder: number): NeutralLevels {
		const share = (every: number) => {
			let sum = 0;
			for (let order = 3; order <= highestOrder; order += every) sum += this.#orders[order]!;
			return this.#square > 0 ? sum / this.#square : NaN;
		};
		return {
			rms_A: Math.sqrt(this.#square / count),
			orders_A: this.#orders.map((sum, order) => (order <= highestOrder ? Math.sqrt(sum / count) : NaN)),
			oddTriplenShare: share(6),
			multiplesOfThreeShare: share(3)
		};
	}
}

/**
 * Gathers windows, stretch after stretch, from which the current of the neutral conductor follows, as measured and as
 * the sum of the line currents.
 * source  I_N = I_L1 + I_L2 + I_L3 as phasors per order (Kirchhoff); a balanced one is 3·√(I3² + I9² + …)
 */
export class NeutralCurrentSums {
	readonly #measured = new ConductorSums();
	readonly #computed = new ConductorSums();
	readonly #phasors = emptyOrderPhasors();
	readonly #sum = emptyOrderPhasors();
	readonly #lineSquares = new Float64Array(3);
	#has = { measured: false, computed: false };
	#straight = 0;
	#turned = 0;
	#highestOrder = 0;
	#count = 0;

	/** windows: indexes; those in which a conductor has no data are left out. */
	add(point: PointWindows, windows: readonly number[]): void {
		if (point.system === 'three-wire' || point.system === 'single-phase') return;
		const lines = currentReader(point);
		const own = point.currents.N;
		const complete = lines !== null && lines.phases.length === lineConductors(point).length;
		this.#has = { measured: own !== undefined, computed: complete };
		this.#highestOrder = point.highestOrder;
		if (!own && !complete) return;
		for (const window of windows) {
			if (complete && !lines.read(window)) continue;
			if (own && !this.#readMeasured(own, window)) continue;
			if (complete) this.#addLines(lines);
			if (complete && own) this.#compare();
			this.#count++;
		}
	}

	#readMeasured(own: WindowRows, window: number): boolean {
		readOrderPhasors(own, window, this.#highestOrder, this.#phasors);
		const square = own.rms[window]! ** 2;
		if (Number.isNaN(square) || Number.isNaN(this.#phasors.re[1]!)) return false;
		this.#measured.add(this.#phasors, square, this.#highestOrder);
		return true;
	}

	#addLines(lines: ConductorReader): void {
		addUp(lines.phasors, this.#highestOrder, this.#sum);
		this.#computed.add(this.#sum, squareOfOrders(this.#sum, this.#highestOrder), this.#highestOrder);
		lines.squares.forEach((square, i) => (this.#lineSquares[i]! += square));
	}

	#compare(): void {
		const { re, im } = this.#phasors;
		for (let order = 0; order <= this.#highestOrder; order++) {
			const sumRe = this.#sum.re[order]!;
			const sumIm = this.#sum.im[order]!;
			this.#straight += (re[order]! - sumRe) ** 2 + (im[order]! - sumIm) ** 2;
			this.#turned += (re[order]! + sumRe) ** 2 + (im[order]! + sumIm) ** 2;
		}
	}

	/**
	 * Null for a point without a neutral of its own (three-wire; single-phase, where it is the line current), or where it
	 * is neither measured nor computable.
	 */
	finish(): NeutralCurrent | null {
		const count = this.#count;
		if (count === 0) return null;
		const measured = this.#has.measured ? this.#measured.finish(count, this.#highestOrder) : null;
		const computed = this.#has.computed ? this.#computed.finish(count, this.#highestOrder) : null;
		const difference_A = Math.sqrt(Math.min(this.#straight, this.#turned) / count);
		const greatestLine_A = Math.sqrt(Math.max(...this.#lineSquares) / count);
		const rms_A = (measured ?? computed)!.rms_A;
		return {
			windowCount: count,
			measured,
			computed,
			comparison:
				measured && computed
					? {
							difference_A,
							difference_pct: measured.rms_A > 0 ? (100 * difference_A) / measured.rms_A : NaN,
							turned: this.#turned < this.#straight
						}
					: null,
			ratioToLine: greatestLine_A > 0 ? rms_A / greatestLine_A : NaN
		};
	}
}

/** The neutral current over the windows of one stretch; see NeutralCurrentSums. */
export function neutralCurrent(point: PointWindows, windows: readonly number[]): NeutralCurrent | null {
	const sums = new NeutralCurrentSums();
	sums.add(point, windows);
	return sums.finish();
}

function addUp(phasors: readonly OrderPhasors[], highestOrder: number, into: OrderPhasors): void {
	for (let order = 0; order <= highestOrder; order++) {
		let re = 0;
		let im = 0;
		for (const phasor of phasors) {
			re += phasor.re[order]!;
			im += phasor.im[order]!;
		}
		into.re[order] = re;
		into.im[order] = im;
	}
}
