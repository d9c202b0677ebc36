import { ORDER_STRIDE } from '../intervals';
import { emptyOrderPhasors, readOrderPhasors, squareOfOrders, type OrderPhasors } from '../order-phasors';
import { currentReader, lineConductors, type PointWindows } from '../power/point-windows';

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

class NeutralSums {
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
 * Current of the neutral conductor, measured and as the sum of the line currents.
 * windows  indexes; those in which a conductor has no data are left out
 * returns  null for a point without a neutral of its own (three-wire; single-phase, where it is the line current), or
 *          where it is neither measured nor computable
 * source   I_N = I_L1 + I_L2 + I_L3 as phasors per order (Kirchhoff); a balanced one is 3·√(I3² + I9² + …)
 */
export function neutralCurrent(point: PointWindows, windows: readonly number[]): NeutralCurrent | null {
	if (point.system === 'three-wire' || point.system === 'single-phase') return null;
	const { highestOrder } = point;
	const lines = currentReader(point);
	const own = point.currents.N;
	const complete = lines !== null && lines.phases.length === lineConductors(point).length;
	if (!own && !complete) return null;
	const measured = new NeutralSums();
	const computed = new NeutralSums();
	const lineSquares = new Float64Array(lines?.phases.length ?? 0);
	const phasors = emptyOrderPhasors();
	const sum = emptyOrderPhasors();
	const leftOver = { straight: 0, turned: 0 };
	let count = 0;
	for (const window of windows) {
		if (lines && !lines.read(window)) continue;
		if (own) {
			readOrderPhasors(own, window, highestOrder, phasors);
			if (Number.isNaN(own.rms[window]!) || Number.isNaN(phasors.re[1]!)) continue;
			measured.add(phasors, own.rms[window]! ** 2, highestOrder);
		}
		if (complete) {
			addUp(lines.phasors, highestOrder, sum);
			computed.add(sum, squareOfOrders(sum, highestOrder), highestOrder);
			lines.squares.forEach((square, i) => (lineSquares[i]! += square));
			if (own)
				for (let order = 0; order <= highestOrder; order++) {
					leftOver.straight +=
						(phasors.re[order]! - sum.re[order]!) ** 2 + (phasors.im[order]! - sum.im[order]!) ** 2;
					leftOver.turned +=
						(phasors.re[order]! + sum.re[order]!) ** 2 + (phasors.im[order]! + sum.im[order]!) ** 2;
				}
		}
		count++;
	}
	if (count === 0) return null;
	const measuredLevels = own ? measured.finish(count, highestOrder) : null;
	const computedLevels = complete ? computed.finish(count, highestOrder) : null;
	const difference_A = Math.sqrt(Math.min(leftOver.straight, leftOver.turned) / count);
	const greatestLine_A = Math.sqrt(Math.max(0, ...lineSquares) / count);
	const rms_A = (measuredLevels ?? computedLevels)!.rms_A;
	return {
		windowCount: count,
		measured: measuredLevels,
		computed: computedLevels,
		comparison:
			measuredLevels && computedLevels
				? {
						difference_A,
						difference_pct: measuredLevels.rms_A > 0 ? (100 * difference_A) / measuredLevels.rms_A : NaN,
						turned: leftOver.turned < leftOver.straight
					}
				: null,
		ratioToLine: greatestLine_A > 0 ? rms_A / greatestLine_A : NaN
	};
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
