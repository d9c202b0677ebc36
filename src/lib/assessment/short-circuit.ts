import { err, ok, type Result } from '../result';
import type { AssessedPoint } from './assessment';
import { phaseFactorOf } from './phase-factor';
import { figure, symbol, type WorkingStep } from './working';

type PointVoltage = Pick<AssessedPoint, 'system' | 'nominalVoltage_V'>;

/** How the short-circuit current at a point is known. */
export type ShortCircuitSource =
	/** Stated by the utility. */
	| { kind: 'given'; shortCircuitCurrent_A: number }
	/** Fault level at the point. */
	| { kind: 'fault-level'; faultLevel_VA: number }
	/** A transformer that feeds the point, with the fault level on its primary side; null = an infinite bus. */
	| {
			kind: 'transformer';
			rating_VA: number;
			impedance_pct: number;
			upstreamFaultLevel_VA: number | null;
	  };

export interface ShortCircuit {
	shortCircuitCurrent_A: number;
	/** The report says which way the figure came. */
	source: ShortCircuitSource['kind'];
	working: WorkingStep[];
	/** What the figure takes for granted, each a sentence; printed beside it. */
	assumptions: string[];
}

const I_SC = symbol('I', 'sc');
const S_SC = symbol('S', 'sc');

function currentStep(faultLevel_VA: number, point: PointVoltage): { current_A: number; step: WorkingStep } {
	const { factor, formula, figures } = phaseFactorOf(point.system);
	const current_A = faultLevel_VA / (factor * point.nominalVoltage_V);
	return {
		current_A,
		step: {
			what: 'Short-circuit current at the point',
			formula: [I_SC, ' = ', S_SC, ' / (', ...formula, ')'],
			figures: `${figure(faultLevel_VA / 1e6, 'MVA')} / (${figures}${point.nominalVoltage_V}\u00a0V)`,
			result: figure(current_A, 'A')
		}
	};
}

function fromTransformer(
	source: Extract<ShortCircuitSource, { kind: 'transformer' }>,
	point: PointVoltage
): ShortCircuit {
	const { factor, formula, figures } = phaseFactorOf(point.system);
	const rated_A = source.rating_VA / (factor * point.nominalVoltage_V);
	const transformer_VA = (100 * source.rating_VA) / source.impedance_pct;
	const upstream_VA = source.upstreamFaultLevel_VA;
	// Impedances in series add, so their fault levels add as reciprocals.
	const total_VA = upstream_VA === null ? transformer_VA : 1 / (1 / transformer_VA + 1 / upstream_VA);
	const { current_A, step } = currentStep(total_VA, point);
	const working: WorkingStep[] = [
		{
			what: 'Rated current of the transformer',
			formula: [symbol('I', 'r'), ' = ', symbol('S', 'r'), ' / (', ...formula, ')'],
			figures: `${figure(source.rating_VA / 1000, 'kVA')} / (${figures}${point.nominalVoltage_V}\u00a0V)`,
			result: figure(rated_A, 'A')
		},
		{
			what: 'Fault level behind the transformer alone',
			formula: [symbol('S', 'T'), ' = 100 · ', symbol('S', 'r'), ' / ', symbol('u', 'k')],
			figures: `100 · ${figure(source.rating_VA / 1e6, 'MVA')} / ${source.impedance_pct}`,
			result: figure(transformer_VA / 1e6, 'MVA')
		}
	];
	if (upstream_VA !== null) {
		working.push({
			what: 'Fault level with the supply in series',
			formula: [S_SC, ' = 1 / (1/', symbol('S', 'T'), ' + 1/', symbol('S', 'k'), ')'],
			figures: `1 / (1/${figure(transformer_VA / 1e6, 'MVA')} + 1/${figure(upstream_VA / 1e6, 'MVA')})`,
			result: figure(total_VA / 1e6, 'MVA')
		});
	}
	working.push(step);
	return {
		shortCircuitCurrent_A: current_A,
		source: 'transformer',
		working,
		assumptions: [
			upstream_VA === null
				? 'The supply in front of the transformer is taken as infinitely strong, which makes the current too high and may choose a row that is too generous: enter its fault level.'
				: 'Impedances are added by magnitude, which makes the current slightly too low and never chooses a more generous row.',
			'Cables, motors and generators behind the transformer are not counted.'
		]
	};
}

/**
 * Short-circuit current at a point, with its working.
 * Transformer impedance as on its nameplate, percent of rating; powers in VA; symmetrical fault, rms.
 */
export function computeShortCircuit(
	source: ShortCircuitSource,
	point: PointVoltage
): Result<ShortCircuit, string> {
	if (!(point.nominalVoltage_V > 0)) return err('Enter the nominal voltage of the point first.');
	switch (source.kind) {
		case 'given':
			if (!(source.shortCircuitCurrent_A > 0)) return err('Enter a short-circuit current above 0 A.');
			return ok({
				shortCircuitCurrent_A: source.shortCircuitCurrent_A,
				source: 'given',
				working: [],
				assumptions: []
			});
		case 'fault-level': {
			if (!(source.faultLevel_VA > 0)) return err('Enter a fault level above 0 MVA.');
			const { current_A, step } = currentStep(source.faultLevel_VA, point);
			return ok({
				shortCircuitCurrent_A: current_A,
				source: 'fault-level',
				working: [step],
				assumptions: []
			});
		}
		case 'transformer': {
			if (!(source.rating_VA > 0)) return err('Enter the transformer’s rating, for example 1500 kVA.');
			if (!(source.impedance_pct > 0 && source.impedance_pct < 100))
				return err('Enter the transformer’s impedance from its nameplate, for example 5.75 %.');
			if (source.upstreamFaultLevel_VA !== null && !(source.upstreamFaultLevel_VA > 0))
				return err('Enter the upstream fault level above 0 MVA, or leave it empty.');
			return ok(fromTransformer(source, point));
		}
	}
}

/** The ratio that chooses the row, with its working: short-circuit current ÷ demand current. */
export function ratioWorking(shortCircuitCurrent_A: number, demandCurrent_A: number): WorkingStep {
	return {
		what: 'Short-circuit ratio',
		formula: [I_SC, ' / ', symbol('I', 'L')],
		figures: `${figure(shortCircuitCurrent_A, 'A')} / ${figure(demandCurrent_A, 'A')}`,
		result: (shortCircuitCurrent_A / demandCurrent_A).toFixed(2)
	};
}
