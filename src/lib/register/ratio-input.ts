import { err, ok, type Result } from '../result';
import { parseQuantity } from '../units/quantity-input';
import type { Ratio } from './point-facts';
import { tidyQuantity, withoutBinaryTail } from './tidy-quantity';

export type RatioKind = 'current' | 'voltage';

const EXAMPLE: Record<RatioKind, string> = { current: '1600/5', voltage: '14400/120' };
const NAME: Record<RatioKind, string> = { current: 'current transformer', voltage: 'voltage transformer' };
/** Nameplates of single-phase voltage transformers give both sides over √3. */
const ROOT_THREE = /\/\s*(?:√\s*3|sqrt\s*\(?\s*3\s*\)?)/giu;

/**
 * Reads a ratio as on the nameplate: "1600/5", "1600:5 A", "14.4 kV/120 V", "11000/√3 : 110/√3".
 * returns  both sides in A or V, or a sentence that says what to enter
 */
export function parseRatio(kind: RatioKind, text: string): Result<Ratio, string> {
	const hint = `Enter the ratio of the ${NAME[kind]} as on its nameplate, for example ${EXAMPLE[kind]}.`;
	const roots = text.match(ROOT_THREE)?.length ?? 0;
	if (roots !== 0 && roots !== 2) return err(`${hint} Give √3 on both sides or on none.`);
	const sides = text.replace(ROOT_THREE, '').split(/[/:]/);
	const [left, right] = sides;
	if (sides.length !== 2 || left === undefined || right === undefined) return err(hint);
	const primary = parseQuantity(kind, left);
	const secondary = parseQuantity(kind, right);
	if (!primary.ok || !secondary.ok || primary.value <= 0 || secondary.value <= 0) return err(hint);
	if (primary.value < secondary.value) return err(`The primary comes first and is the larger one. ${hint}`);
	return ok({
		primary: withoutBinaryTail(primary.value),
		secondary: withoutBinaryTail(secondary.value)
	});
}

/** "1600/5": plain amperes or volts, as nameplates print them. */
export function formatRatio(ratio: Ratio): string {
	return `${tidyQuantity('number', ratio.primary)}/${tidyQuantity('number', ratio.secondary)}`;
}
