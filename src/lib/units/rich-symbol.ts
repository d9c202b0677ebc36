/**
 * Text with quantity symbols, split for typesetting. A symbol is one to three letters, an underscore and its
 * subscript: "I_sc/I_L", "U_h,95", "Z_T". Braces hold a subscript with other signs: "I_{h+1}". Anything else,
 * file names included, stays plain text.
 */
export type RichPart = { kind: 'text'; text: string } | { kind: 'symbol'; name: string; sub: string };

const SYMBOL =
	/(?<![\p{L}\p{N}_.-])([A-Za-zΔΩθφτ]{1,3})_(?:\{([^{}]+)\}|([\p{L}\p{N}]{1,4}(?:,\p{N}{1,3})?))(?![\p{L}\p{N}_-]|\.[\p{L}\p{N}])/gu;

export function parseRichSymbols(text: string): RichPart[] {
	const parts: RichPart[] = [];
	let done = 0;
	for (const match of text.matchAll(SYMBOL)) {
		const [whole, name = '', braced, plain] = match;
		if (match.index > done) parts.push({ kind: 'text', text: text.slice(done, match.index) });
		parts.push({ kind: 'symbol', name, sub: braced ?? plain ?? '' });
		done = match.index + whole.length;
	}
	if (done < text.length) parts.push({ kind: 'text', text: text.slice(done) });
	return parts;
}
