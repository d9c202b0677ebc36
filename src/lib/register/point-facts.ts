import { z } from 'zod';
import type { AssessedPoint } from '../assessment/assessment';
import type { PhaseNames } from '../recording/phase';

/**
 * What is known about a point, as it is kept. Quantities are in base units; how I_L and I_sc were obtained is kept
 * as entered, so that the amperes can be computed again and their working shown.
 */
const positive = z.number().positive();
/** Who gave the figure: "utility letter of 3 March", "nameplate". */
const source = z.string();

export const demandSchema = z.discriminatedUnion('method', [
	z.object({ method: z.literal('unknown') }),
	z.object({ method: z.literal('entered'), demandCurrent_A: positive, source }),
	z.object({
		method: z.literal('monthly'),
		/** Active power in W, or apparent power in VA. */
		quantity: z.enum(['active', 'apparent']),
		/** Maximum demand of each month, W or VA; null where a month was not given. */
		demands: z.array(positive.nullable()).length(12),
		/** Needed for active power; null otherwise. */
		powerFactor: positive.max(1).nullable(),
		source
	})
]);
export type Demand = z.infer<typeof demandSchema>;

export const shortCircuitSchema = z.discriminatedUnion('method', [
	z.object({ method: z.literal('unknown') }),
	z.object({ method: z.literal('current'), shortCircuitCurrent_A: positive, source }),
	z.object({ method: z.literal('fault-level'), faultLevel_VA: positive, source }),
	z.object({
		method: z.literal('transformer'),
		rating_VA: positive,
		/** Short-circuit impedance, percent of the transformer's own base. */
		impedance_pct: positive.max(100),
		/** Fault level at the transformer's primary; null = taken as infinite. */
		upstreamFaultLevel_VA: positive.nullable(),
		source
	})
]);
export type ShortCircuit = z.infer<typeof shortCircuitSchema>;

export const phaseNamesSchema = z.object({
	L1: z.string().min(1),
	L2: z.string().min(1),
	L3: z.string().min(1),
	N: z.string().min(1)
}) satisfies z.ZodType<PhaseNames>;

/** Instrument transformer ratio as on its nameplate: 1600/5 A, 14400/120 V. */
export interface Ratio {
	primary: number;
	secondary: number;
}

export interface PointFacts {
	name: string;
	kind: AssessedPoint['kind'];
	system: AssessedPoint['system'];
	/** Line-to-line for three-phase systems, line-to-neutral for single and split phase. */
	nominalVoltage_V: number;
	nominalFrequency_Hz: 50 | 60;
	demand: Demand;
	shortCircuit: ShortCircuit;
	phaseNames: PhaseNames;
	currentTransformer: Ratio | null;
	voltageTransformer: Ratio | null;
	limitSetId: number | null;
	limitSetReason: string;
	notes: string;
}

export const POINT_KIND_WORDS: Record<AssessedPoint['kind'], { word: string; meaning: string }> = {
	pcc: {
		word: 'Point of common coupling',
		meaning: 'Where other customers are or could be connected. Limits bind here.'
	},
	'in-plant': {
		word: 'In-plant point',
		meaning: 'Behind the point of common coupling. The comparison with limits is advisory, and says so.'
	}
};

export const SYSTEM_WORDS: Record<AssessedPoint['system'], { word: string; short: string; meaning: string }> =
	{
		'four-wire': {
			word: 'Three-phase, 4-wire',
			short: '4-wire',
			meaning: 'Line-to-neutral voltages are judged; the neutral current is reported.'
		},
		'three-wire': {
			word: 'Three-phase, 3-wire',
			short: '3-wire',
			meaning: 'Line-to-line voltages are judged.'
		},
		'split-phase': {
			word: 'Split phase',
			short: 'split phase',
			meaning: 'Two legs against a common neutral.'
		},
		'single-phase': { word: 'Single phase', short: 'single phase', meaning: 'One line and neutral.' }
	};

/** Whether the nominal voltage of such a system is the line-to-line one. */
export function isThreePhase(system: AssessedPoint['system']): boolean {
	return system === 'three-wire' || system === 'four-wire';
}
