export type DecimalSign = '.' | ',';

const SPACES = /[\s\u00a0\u202f'’]/gu;

/** Groups of three digits after a first group of one to three that does not start with zero: "1,284", "12.345.678". */
function isGrouped(text: string, separator: DecimalSign): boolean {
	const [first = '', ...rest] = text.replace(/^[+-]/, '').split(separator);
	return /^[1-9]\d{0,2}$/.test(first) && rest.length > 0 && rest.every((group) => /^\d{3}$/.test(group));
}

/** Spaces and apostrophes may only part groups of three: "1 284" is a number, "12 84" is two. */
function spacesPartThousands(text: string): boolean {
	const whole = text.replace(/^[+-]\s*/, '').split(/[.,]/)[0] ?? '';
	return /^\d*$/.test(whole) || /^\d{1,3}(?:[\s\u00a0\u202f'’]\d{3})+$/u.test(whole);
}

/**
 * A number as people write it, with decimal point or comma and with thousands parted by comma, point, space or
 * apostrophe. When one sign could be either ("1,284"), it parts thousands unless it is the locale's decimal sign.
 * returns  null when the text is not exactly one number
 */
export function parseTypedNumber(text: string, decimal: DecimalSign): number | null {
	const typed = text.trim();
	if (!spacesPartThousands(typed)) return null;
	const compact = typed.replace(SPACES, '');
	const lastPoint = compact.lastIndexOf('.');
	const lastComma = compact.lastIndexOf(',');
	let plain = compact;
	if (lastPoint >= 0 && lastComma >= 0) {
		const [thousands, fraction]: [DecimalSign, DecimalSign] = lastPoint > lastComma ? [',', '.'] : ['.', ','];
		const at = compact.lastIndexOf(fraction);
		const whole = compact.slice(0, at);
		if (!isGrouped(whole, thousands)) return null;
		plain = `${whole.replaceAll(thousands, '')}.${compact.slice(at + 1)}`;
	} else if (lastPoint >= 0 || lastComma >= 0) {
		const sign: DecimalSign = lastPoint >= 0 ? '.' : ',';
		const several = compact.indexOf(sign) !== compact.lastIndexOf(sign);
		if (isGrouped(compact, sign) && (several || sign !== decimal)) plain = compact.replaceAll(sign, '');
		else if (several) return null;
		else plain = compact.replace(sign, '.');
	}
	return /^[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?$/.test(plain) ? Number(plain) : null;
}
