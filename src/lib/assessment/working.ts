/** Part of a formula: plain text, or a symbol with its subscript, so that pages and PDF can typeset it. */
export type FormulaPart = string | { symbol: string; subscript: string };

/** One line of a working: what is computed, the formula, the same with figures, the result. */
export interface WorkingStep {
	what: string;
	formula: FormulaPart[];
	/** The formula with its figures, plain text. */
	figures: string;
	result: string;
}

export function symbol(letter: string, subscript: string): FormulaPart {
	return { symbol: letter, subscript };
}

/** The formula as one line of text, for screen readers and plain exports: "I sc" reads as two letters. */
export function formulaText(parts: FormulaPart[]): string {
	return parts.map((part) => (typeof part === 'string' ? part : `${part.symbol}${part.subscript}`)).join('');
}

/** Figures in a working: enough digits to follow it by hand, without exponent. */
export function figure(value: number, unit: string): string {
	const magnitude = Math.abs(value);
	const decimals =
		magnitude === 0 || magnitude >= 1000 ? 0 : Math.min(6, Math.max(0, 4 - Math.ceil(Math.log10(magnitude))));
	return `${value.toFixed(decimals)}${unit === '' ? '' : `\u00a0${unit}`}`;
}
