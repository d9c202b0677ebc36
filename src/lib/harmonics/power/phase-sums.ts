import { ORDER_STRIDE } from '../intervals';
import type { OrderPhasors } from '../order-phasors';
import type { PhaseLevels } from './apparent-power';

/** Powers of one phase by order, [ORDER_STRIDE], index 0 dc; NaN = not known. */
export interface OrderPowers {
	voltage_V: Float64Array;
	current_A: Float64Array;
	/** P_h, load convention. */
	activePower_W: Float64Array;
	/** Q_h, positive when the current lags. */
	reactivePower_var: Float64Array;
	/** Share of the windows whose P_h has the sign of the mean (0 … 1). */
	agreeingShare: Float64Array;
}

/** Sums over windows from which the powers of one phase follow. */
export class PhaseSums {
	readonly #voltage = new Float64Array(ORDER_STRIDE);
	readonly #current = new Float64Array(ORDER_STRIDE);
	readonly #active = new Float64Array(ORDER_STRIDE);
	readonly #reactive = new Float64Array(ORDER_STRIDE);
	readonly #positive = new Float64Array(ORDER_STRIDE);
	readonly #negative = new Float64Array(ORDER_STRIDE);
	#voltageSquares = 0;
	#currentSquares = 0;
	#samplePower = 0;
	/** [ORDER_STRIDE] P_h of the window last added. */
	readonly lastActive = new Float64Array(ORDER_STRIDE);

	constructor(readonly highestOrder: number) {}

	/** voltageSquare, currentSquare: mean squares with everything in; samplePower_W: mean of u·i, NaN where not kept. */
	add(
		voltage: OrderPhasors,
		current: OrderPhasors,
		voltageSquare: number,
		currentSquare: number,
		samplePower_W: number
	): void {
		for (let order = 0; order <= this.highestOrder; order++) {
			const uRe = voltage.re[order]!;
			const uIm = voltage.im[order]!;
			const iRe = current.re[order]!;
			const iIm = current.im[order]!;
			const active = uRe * iRe + uIm * iIm;
			this.lastActive[order] = active;
			this.#voltage[order]! += uRe * uRe + uIm * uIm;
			this.#current[order]! += iRe * iRe + iIm * iIm;
			this.#active[order]! += active;
			this.#reactive[order]! += uIm * iRe - uRe * iIm;
			if (active > 0) this.#positive[order]! += 1;
			else if (active < 0) this.#negative[order]! += 1;
		}
		this.#voltageSquares += voltageSquare;
		this.#currentSquares += currentSquare;
		this.#samplePower += samplePower_W;
	}

	levels(count: number, fromSamples: boolean): PhaseLevels {
		let orders = 0;
		for (let order = 0; order <= this.highestOrder; order++) orders += this.#active[order]!;
		return {
			voltage_V: Math.sqrt(this.#voltageSquares / count),
			current_A: Math.sqrt(this.#currentSquares / count),
			fundamentalVoltage_V: Math.sqrt(this.#voltage[1]! / count),
			fundamentalCurrent_A: Math.sqrt(this.#current[1]! / count),
			activePower_W: (fromSamples ? this.#samplePower : orders) / count,
			fundamentalActivePower_W: this.#active[1]! / count,
			fundamentalReactivePower_var: this.#reactive[1]! / count
		};
	}

	orders(count: number): OrderPowers {
		const row = (value: (order: number) => number) =>
			Float64Array.from({ length: ORDER_STRIDE }, (_, order) =>
				order <= this.highestOrder ? value(order) : NaN
			);
		return {
			voltage_V: row((order) => Math.sqrt(this.#voltage[order]! / count)),
			current_A: row((order) => Math.sqrt(this.#current[order]! / count)),
			activePower_W: row((order) => this.#active[order]! / count),
			reactivePower_var: row((order) => this.#reactive[order]! / count),
			agreeingShare: row(
				(order) => (this.#active[order]! < 0 ? this.#negative[order]! : this.#positive[order]!) / count
			)
		};
	}
}
