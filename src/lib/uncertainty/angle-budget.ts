import { combine, type Budget } from './budget';
import { bounded, type ContributionSource } from './contribution';
import type { InstrumentClass, MeasuringChain, Quantity, Transducer } from './measuring-chain';
import {
	currentTransformerDisplacement_min,
	loadOf,
	responseError_pct,
	voltageTransformerDisplacement_min
} from './transducer-limits';

const MINUTES_PER_DEGREE = 60;

/**
 * Bound of the angle between two channels of a recorder, degrees for each order, as a delay between them makes it.
 * source  IEC 61000-4-7:2002, class I: n·1° (from memory). Class II is given twice that: assumption of this product.
 */
const CHANNEL_ANGLE_DEG: Record<InstrumentClass, number> = { I: 1, II: 2 };

/** Phase displacement at order h is at most atFundamental + perOrder·(h − 1). */
export interface Displacement {
	/** At power frequency and the load that flowed. */
	atFundamental_deg: number;
	/** More for every further order. */
	perOrder_deg: number;
}

/**
 * Bound of a transducer's phase displacement. The usual classes bound it at power frequency only. What grows with the order is
 * the displacement at rated load, as a delay makes it; what a current transformer errs beyond that at little load comes
 * from its magnetising current, which does not grow with the order, and is added as it is (common practice; assumption
 * of this product). A sensor without a class is taken for a transformer of the same ratio error.
 * load_A   rms current; null = not known, the lowest tabulated load is taken
 * returns  null where its class bounds no displacement and none was stated
 */
export function displacementOf(
	transducer: Transducer,
	quantity: Quantity,
	load_A: number | null
): Displacement | null {
	const { role, kind, error_pct, phaseError_deg } = transducer;
	// Stated at power frequency: what grows with the order is that much again, as a delay makes it.
	if (phaseError_deg !== undefined && phaseError_deg !== null)
		return { atFundamental_deg: phaseError_deg, perOrder_deg: phaseError_deg };
	if (error_pct === null) return null;
	// A data sheet's 3 % is no class 3: its displacement follows from its size, as that of 2.9 % does.
	const byClass = role === 'transformer' || kind === 'current-transformer';
	const atRated_min = byClass
		? quantity === 'current'
			? currentTransformerDisplacement_min(error_pct, 100)
			: voltageTransformerDisplacement_min(error_pct)
		: error_pct *
			(quantity === 'current'
				? currentTransformerDisplacement_min(1, 100)
				: voltageTransformerDisplacement_min(1));
	if (Number.isNaN(atRated_min)) return null;
	const atLoad_min =
		kind === 'current-transformer'
			? currentTransformerDisplacement_min(error_pct, loadOf(transducer, load_A))
			: atRated_min;
	return {
		atFundamental_deg: atLoad_min / MINUTES_PER_DEGREE,
		perOrder_deg: atRated_min / MINUTES_PER_DEGREE
	};
}

/**
 * The uncertainty budget of the angle between voltage and current of one order, degrees: the sign of the order's active
 * power hangs on it. Noise of the level is not in it.
 * order    ≥ 1
 * load_A   rms current of the conductor; null = not known
 * returns  U null where a transducer is not known at this order, or its class bounds no displacement
 */
export function angleBudget(chain: MeasuringChain, order: number, load_A: number | null): Budget {
	const line = (source: ContributionSource, stated: number) =>
		bounded({ source, stated, statedIn: 'unit of the figure', sensitivity: 1 });
	const lines = [line('instrument-angle', CHANNEL_ANGLE_DEG[chain.instrumentClass] * order)];
	const notKnown: ContributionSource[] = [];
	const add = (quantity: Quantity) => (transducer: Transducer) => {
		const source = `${quantity}-${transducer.role}-angle` as const;
		const found = displacementOf(transducer, quantity, load_A);
		const within = responseError_pct(transducer, order, chain.nominalFrequency_Hz) !== null;
		if (found === null || !within) notKnown.push(source);
		else lines.push(line(source, found.atFundamental_deg + found.perOrder_deg * (order - 1)));
	};
	chain.voltageTransducers.forEach(add('voltage'));
	chain.currentTransducers.forEach(add('current'));
	return combine(lines, notKnown);
}
