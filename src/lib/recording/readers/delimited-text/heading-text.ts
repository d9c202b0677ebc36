import { parseUnit } from '../../unit-text';

/** A heading split into its name and the unit written with it ("" for none). */
export interface Heading {
	name: string;
	unit: string;
}

/** Seconds per time unit, by the words that headings use. */
const TIME_UNITS: Record<string, number> = {
	s: 1,
	sec: 1,
	secs: 1,
	second: 1,
	seconds: 1,
	ms: 1e-3,
	msec: 1e-3,
	millisecond: 1e-3,
	milliseconds: 1e-3,
	us: 1e-6,
	µs: 1e-6,
	μs: 1e-6,
	usec: 1e-6,
	microsecond: 1e-6,
	microseconds: 1e-6,
	ns: 1e-9,
	nanosecond: 1e-9,
	nanoseconds: 1e-9,
	min: 60,
	minutes: 60,
	h: 3600,
	hours: 3600
};

export function timeUnit_s(unit: string): number | null {
	return TIME_UNITS[unit.trim().toLowerCase()] ?? null;
}

/** Whether a text stands for a unit and nothing else: "V", "kA", "(mA)", "%", "Hz", "s", "-". */
export function isUnitWord(text: string): boolean {
	const word = withoutBrackets(text);
	if (word === '' || word === '-' || word.startsWith('%') || /^(hz|deg|°|w|kw|va|kva|var|kvar)$/i.test(word))
		return true;
	return timeUnit_s(word) !== null || parseUnit(word).quantity !== 'other';
}

export function withoutBrackets(text: string): string {
	return text
		.trim()
		.replace(/^[([]|[)\]]$/g, '')
		.trim();
}

/** One blank for every run of them: damage can leave thousands, over which patterns would take forever. */
export function singleBlanks(text: string): string {
	return text.replace(/\s+/g, ' ').trim();
}

/**
 * "V1 (V)", "I_L1 [mA]", "t[ms]", "U1 / kV", "Va_V". A single symbol with a letter ("I_A") is a conductor's
 * name and not a unit.
 */
export function splitHeading(text: string): Heading {
	const plain = singleBlanks(text).replace(/^"|"$/g, '').trim();
	const bracketed = /^(.*?)\s*[([]\s*([^()[\]]*)\s*[)\]]\s*$/.exec(plain);
	if (bracketed !== null && isUnitWord(bracketed[2] ?? ''))
		return { name: bracketed[1] ?? '', unit: (bracketed[2] ?? '').trim() };
	const spoken = /^(.+?)\s*(?:\/|\bin\b)\s*(\S+)$/.exec(plain);
	if (spoken !== null && isUnitWord(spoken[2] ?? '')) return { name: spoken[1] ?? '', unit: spoken[2] ?? '' };
	const suffixed = /^(.{2,})_([A-Za-zµμ]{1,3})$/.exec(plain);
	if (suffixed !== null && isSuffixUnit(suffixed[2] ?? ''))
		return { name: suffixed[1] ?? '', unit: suffixed[2] ?? '' };
	return { name: plain, unit: '' };
}

function isSuffixUnit(text: string): boolean {
	return /^([kmuµμ]?[VA]|Hz|s|ms|us)$/.test(text);
}
