import { formatPhase, type PhaseNames } from '../recording/phase';
import { formatPctPair } from '../units/format-beside';
import { formatOrdinal, formatPct, NO_DATA } from '../units/format';
import type { Assessment, VerdictRow } from './assessment';
import { BASIS_WORDS, itemWords } from './wording';

export interface SentenceOptions {
	/** Names of the conductors at this point. */
	phaseNames: PhaseNames;
	locale?: string;
}

function figures(row: VerdictRow, options: SentenceOptions) {
	return formatPctPair(row.value_pct, row.limit_pct, { locale: options.locale });
}

function phaseWords(row: VerdictRow, options: SentenceOptions): string {
	return `phase ${formatPhase(row.phase, options.phaseNames)}`;
}

function at(row: VerdictRow): string {
	return row.item.kind === 'order'
		? `at the ${formatOrdinal(row.item.order)} order`
		: `as ${itemWords(row.item)}`;
}

/** "Phase C draws 9.63 % of demand current at the 5th order, where less than 7.00 % is allowed." */
export function rowSentence(row: VerdictRow, options: SentenceOptions): string {
	if (row.value_pct === null || row.limit_pct === null) return row.reason;
	const { value, reference } = figures(row, options);
	const verb = row.quantity === 'current' ? 'draws' : 'carries';
	const allowed = row.comparator === '<' ? `less than ${reference}` : `${reference}`;
	const phase = phaseWords(row, options);
	return `${phase.charAt(0).toUpperCase()}${phase.slice(1)} ${verb} ${value} ${BASIS_WORDS[row.basis]} ${at(row)}, where ${allowed} is allowed.`;
}

/**
 * Why an engineer must not take the verdict for a full assessment. A governing rule that was answered in full stays a
 * finding, also when other rules of the standard could not be answered beside it.
 */
function evidenceReserve(assessment: Assessment, worst: VerdictRow): string {
	if (assessment.evidence === 'weekly') return '';
	if (assessment.evidence === 'snapshot')
		return ' Indicative only: the capture is too short for the standard’s percentiles.';
	return worst.evidence === 'weekly'
		? ' Other rules of the standard could not be answered from what was measured.'
		: ' The survey is shorter than the standard’s period, so this is not yet a full assessment.';
}

/** The same for a reader who is no engineer. */
function plainReserve(assessment: Assessment, worst: VerdictRow): string {
	if (assessment.evidence === 'weekly') return '';
	if (assessment.evidence === 'partial' && worst.evidence === 'weekly')
		return assessment.verdict === 'exceeds' ? '' : ' Not all that the rules ask for was measured.';
	return ' The measurement was shorter than the rules ask for, so take this as an indication.';
}

const ADVISORY =
	' The point lies inside the plant, where these limits do not bind: the comparison is advisory.';

function reserves(assessment: Assessment): string {
	const evidence = assessment.worst === null ? '' : evidenceReserve(assessment, assessment.worst);
	return evidence + (assessment.advisory ? ADVISORY : '');
}

function countExceeding(assessment: Assessment): number {
	const found = assessment.rows.filter((row) => row.verdict === assessment.verdict);
	return new Set(
		found.map((row) =>
			[
				row.tableKey,
				row.phase,
				row.item.kind,
				row.item.kind === 'order' ? row.item.order : row.item.index
			].join()
		)
	).size;
}

function whyNotAssessed(assessment: Assessment): string {
	const first = assessment.missing[0];
	if (first !== undefined) return `Not assessed. ${first}`;
	const row = assessment.rows.find((candidate) => candidate.verdict === 'not-assessed');
	return row?.reason ?? 'Not assessed: nothing was recorded that this limit set judges.';
}

/** The verdict in one plain sentence for an engineer, followed by its reserves (evidence, advisory). */
export function engineerSentence(assessment: Assessment, options: SentenceOptions): string {
	const { worst, verdict } = assessment;
	if (verdict === 'not-assessed' || worst === null) return whyNotAssessed(assessment) + reserves(assessment);
	if (verdict === 'exceeds') {
		const others = countExceeding(assessment) - 1;
		const more =
			others === 0
				? ''
				: ` ${others} more ${others === 1 ? 'level exceeds its' : 'levels exceed their'} limit.`;
		return rowSentence(worst, options) + more + reserves(assessment);
	}
	if (verdict !== 'compliant') {
		const side = verdict === 'exceeds-inside-uncertainty' ? 'above' : 'below';
		return `${rowSentence(worst, options)} It lies ${side} the limit by less than the measurement uncertainty.${reserves(assessment)}`;
	}
	const { value, reference } = figures(worst, options);
	return (
		`Every level keeps its limit; the closest is ${phaseWords(worst, options)} ${at(worst)} with ${value} ` +
		`${BASIS_WORDS[worst.basis]} of ${reference} allowed.${reserves(assessment)}`
	);
}

const PLAIN_QUANTITY = {
	current: 'The harmonic current that your installation draws',
	voltage: 'The voltage distortion at your supply point'
} as const;

const PLAIN_EXCESS = {
	current: 'Your installation puts more harmonic current on the supply than is allowed.',
	voltage: 'The voltage at your supply point is more distorted than is allowed.'
} as const;

/** Utilisation for a layman, cut and not rounded, so that 99.96 % never reads as all of the limit. */
function shareOfLimit(row: VerdictRow, options: SentenceOptions): string {
	if (row.utilisation === null) return NO_DATA;
	const tenths = row.utilisation * 1000;
	const cut = row.utilisation > 1 ? Math.ceil(tenths) / 10 : Math.floor(tenths) / 10;
	return formatPct(cut, { locale: options.locale, decimals: Number.isInteger(cut) ? 0 : 1 });
}

/** The verdict in a sentence for someone who is not an engineer: what it means, without orders or clauses. */
export function portalSentence(assessment: Assessment, options: SentenceOptions): string {
	const { worst, verdict } = assessment;
	if (verdict === 'not-assessed' || worst === null) {
		return 'The measurement could not be fully assessed; your consultant says below what is missing.';
	}
	const what = PLAIN_QUANTITY[worst.quantity];
	const share = shareOfLimit(worst, options);
	const tail =
		plainReserve(assessment, worst) +
		(assessment.advisory ? ' The limits themselves apply at your supply point, not here.' : '');
	switch (verdict) {
		case 'exceeds':
			return `${PLAIN_EXCESS[worst.quantity]}${tail}`;
		case 'exceeds-inside-uncertainty':
			return `${what} is measured just above the limit (${share} of what is allowed), closer than the instrument can tell: it may or may not be too high.${tail}`;
		case 'compliant-inside-uncertainty':
			return `${what} is within the limit, but so close to it (${share} of what is allowed) that the instrument cannot tell for certain.${tail}`;
		case 'compliant':
			return `${what} is within the limits; at its highest it takes up ${share} of what is allowed.${tail}`;
	}
}
