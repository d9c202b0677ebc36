import { ORDER_STRIDE } from '../intervals';
import { singlePhasePower, type SinglePhasePower } from './apparent-power';
import { threePhasePower, type ThreePhasePower } from './effective-power';
import { EffectiveSums } from './effective-sums';
import {
	currentReader,
	lineConductors,
	voltageReader,
	type ConductorReader,
	type LinePhase,
	type PointWindows
} from './point-windows';
import { PhaseSums, type OrderPowers } from './phase-sums';
import { summedApparentPower, type SummedApparentPower } from './summed-apparent-power';

export interface PhasePowers {
	phase: LinePhase;
	powers: SinglePhasePower;
	orders: OrderPowers;
}

/** The same by order for all phases together; U and I are the roots of the phases' mean squares. */
export interface TotalOrderPowers extends OrderPowers {
	/** Σ U_h·I_h of the phases, VA: what P_h is compared with. */
	apparentPower_VA: Float64Array;
}

export interface PointPower {
	/** Windows in which every conductor has data. */
	windowCount: number;
	voltageOrigin: ConductorReader['origin'];
	/** Conductors or pairs that follow from the others. */
	computed: ConductorReader['computed'];
	/** Mean of u·i of the samples, or the sum of P_h over the orders with dc: without interharmonics. */
	activePowerFrom: 'samples' | 'orders';
	phases: PhasePowers[];
	/** Null while a conductor of the point is missing. */
	total: {
		orders: TotalOrderPowers;
		activePower_W: number;
		fundamentalActivePower_W: number;
		fundamentalReactivePower_var: number;
		/** Three-phase points only. */
		effective: ThreePhasePower | null;
		/** Null to a virtual star: its phases have no apparent power of their own. */
		summed: SummedApparentPower | null;
		/** Whether the neutral in I_e was measured; null without one. */
		neutral: 'measured' | 'computed' | null;
	} | null;
}

/** Mean of u·i of each window by phase, W, where it was kept. */
export type SamplePowers_W = Partial<Record<LinePhase, Float64Array>>;

/** What the first windows added decide for all. */
interface PowerPlan {
	phases: readonly LinePhase[];
	voltageOrigin: ConductorReader['origin'];
	computed: ConductorReader['computed'];
	fromSamples: boolean;
	/** Every line conductor of the point has voltage and current. */
	complete: boolean;
	effective: EffectiveSums | null;
	sums: PhaseSums[];
}

/**
 * Gathers windows, stretch after stretch, from which the powers of a point follow: rms levels by root mean square,
 * powers by mean.
 * source  IEEE Std 1459-2010, 3.1.2 and 3.2.3 (from memory). In a three-wire system two wattmeters are enough: the third
 *         current and the star voltages follow from what is measured, and P is the same.
 */
export class PointPowerSums {
	#plan: PowerPlan | null = null;
	readonly #positive = new Float64Array(ORDER_STRIDE);
	readonly #negative = new Float64Array(ORDER_STRIDE);
	#highestOrder = 0;
	#count = 0;

	/**
	 * point           every stretch with the same conductors
	 * windows         indexes into it; those in which a conductor has no data are left out
	 * samplePowers_W  where it is given for every phase P is its mean, else the sum over the orders
	 */
	add(point: PointWindows, windows: readonly number[], samplePowers_W: SamplePowers_W = {}): void {
		const voltages = voltageReader(point);
		const currents = currentReader(point);
		if (!voltages || !currents) return;
		this.#highestOrder = point.highestOrder;
		this.#plan ??= planPowers(point, voltages, currents, samplePowers_W);
		const { phases, fromSamples, effective, sums } = this.#plan;
		const places = phases.map(
			(phase) => [voltages.phases.indexOf(phase), currents.phases.indexOf(phase)] as const
		);
		for (const window of windows) {
			const voltageRead = voltages.read(window);
			const currentRead = currents.read(window);
			if (!voltageRead || !currentRead || (effective && !effective.canRead(point, window))) continue;
			places.forEach(([u, i], p) => {
				const sampled = fromSamples ? (samplePowers_W[phases[p]!]?.[window] ?? NaN) : NaN;
				sums[p]!.add(
					voltages.phasors[u]!,
					currents.phasors[i]!,
					voltages.squares[u]!,
					currents.squares[i]!,
					sampled
				);
			});
			this.#countSigns(sums);
			effective?.add(voltages, currents);
			this.#count++;
		}
	}

	#countSigns(sums: readonly PhaseSums[]): void {
		for (let order = 0; order <= this.#highestOrder; order++) {
			let active = 0;
			for (const sum of sums) active += sum.lastActive[order]!;
			if (active > 0) this.#positive[order]! += 1;
			else if (active < 0) this.#negative[order]! += 1;
		}
	}

	/** Load convention, P > 0 into the installation; null when no phase has voltage and current in any window. */
	finish(): PointPower | null {
		const plan = this.#plan;
		const count = this.#count;
		if (!plan || count === 0 || plan.phases.length === 0) return null;
		const phases = plan.sums.map((sum, i): PhasePowers => ({
			phase: plan.phases[i]!,
			powers: singlePhasePower(sum.levels(count, plan.fromSamples)),
			orders: sum.orders(count)
		}));
		return {
			windowCount: count,
			voltageOrigin: plan.voltageOrigin,
			computed: plan.computed,
			activePowerFrom: plan.fromSamples ? 'samples' : 'orders',
			phases,
			total: plan.complete ? this.#total(plan, phases, count) : null
		};
	}

	#total(plan: PowerPlan, phases: readonly PhasePowers[], count: number): PointPower['total'] {
		const added = (pick: (powers: SinglePhasePower) => number) =>
			phases.reduce((sum, { powers }) => sum + pick(powers), 0);
		const totals = {
			activePower_W: added((p) => p.activePower_W),
			fundamentalActivePower_W: added((p) => p.fundamentalActivePower_W),
			fundamentalReactivePower_var: added((p) => p.fundamentalReactivePower_var)
		};
		const summed = phases.map(({ powers, orders }) => ({
			apparentPower_VA: powers.apparentPower_VA,
			activePower_W: powers.activePower_W,
			budeanuReactivePower_var: sumOfOrders(orders.reactivePower_var, this.#highestOrder)
		}));
		return {
			...totals,
			orders: addOrders(phases, { positive: this.#positive, negative: this.#negative }, count),
			effective: plan.effective ? threePhasePower({ ...plan.effective.levels(count), ...totals }) : null,
			summed: plan.voltageOrigin === 'conductor' ? summedApparentPower(summed) : null,
			neutral: plan.effective?.neutral ?? null
		};
	}
}

function planPowers(
	point: PointWindows,
	voltages: ConductorReader,
	currents: ConductorReader,
	samplePowers_W: SamplePowers_W
): PowerPlan {
	const phases = voltages.phases.filter((phase) => currents.phases.includes(phase));
	const complete = phases.length === lineConductors(point).length;
	return {
		phases,
		voltageOrigin: voltages.origin,
		computed: [...voltages.computed, ...currents.computed],
		fromSamples:
			voltages.origin === 'conductor' && phases.every((phase) => samplePowers_W[phase] !== undefined),
		complete,
		effective: complete && phases.length === 3 ? new EffectiveSums(point) : null,
		sums: phases.map(() => new PhaseSums(point.highestOrder))
	};
}

/** Powers of a point over the windows of one stretch; see PointPowerSums. */
export function pointPower(
	point: PointWindows,
	windows: readonly number[],
	samplePowers_W: SamplePowers_W = {}
): PointPower | null {
	const sums = new PointPowerSums();
	sums.add(point, windows, samplePowers_W);
	return sums.finish();
}

function sumOfOrders(row: Float64Array, highestOrder: number): number {
	let sum = 0;
	for (let order = 1; order <= highestOrder; order++) sum += row[order]!;
	return sum;
}

function addOrders(
	phases: readonly PhasePowers[],
	signs: { positive: Float64Array; negative: Float64Array },
	count: number
): TotalOrderPowers {
	const row = (value: (order: number) => number) =>
		Float64Array.from({ length: ORDER_STRIDE }, (_, order) => value(order));
	const add = (pick: (orders: OrderPowers, order: number) => number) =>
		row((order) => phases.reduce((sum, { orders }) => sum + pick(orders, order), 0));
	const activePower_W = add((o, h) => o.activePower_W[h]!);
	return {
		voltage_V: add((o, h) => o.voltage_V[h]! ** 2 / phases.length).map(Math.sqrt),
		current_A: add((o, h) => o.current_A[h]! ** 2 / phases.length).map(Math.sqrt),
		activePower_W,
		reactivePower_var: add((o, h) => o.reactivePower_var[h]!),
		apparentPower_VA: add((o, h) => o.voltage_V[h]! * o.current_A[h]!),
		agreeingShare: row(
			(order) => (activePower_W[order]! < 0 ? signs.negative[order]! : signs.positive[order]!) / count
		)
	};
}
