import { coverageOf, INTENDED_COVERAGE, type Budget } from '../uncertainty/budget';
import { figureBudget, type Figure } from '../uncertainty/figure-budget';
import { certificateBand } from '../uncertainty/instrument-limits';
import {
	transducersOf,
	type MeasuringChain,
	type Quantity,
	type Transducer,
	type TransducerKind
} from '../uncertainty/measuring-chain';
import { reachOf_Hz, RESPONSE } from '../uncertainty/transducer-limits';
import { formatNumber, formatOrdinal } from '../units/format';
import type { UncertaintyStatement } from './assessment';

/** The order that the statement speaks for. */
const TYPICAL_ORDER = 5;
/** No limit set judges higher ones: a reach beyond them needs no word. */
const HIGHEST_JUDGED_ORDER = 50;
/** From so much above 95 % on, the coverage is told: the bound of one source then dominates. */
const TOLD_FROM = INTENDED_COVERAGE + 0.015;

const KIND_WORDS: Record<TransducerKind, string> = {
	'inductive-voltage-transformer': 'inductive voltage transformers',
	'capacitive-voltage-transformer': 'capacitive voltage transformers',
	'low-voltage-transformer': 'low-voltage transformers',
	'voltage-divider': 'voltage dividers',
	'current-transformer': 'current transformers',
	'current-clamp': 'current clamps',
	'flexible-coil': 'flexible coils',
	shunt: 'shunts',
	'not-known': 'sensors'
};

function transducerWords({ kind, error_pct, errorAssumed }: Transducer): string {
	const { at50th_pct } = RESPONSE[kind];
	const error =
		error_pct === null
			? `${KIND_WORDS[kind]} whose error is not known`
			: `${KIND_WORDS[kind]} of ${error_pct} %${errorAssumed ? ' (not stated, assumed)' : ''}`;
	return at50th_pct === 0 ? error : `${error}, growing by ${at50th_pct} % to the 50th order`;
}

function quantityWords(chain: MeasuringChain, quantity: Quantity): string {
	const transducers = transducersOf(chain, quantity);
	if (transducers.length === 0) return `${quantity} measured directly`;
	return `${quantity} through ${transducers.map(transducerWords).join(' and ')}`;
}

function recorderWords(chain: MeasuringChain): string {
	const byClass = `limits of class ${chain.instrumentClass} after IEC 61000-4-7:2002+A1:2008, table 1 (values from memory), taken as rectangular`;
	if (chain.certificate.length === 0) return `recorder by the ${byClass}`;
	return `recorder by its calibration certificate, and where that is silent by the ${byClass}`;
}

/** A single order well above the recorder's floor, at rated load, with nothing seen of its spread. */
function typicalFigure(quantity: Quantity, order: number): Figure {
	return {
		quantity,
		orders: { from: order, to: order },
		value_pct: 100,
		basis: 'agreed',
		evidence: { fullScale: null, load_A: Infinity, spread: null, composition_pct: null }
	};
}

function reachWords(chain: MeasuringChain, quantity: Quantity): string {
	const transducers = transducersOf(chain, quantity);
	const reach_Hz = Math.min(...transducers.map(reachOf_Hz));
	if (!Number.isFinite(reach_Hz)) return '';
	const order = Math.max(1, Math.floor(reach_Hz / chain.nominalFrequency_Hz));
	if (order >= HIGHEST_JUDGED_ORDER) return '';
	const what = transducers.some(
		(transducer) => transducer.role === 'transformer' && reachOf_Hz(transducer) === reach_Hz
	)
		? 'transformers'
		: 'sensors';
	return ` Above the ${formatOrdinal(order)} order the errors of the ${quantity} ${what} are not known: no uncertainty is stated there, and verdicts count the known part only.`;
}

function unknownWords(chain: MeasuringChain): string {
	const open = (['voltage', 'current'] as const).filter((quantity) =>
		transducersOf(chain, quantity).some((transducer) => transducer.error_pct === null)
	);
	if (open.length === 0) return '';
	return ` Nobody has stated the error of the ${open.join(' and ')} sensors: no uncertainty is stated for ${open.join(' or ')}, and verdicts count the known part only.`;
}

function coverageWords(chain: MeasuringChain): string {
	const coverages = (['voltage', 'current'] as const).map((quantity) =>
		coverageOf(figureBudget(chain, typicalFigure(quantity, TYPICAL_ORDER)))
	);
	const least = Math.min(...coverages);
	if (!(least > TOLD_FROM)) return '';
	const share = least > 0.999 ? 'practically all' : `about ${formatNumber(100 * least, { decimals: 1 })} %`;
	const dominating =
		certificateBand(chain, 'voltage', TYPICAL_ORDER) && certificateBand(chain, 'current', TYPICAL_ORDER)
			? 'A bound'
			: 'The recorder’s bound';
	return ` ${dominating} dominates, so that ±U holds ${share} of the true values and not only the 95 % that k = 2 stands for otherwise.`;
}

/** The uncertainty that is counted when a survey states none of its own: a budget of its measuring chain for each figure. */
export function chainUncertainty(chain: MeasuringChain): UncertaintyStatement {
	const stated = (quantity: Quantity) => (order: number) =>
		figureBudget(chain, typicalFigure(quantity, order)).U;
	const budgetOf = (figure: Figure): Budget => figureBudget(chain, figure);
	return {
		text:
			`Expanded uncertainty U = 2·u from a budget for each figure, combined after JCGM 100:2008: ` +
			`${recorderWords(chain)}; ${quantityWords(chain, 'voltage')}; ${quantityWords(chain, 'current')}; ` +
			`spread and gaps as the measurement shows them. Classes hold at power frequency; their growth with the order is common practice and an assumption.` +
			unknownWords(chain) +
			reachWords(chain, 'voltage') +
			reachWords(chain, 'current') +
			coverageWords(chain),
		voltage_pctOfReading: stated('voltage'),
		current_pctOfReading: stated('current'),
		budgetOf
	};
}
