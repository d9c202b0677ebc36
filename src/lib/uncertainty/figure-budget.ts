import { combine, type Budget } from './budget';
import {
	bounded,
	certified,
	computed,
	observed,
	type Contribution,
	type ContributionSource
} from './contribution';
import { certificateBand, classLimit, FUNDAMENTAL_LIMIT_PCT } from './instrument-limits';
import { transducersOf, type MeasuringChain, type Quantity, type Transducer } from './measuring-chain';
import type { Spread } from './spread';
import { ratioError_pct, responseError_pct } from './transducer-limits';

/** What the measurement itself tells about a figure, beside its value. */
export interface FigureEvidence {
	/** What 100 % stands for, V or A; null when it is not one fixed figure. */
	fullScale: number | null;
	/** rms current behind the figure, A; null when not known or for a voltage. */
	load_A: number | null;
	spread: Spread | null;
	/** For a total: its orders from … to, percent of the basis, root sum of squares = value; null for one order. */
	composition_pct: number[] | null;
}

/** One measured level: an order (from = to) or the root sum of squares of several. */
export interface Figure {
	quantity: Quantity;
	orders: { from: number; to: number };
	/** Percent of the basis, ≥ 0. */
	value_pct: number;
	/** A declared voltage or a demand current is exact by agreement; a measured fundamental has an error of its own. */
	basis: 'agreed' | 'measured-fundamental';
	evidence: FigureEvidence;
}

/**
 * Orders that hold no more than this share of a total's square may be unknown: an error of 100 % in them is then
 * counted as a bound. Above it the total is as unknown as they are. Assumption of this product.
 */
const MOST_BEYOND_REACH = 0.05;

/** An order of a figure with its level and what the figure changes by when it changes (y/T for a root sum of squares). */
interface Term {
	order: number;
	level_pct: number;
	weight: number;
}

function termsOf({ orders, value_pct, evidence }: Figure): Term[] {
	const { composition_pct } = evidence;
	if (composition_pct === null || !(value_pct > 0))
		// Without its spectrum a total is taken to lie where the chain is worst: at its highest order.
		return [{ order: orders.to, level_pct: value_pct, weight: 1 }];
	return composition_pct
		.map((level_pct, i) => ({ order: orders.from + i, level_pct, weight: level_pct / value_pct }))
		.filter((term) => term.level_pct > 0);
}

/** Sum over the orders as if all erred the same way, which is the greatest it can be (JCGM 100:2008, 5.2.2, note 1). */
function together(terms: readonly Term[], error_pct: (term: Term) => number): number {
	return terms.reduce((sum, term) => sum + term.weight * error_pct(term), 0);
}

function ofReading(source: ContributionSource, value_pct: number, error: number) {
	// Relative to the reading where there is one, so that the line can be held against a data sheet.
	return value_pct > 0
		? {
				source,
				stated: (100 * error) / value_pct,
				statedIn: 'percent of reading' as const,
				sensitivity: value_pct / 100
			}
		: { source, stated: error, statedIn: 'unit of the figure' as const, sensitivity: 1 };
}

function instrumentLines(chain: MeasuringChain, figure: Figure, terms: readonly Term[]): Contribution[] {
	const { quantity, value_pct, evidence } = figure;
	const bandOf = (term: Term) => certificateBand(chain, quantity, term.order);
	const onePercent =
		quantity === 'voltage'
			? 1
			: chain.currentRange_A === null || evidence.fullScale === null
				? null
				: chain.currentRange_A / evidence.fullScale;
	const lines: Contribution[] = [];
	const byCertificate = terms.filter((term) => bandOf(term) !== null);
	const byClass = terms.filter((term) => bandOf(term) === null);
	const first = byCertificate[0] === undefined ? null : bandOf(byCertificate[0]);
	if (first !== null) {
		const standard = together(byCertificate, (term) => {
			const band = bandOf(term)!;
			return (term.level_pct * band.expanded_pctOfReading) / 100 / band.coverageFactor;
		});
		const input = ofReading('instrument-certificate', value_pct, standard * first.coverageFactor);
		lines.push(certified(input, first.coverageFactor));
	}
	if (byClass.length > 0) {
		const bound = together(byClass, (term) =>
			classLimit(chain.instrumentClass, quantity, term.level_pct, onePercent)
		);
		lines.push(bounded(ofReading('instrument-class', value_pct, bound)));
	}
	return lines;
}

function transducerLines(
	chain: MeasuringChain,
	figure: Figure,
	terms: readonly Term[],
	transducer: Transducer
): { lines: Contribution[]; notKnown: ContributionSource[] } {
	const { role } = transducer;
	const { value_pct, evidence } = figure;
	const ratio_pct = ratioError_pct(transducer, evidence.load_A);
	const lines =
		ratio_pct === null ? [] : [bounded(ofReading(`${role}-ratio`, value_pct, (ratio_pct / 100) * value_pct))];
	const notKnown: ContributionSource[] = ratio_pct === null ? [`${role}-ratio`] : [];
	const responseOf = (term: Term) => responseError_pct(transducer, term.order, chain.nominalFrequency_Hz);
	const response = together(terms, (term) => (term.level_pct * (responseOf(term) ?? 0)) / 100);
	if (response > 0) lines.push(bounded(ofReading(`${role}-response`, value_pct, response)));
	const beyond = terms.filter((term) => responseOf(term) === null);
	const share = beyond.reduce((sum, term) => sum + term.weight ** 2, 0);
	if (share > MOST_BEYOND_REACH) return { lines, notKnown: [...notKnown, `${role}-response`] };
	if (share > 0) lines.push(bounded(ofReading(`${role}-beyond-reach`, value_pct, share * value_pct)));
	return { lines, notKnown };
}

/**
 * White noise of rounding, q/√12 in every sample, spread over the lines of a window: a line keeps 1/√M of it in phase
 * with the order, and the mean over W windows 1/√W of that. The same for a total, whose orders' noise is independent.
 */
function quantisationLines(chain: MeasuringChain, { quantity, evidence }: Figure): Contribution[] {
	const { resolution } = chain;
	const step = resolution === null ? null : quantity === 'voltage' ? resolution.step_V : resolution.step_A;
	if (resolution === null || step === null || evidence.fullScale === null) return [];
	return [
		computed({
			source: 'quantisation',
			stated: (100 * step) / evidence.fullScale / Math.sqrt(12),
			statedIn: 'unit of the figure',
			sensitivity: 1 / Math.sqrt(resolution.samplesPerWindow * resolution.windowsPerValue)
		})
	];
}

/**
 * The uncertainty budget of one level, percentage points of its basis.
 * The errors of one source at the several orders of a total are taken as fully correlated; sources are independent.
 * Errors of the measured fundamental that it shares with the harmonic (the ratio error) are not set off against it,
 * which keeps U on the safe side.
 */
export function figureBudget(chain: MeasuringChain, figure: Figure): Budget {
	const terms = termsOf(figure);
	const lines = instrumentLines(chain, figure, terms);
	const notKnown: ContributionSource[] = [];
	for (const transducer of transducersOf(chain, figure.quantity)) {
		const found = transducerLines(chain, figure, terms, transducer);
		lines.push(...found.lines);
		notKnown.push(...found.notKnown);
	}
	if (figure.basis === 'measured-fundamental') {
		const error = (FUNDAMENTAL_LIMIT_PCT[chain.instrumentClass] / 100) * figure.value_pct;
		lines.push(bounded(ofReading('basis', figure.value_pct, error)));
	}
	lines.push(...quantisationLines(chain, figure));
	const { spread } = figure.evidence;
	if (spread !== null) {
		const { source, u, degreesOfFreedom } = spread;
		lines.push(
			observed({ source, stated: u, statedIn: 'unit of the figure', sensitivity: 1 }, degreesOfFreedom)
		);
	}
	return combine(lines, notKnown);
}
