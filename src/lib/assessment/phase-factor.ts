import type { AssessedPoint } from './assessment';
import { symbol, type FormulaPart } from './working';

/** How apparent power and current belong together at a point: S = U · I, 2 · U · I or √3 · U · I. */
export interface PhaseFactor {
	/** Power in VA ÷ (nominal voltage in V × line current in A). */
	factor: number;
	/** The divisor as it is printed, typeset and as text before the voltage's figure. */
	formula: FormulaPart[];
	figures: string;
}

/** Nominal voltage is line-to-line at three-phase points and line-to-neutral at single- and split-phase ones. */
export function phaseFactorOf(system: AssessedPoint['system']): PhaseFactor {
	const U = symbol('U', 'n');
	switch (system) {
		case 'single-phase':
			return { factor: 1, formula: [U], figures: '' };
		case 'split-phase':
			return { factor: 2, formula: ['2 · ', U], figures: '2 · ' };
		case 'three-wire':
		case 'four-wire':
			return { factor: Math.sqrt(3), formula: ['√3 · ', U], figures: '√3 · ' };
	}
}
