import type { SinglePhasePower } from '../../../harmonics/power/apparent-power';
import {
	DIRECTION_CAVEAT,
	directionOf,
	directionOfTotal,
	type DirectionIndication,
	type DirectionQuestion
} from '../../../harmonics/power/direction';
import type { ThreePhasePower } from '../../../harmonics/power/effective-power';
import type { OrderPowers } from '../../../harmonics/power/phase-sums';
import { PointPowerSums, type PointPower, type SamplePowers_W } from '../../../harmonics/power/point-power';
import type { Phase } from '../../../recording/phase';
import { angleBudget } from '../../../uncertainty/angle-budget';
import type { MeasuringChain } from '../../../uncertainty/measuring-chain';
import { pointWindows, type PointContext } from './point-windows';
import { figure, type Figure } from './reading-figure';
import { listed, unmappedNotes } from './unmapped-notes';
import type { WindowRows } from './window-rows';

/** The same figures, each null where there is no data. */
type Shown<T> = { [K in keyof T]: Figure };

/** Power of one order on one phase, or of all together. */
export interface OrderPowerReading {
	activePower_W: Figure;
	reactivePower_var: Figure;
	/** Current behind voltage. */
	angle_deg: Figure;
	/** Expanded uncertainty of the angle, k = 2; null where it is not known. */
	angleUncertainty_deg: Figure;
	/** |P_h|/(U_h·I_h). */
	activeShare: Figure;
	/** Null at dc, which has no angle. */
	indication: DirectionIndication['indication'] | null;
	reason: DirectionIndication['reason'] | null;
}

export interface PowerReadings {
	kind: 'power';
	/** Windows that have data on every conductor. */
	windowCount: number;
	highestOrder: number;
	/** What is missing, what was computed and what P rests on. */
	notes: string[];
	phases: { phase: Phase; label: string; powers: Shown<SinglePhasePower> }[];
	total: {
		activePower_W: Figure;
		fundamentalActivePower_W: Figure;
		fundamentalReactivePower_var: Figure;
		/** Three-phase points. */
		effective: Shown<ThreePhasePower> | null;
		arithmetic_VA: Figure;
		vector_VA: Figure;
		arithmeticPowerFactor: Figure;
		vectorPowerFactor: Figure;
		neutral: 'measured' | 'computed' | null;
	} | null;
	/** Aligned with `phases`; index = order. */
	orders: { order: number; phases: OrderPowerReading[]; total: OrderPowerReading | null }[];
	/** What the uncertainty of the angles is made from; load_A: rms current of the phase that carries least. */
	direction: { caveat: string; chain: MeasuringChain; load_A: Figure };
}

function shown<T extends object>(figures: T): Shown<T> {
	return Object.fromEntries(
		Object.entries(figures).map(([name, value]) => [name, figure(value as number)])
	) as Shown<T>;
}

/** Powers of a point and the direction of its orders over the chosen windows. chain: of the survey, for the angles. */
export function powerReadings(
	{ rows, windows }: WindowRows,
	context: PointContext,
	samplePowers_W: SamplePowers_W,
	chain: MeasuringChain
): PowerReadings {
	const point = pointWindows(rows, context);
	const sums = new PointPowerSums();
	sums.add(point, windows, samplePowers_W);
	const power = sums.finish();
	const notes = unmappedNotes(point, context.label, 'its power is not known, and no total is stated.');
	const least_A = power ? Math.min(...power.phases.map(({ orders }) => load_A(orders))) : NaN;
	const direction = { caveat: DIRECTION_CAVEAT, chain, load_A: figure(least_A) };
	const common = { kind: 'power', highestOrder: context.highestOrder, direction } as const;
	if (!power)
		return {
			...common,
			windowCount: 0,
			notes: [...notes, 'Powers need a voltage and a current on the same conductor.'],
			phases: [],
			total: null,
			orders: []
		};
	return {
		...common,
		windowCount: power.windowCount,
		notes: [...notes, ...methodNotes(power, context)],
		phases: power.phases.map(({ phase, powers }) => ({
			phase,
			label: context.label(phase),
			powers: shown(powers)
		})),
		total: power.total && totalReadings(power.total),
		orders: orderReadings(power, context.highestOrder, chain, least_A)
	};
}

function totalReadings(total: NonNullable<PointPower['total']>): PowerReadings['total'] {
	return {
		activePower_W: figure(total.activePower_W),
		fundamentalActivePower_W: figure(total.fundamentalActivePower_W),
		fundamentalReactivePower_var: figure(total.fundamentalReactivePower_var),
		effective: total.effective && shown(total.effective),
		arithmetic_VA: figure(total.summed?.arithmetic_VA),
		vector_VA: figure(total.summed?.vector_VA),
		arithmeticPowerFactor: figure(total.summed?.arithmeticPowerFactor),
		vectorPowerFactor: figure(total.summed?.vectorPowerFactor),
		neutral: total.neutral
	};
}

function methodNotes(power: PointPower, { label, system }: PointContext): string[] {
	const notes: string[] = [];
	if (power.voltageOrigin === 'virtual-star')
		notes.push(
			'Voltages are measured line to line. What a phase shows is referred to the middle of the three, not to a neutral; only the total is a power that a meter would read.' +
				(system === 'four-wire' ? ' The power of the zero sequence is not in it.' : '')
		);
	if (power.computed.length > 0)
		notes.push(
			`${listed(power.computed.map(label))} ${power.computed.length === 1 ? 'is' : 'are'} not measured but ${power.computed.length === 1 ? 'follows' : 'follow'} from the others, since the three add up to nothing.`
		);
	if (power.activePowerFrom === 'orders')
		notes.push('P is the sum over dc and the orders; interharmonics are not in it.');
	return notes;
}

/** rms current of a phase, what its current transformer is loaded with; interharmonics are not in it. */
function load_A({ current_A }: OrderPowers): number {
	return Math.sqrt(current_A.reduce((sum, level) => (Number.isNaN(level) ? sum : sum + level ** 2), 0));
}

/** The sum is no better known than the phase that carries least. */
function orderReadings(
	power: PointPower,
	highestOrder: number,
	chain: MeasuringChain,
	least_A: number
): PowerReadings['orders'] {
	const angleUncertainty_deg = (order: number, load: number) =>
		angleBudget(chain, order, Number.isNaN(load) ? null : load).U;
	return Array.from({ length: highestOrder + 1 }, (_, order) => {
		const phases = power.phases.map(({ orders }) => {
			const known_deg = order > 0 ? angleUncertainty_deg(order, load_A(orders)) : null;
			const indication = order > 0 ? directionOf(question(orders, order, known_deg)) : null;
			return { indication, reading: orderReading(orders, order, indication) };
		});
		const all = power.total?.orders;
		const total =
			all && order > 0
				? directionOfTotal(
						{
							...question(all, order, angleUncertainty_deg(order, least_A)),
							apparentPower_VA: all.apparentPower_VA[order]!
						},
						phases.flatMap(({ indication }) => indication ?? [])
					)
				: null;
		return {
			order,
			phases: phases.map(({ reading }) => reading),
			total: all ? orderReading(all, order, total) : null
		};
	});
}

function question(
	orders: OrderPowers,
	order: number,
	angleUncertainty_deg: number | null
): DirectionQuestion {
	return {
		order,
		voltage_V: orders.voltage_V[order]!,
		current_A: orders.current_A[order]!,
		apparentPower_VA: orders.voltage_V[order]! * orders.current_A[order]!,
		fundamentalVoltage_V: orders.voltage_V[1]!,
		fundamentalCurrent_A: orders.current_A[1]!,
		activePower_W: orders.activePower_W[order]!,
		reactivePower_var: orders.reactivePower_var[order]!,
		agreeingShare: orders.agreeingShare[order]!,
		angleUncertainty_deg
	};
}

function orderReading(
	orders: OrderPowers,
	order: number,
	found: DirectionIndication | null
): OrderPowerReading {
	return {
		activePower_W: figure(orders.activePower_W[order]),
		reactivePower_var: order === 0 ? null : figure(orders.reactivePower_var[order]),
		angle_deg: figure(found?.angle_deg),
		angleUncertainty_deg: figure(found?.angleUncertainty_deg ?? undefined),
		activeShare: figure(found?.activeShare),
		indication: found?.indication ?? null,
		reason: found?.reason ?? null
	};
}
