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

/**
 * Powers of a point over one window or several taken together: rms levels by root mean square, powers by mean.
 * windows         indexes; those in which a conductor has no data are left out
 * samplePowers_W  [windowCount] by phase: mean of u·i where it was kept; without it P is the sum over the orders
 * returns         load convention, P > 0 into the installation; null when no phase has voltage and current
 * source          IEEE Std 1459-2010, 3.1.2 and 3.2.3 (from memory). In a three-wire system two wattmeters are enough: the
 *                 third current and the star voltages follow from what is measured, and P is the same.
 */
export function pointPower(
	point: PointWindows,
	windows: readonly number[],
	samplePowers_W: Partial<Record<LinePhase, Float64Array>> = {}
): PointPower | null {
	const voltages = voltageReader(point);
	const currents = currentReader(point);
	if (!voltages || !currents) return null;
	const phases = voltages.phases.filter((phase) => currents.phases.includes(phase));
	if (phases.length === 0) return null;
	const { highestOrder } = point;
	const fromSamples =
		voltages.origin === 'conductor' && phases.every((phase) => samplePowers_W[phase] !== undefined);
	const sums = phases.map(() => new PhaseSums(highestOrder));
	const complete = phases.length === lineConductors(point).length;
	const threePhase = complete && phases.length === 3;
	const effective = threePhase ? new EffectiveSums(point, voltages, currents) : null;
	const totalPerWindow = {
		positive: new Float64Array(ORDER_STRIDE),
		negative: new Float64Array(ORDER_STRIDE)
	};
	let count = 0;
	for (const window of windows) {
		const voltageRead = voltages.read(window);
		const currentRead = currents.read(window);
		if (!voltageRead || !currentRead || (effective && !effective.canRead(window))) continue;
		phases.forEach((phase, i) => {
			const u = voltages.phases.indexOf(phase);
			const c = currents.phases.indexOf(phase);
			sums[i]!.add(
				voltages.phasors[u]!,
				currents.phasors[c]!,
				voltages.squares[u]!,
				currents.squares[c]!,
				fromSamples ? samplePowers_W[phase]![window]! : NaN
			);
		});
		for (let order = 0; order <= highestOrder; order++) {
			const active = sums.reduce((sum, phase) => sum + phase.lastActive[order]!, 0);
			totalPerWindow.positive[order]! += active > 0 ? 1 : 0;
			totalPerWindow.negative[order]! += active < 0 ? 1 : 0;
		}
		effective?.add();
		count++;
	}
	if (count === 0) return null;
	const measured = sums.map((sum, i): PhasePowers => ({
		phase: phases[i]!,
		powers: singlePhasePower(sum.levels(count, fromSamples)),
		orders: sum.orders(count)
	}));
	const summed = measured.map(({ powers, orders }) => ({
		apparentPower_VA: powers.apparentPower_VA,
		activePower_W: powers.activePower_W,
		budeanuReactivePower_var: sumOfOrders(orders.reactivePower_var, highestOrder)
	}));
	const added = (pick: (powers: SinglePhasePower) => number) =>
		measured.reduce((sum, { powers }) => sum + pick(powers), 0);
	const totals = {
		activePower_W: added((p) => p.activePower_W),
		fundamentalActivePower_W: added((p) => p.fundamentalActivePower_W),
		fundamentalReactivePower_var: added((p) => p.fundamentalReactivePower_var)
	};
	return {
		windowCount: count,
		voltageOrigin: voltages.origin,
		computed: [...voltages.computed, ...currents.computed],
		activePowerFrom: fromSamples ? 'samples' : 'orders',
		phases: measured,
		total: complete
			? {
					...totals,
					orders: addOrders(measured, totalPerWindow, count),
					effective: effective ? threePhasePower({ ...effective.levels(count), ...totals }) : null,
					summed: voltages.origin === 'conductor' ? summedApparentPower(summed) : null,
					neutral: effective?.neutral ?? null
				}
			: null
	};
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
