import type { TrendSeries } from '../../recording';
import { parseUnit } from '../../unit-text';
import { singleBlanks } from './heading-text';
import { quantityByName } from './quantity-name';

/** What one column of a trend log tabulates. */
export interface TrendHeading {
	quantity: 'voltage' | 'current';
	measure: TrendSeries['measure'];
	unit: TrendSeries['unit'];
	/** Value in `unit` = written value × times ÷ over. */
	times: number;
	over: number;
	extreme: 'minimum' | 'maximum' | null;
	/** True where the unit is not written and follows from the quantity. */
	unitIsAssumed: boolean;
	/** The heading without the words of the measure, for the conductor. */
	nameForPhase: string;
}

/** Figures that are not harmonics, or not of a kind that limits know: named in a remark, not read. */
const OTHER_FIGURES =
	/phi\b|angle|winkel|power|watt|\bcos|factor|energy|unbalanc|asymm|flicker|\bpst|\bplt|crest|peak|\bdc\b|dip|swell|temp|interharm|\bih\d|tdd|tif\b|wh\b|\bvar/i;

const THD = /thd(?:[\s_-]?[fr])?|total\s*harmonic(?:\s*distortion)?|klirr\w*/i;
const RMS = /(?:true)?[\s_-]*r\.?m\.?s\.?(?:[\s_]*value)?|effektiv\w*|\beff\b/i;
const AVERAGE = /[\s_]*\b_?(?:avg|average|aver|mean|mittel\w*|moy\w*)\b/i;
const MINIMUM = /[\s_]*\b_?min(?:imum)?\b/i;
const MAXIMUM = /[\s_]*\b_?max(?:imum)?\b/i;
const FREQUENCY = /^(?:[\s_]*)(?:freq\w*|f)(?:[^a-z]|$)|frequenz/i;
const ORDER_PATTERNS = [
	/(?:^|[^a-z])h(?:arm(?:onic)?s?)?[\s_.#-]*0*(\d{1,3})(?!\d)/i,
	/(?:order|ordnung|rang|ordre)[\s_.#-]*0*(\d{1,3})(?!\d)/i,
	/(?:^|[^\d])0*(\d{1,3})(?:st|nd|rd|th|\.)?[\s_-]*(?:harm\w*|order|oberschw\w*)/i
];
const FUNDAMENTAL = /fund(?:amental)?|grundschw\w*/i;

function orderIn(text: string): { order: number; written: string } | null {
	for (const pattern of ORDER_PATTERNS) {
		const match = pattern.exec(text);
		if (match !== null) return { order: Number(match[1]), written: match[0] };
	}
	const fundamental = FUNDAMENTAL.exec(text);
	return fundamental === null ? null : { order: 1, written: fundamental[0] };
}

function isPercent(unit: string): boolean {
	return /^%|^percent|^pct/i.test(unit);
}

/** The meaning of a heading, or the reason why it is left out. */
export function parseTrendHeading(name: string, unit: string): TrendHeading | { leftOut: string } {
	// Word marks inside "VAB_avg" and "Ia_min" are underscores, which count as letters in a pattern.
	const text = singleBlanks(name.replace(/_/g, ' '));
	if (OTHER_FIGURES.test(text)) return { leftOut: 'another kind of figure' };
	const extreme = MINIMUM.test(text) ? 'minimum' : MAXIMUM.test(text) ? 'maximum' : null;
	const plain = text.replace(AVERAGE, ' ').replace(MINIMUM, ' ').replace(MAXIMUM, ' ');
	const parsedUnit = parseUnit(unit);
	if (/^hz$/i.test(unit) || (unit === '' && FREQUENCY.test(plain)))
		return heading('voltage', { kind: 'frequency' }, 'Hz', parsedUnit, extreme, unit === '', '');
	const order = orderIn(plain);
	const thd = THD.exec(plain);
	const rest = plain
		.replace(order?.written ?? ' ', ' ')
		.replace(THD, ' ')
		.replace(RMS, ' ')
		.replace(/\s+/g, ' ')
		.trim();
	const byUnit = parsedUnit.quantity === 'other' ? null : parsedUnit.quantity;
	const quantity = byUnit ?? quantityByName(rest) ?? quantityByName(plain.trim());
	if (quantity === null) return { leftOut: 'neither a voltage nor a current by name or unit' };
	const measure: TrendSeries['measure'] =
		thd !== null ? { kind: 'thd' } : order !== null ? { kind: 'order', order: order.order } : { kind: 'rms' };
	if (measure.kind === 'order' && (measure.order < 1 || measure.order > 100))
		return { leftOut: 'no order from 1 to 100' };
	const base = quantity === 'voltage' ? 'V' : 'A';
	if (byUnit !== null) return heading(quantity, measure, base, parsedUnit, extreme, false, rest);
	if (isPercent(unit)) {
		if (measure.kind === 'rms') return { leftOut: 'an rms value in percent' };
		if (/^%\s*(r|rms|total|nom|un|in)|of\s*(rms|nominal)/i.test(unit) || /thd[\s_-]?r\b/i.test(plain))
			return { leftOut: 'percent of something else than the fundamental' };
		return heading(quantity, measure, 'percent-of-fundamental', parsedUnit, extreme, false, rest);
	}
	if (unit !== '') return { leftOut: `the unit ${unit}` };
	if (measure.kind === 'order')
		return { leftOut: 'no unit: percent and absolute values cannot be told apart' };
	const assumed = measure.kind === 'thd' ? 'percent-of-fundamental' : base;
	return heading(quantity, measure, assumed, parsedUnit, extreme, true, rest);
}

function heading(
	quantity: 'voltage' | 'current',
	measure: TrendSeries['measure'],
	unit: TrendSeries['unit'],
	scale: { times: number; over: number },
	extreme: TrendHeading['extreme'],
	unitIsAssumed: boolean,
	nameForPhase: string
): TrendHeading {
	const { times, over } = scale;
	return { quantity, measure, unit, times, over, extreme, unitIsAssumed, nameForPhase };
}
