import type { UncertaintyStatement } from './assessment';

/** Harmonic accuracy class of the recorder (IEC 61000-4-7:2002+A1:2008, table 1). */
export type InstrumentClass = 'I' | 'II';

/** What is known about the measuring chain of a survey. */
export interface MeasuringChain {
	instrumentClass: InstrumentClass;
	/** Accuracy class of the voltage transformers, percent; null when voltage is measured directly. */
	voltageTransformerClass_pct: number | null;
	/** Accuracy class of the current transformers or clamps, percent; null when current is measured directly. */
	currentTransformerClass_pct: number | null;
	/** Nominal primary current of the measuring range, A; null when not known (no floor is then stated). */
	currentRange_A: number | null;
}

/**
 * Greatest permitted error: 5 % of the reading, or the floor for small readings. The two meet at the threshold
 * (1 % and 3 % of nominal in class I; 3 % and 10 % in class II). From memory; the publication is named above.
 */
const CLASS_LIMITS: Record<
	InstrumentClass,
	{ reading_pct: number; voltageFloor_pctOfNominal: number; currentFloor_pctOfNominal: number }
> = {
	I: { reading_pct: 5, voltageFloor_pctOfNominal: 0.05, currentFloor_pctOfNominal: 0.15 },
	II: { reading_pct: 5, voltageFloor_pctOfNominal: 0.15, currentFloor_pctOfNominal: 0.5 }
};

/**
 * Expanded uncertainty (k = 2) of independent errors that are each only known by a bound: rectangular
 * distributions, u = a/√3 (JCGM 100:2008, 4.3.7).
 */
export function expandedFromBounds(bounds: number[]): number {
	return 2 * Math.sqrt(bounds.reduce((sum, bound) => sum + (bound * bound) / 3, 0));
}

function chainWords(chain: MeasuringChain): string {
	const transformer = (name: string, class_pct: number | null) =>
		class_pct === null ? `${name} measured directly` : `${name} transformers of class ${class_pct}`;
	return [
		transformer('voltage', chain.voltageTransformerClass_pct),
		transformer('current', chain.currentTransformerClass_pct)
	].join(', ');
}

/** The uncertainty that is counted when a survey states none of its own: the class limits of its measuring chain. */
export function classUncertainty(chain: MeasuringChain): UncertaintyStatement {
	const limits = CLASS_LIMITS[chain.instrumentClass];
	const of = (transformerClass_pct: number | null) =>
		expandedFromBounds([
			limits.reading_pct,
			...(transformerClass_pct === null ? [] : [transformerClass_pct])
		]);
	const voltage_pct = of(chain.voltageTransformerClass_pct);
	const current_pct = of(chain.currentTransformerClass_pct);
	const statement: UncertaintyStatement = {
		text:
			`Expanded uncertainty (k = 2) from class limits taken as rectangular: recorder of class ${chain.instrumentClass} ` +
			`after IEC 61000-4-7:2002+A1:2008, table 1 (values from memory), ${chainWords(chain)}: ` +
			`${voltage_pct.toFixed(1)} % of reading for voltage and ${current_pct.toFixed(1)} % for current at every order, ` +
			`not less than the class’s floor. Transformer classes hold at power frequency only; their errors at ` +
			`higher orders are not known and not counted.`,
		voltage_pctOfReading: () => voltage_pct,
		current_pctOfReading: () => current_pct,
		voltageFloor_pctOfNominal: expandedFromBounds([limits.voltageFloor_pctOfNominal])
	};
	if (chain.currentRange_A !== null) {
		statement.currentFloor_A = expandedFromBounds([
			(limits.currentFloor_pctOfNominal / 100) * chain.currentRange_A
		]);
	}
	return statement;
}
