import { numberInText } from '../number-in-bytes';
import { splitFields, type HeadLine } from './table-layout';
import type { DecimalSign, Separator } from './table-layout-told';
import { guessDateOrder, parseStamp, type Stamp } from './stamp-text';
import { timeUnit_s, withoutBrackets } from './heading-text';

/** What the lines above a table say about the whole recording. */
export interface PreambleFacts {
	samplingRate: { rate_Hz: number; line: number } | null;
	nominalFrequency_Hz: number | null;
	date: Stamp | null;
	stationName: string;
	recorderName: string;
}

interface Entry {
	key: string;
	/** Unit in brackets behind the key, "" for none. */
	keyUnit: string;
	value: string;
	line: number;
}

const RATE_UNITS: Record<string, number> = {
	'': 1,
	hz: 1,
	khz: 1e3,
	mhz: 1e6,
	's/s': 1,
	'ks/s': 1e3,
	'ms/s': 1e6,
	'sa/s': 1,
	'ksa/s': 1e3,
	'msa/s': 1e6
};

function entriesOf(lines: readonly HeadLine[], separator: Separator): Entry[] {
	return lines.flatMap(({ text, number }) => {
		const fields = splitFields(text, separator).map((field) => field.trim());
		const pair = fields.length >= 2 && fields[1] !== '' ? [fields[0], fields[1]] : splitByMark(text);
		if (pair === null) return [];
		const [rawKey = '', value = ''] = pair;
		const bracketed = /^(.*?)\s*[([]([^)\]]*)[)\]]\s*:?$/.exec(rawKey);
		const key = (bracketed?.[1] ?? rawKey)
			.replace(/[:=#]+/g, ' ')
			.trim()
			.toLowerCase();
		return [{ key, keyUnit: (bracketed?.[2] ?? '').trim(), value, line: number }];
	});
}

function splitByMark(text: string): [string, string] | null {
	const match = /^\W*([^:=\t;,]+?)\s*[:=\t;,]\s*(.+)$/.exec(text.trim());
	return match === null ? null : [match[1] ?? '', (match[2] ?? '').trim()];
}

/** "30000", "12.8 kHz", "3,33E-05 s": number and unit; the unit of the key counts where the value has none. */
function quantityOf(entry: Entry, decimal: DecimalSign): { value: number; unit: string } | null {
	const match = /^([+-]?[\d.,]+(?:[eE][+-]?\d+)?)\s*(.*)$/.exec(entry.value);
	if (match === null) return null;
	const value = numberInText(decimal === ',' ? (match[1] ?? '').replace(',', '.') : (match[1] ?? ''));
	const unit = withoutBrackets(match[2] ?? '') || entry.keyUnit;
	return Number.isFinite(value) ? { value, unit: unit.toLowerCase() } : null;
}

function samplingRateOf(entries: Entry[], decimal: DecimalSign): PreambleFacts['samplingRate'] {
	for (const entry of entries) {
		const isRate = /sampl\w*[\s_-]*(rate|freq)|abtast(rate|freq)|^fs$|^rate$/.test(entry.key);
		const isStep =
			/sampl\w*[\s_-]*(interval|period|time)|(time|x)[\s_-]*(step|increment|incr)|^(dt|delta t|xincr\w*)$/.test(
				entry.key
			);
		if (!isRate && !isStep) continue;
		const quantity = quantityOf(entry, decimal);
		if (quantity === null || quantity.value <= 0) continue;
		const scale = isRate ? RATE_UNITS[quantity.unit] : (timeUnit_s(quantity.unit || 's') ?? undefined);
		if (scale === undefined) continue;
		const rate_Hz = isRate ? quantity.value * scale : 1 / (quantity.value * scale);
		return { rate_Hz: Number(rate_Hz.toPrecision(6)), line: entry.line };
	}
	return null;
}

function dateOf(entries: Entry[]): Stamp | null {
	const { order } = guessDateOrder(entries.map(({ value }) => value));
	let day: number | null = null;
	let clock: Stamp | null = null;
	for (const { key, value } of entries) {
		if (!/date|start|time|datum|beginn|zeit|trigger/.test(key)) continue;
		const stamp = parseStamp(value, order);
		if (stamp === null) continue;
		if (stamp.day !== null && stamp.second !== null) return stamp;
		if (stamp.day !== null) day ??= stamp.day;
		else clock ??= stamp;
	}
	return day === null || clock === null ? null : { ...clock, day };
}

function textOf(entries: Entry[], keys: RegExp): string {
	return entries.find(({ key, value }) => keys.test(key) && value !== '')?.value ?? '';
}

/** What the lines above the headings say. */
export function preambleFacts(
	lines: readonly HeadLine[],
	writing: { separator: Separator; decimal: DecimalSign }
): PreambleFacts {
	const entries = entriesOf(lines, writing.separator);
	const nominal = entries.find(({ key }) => /(nominal|line|mains|network)[\s_-]*freq/.test(key));
	const frequency = nominal === undefined ? null : quantityOf(nominal, writing.decimal);
	return {
		samplingRate: samplingRateOf(entries, writing.decimal),
		nominalFrequency_Hz: frequency !== null && frequency.value > 0 ? frequency.value : null,
		date: dateOf(entries),
		stationName: textOf(entries, /^(station|site|location|place|measuring point|point)\b/),
		recorderName: textOf(entries, /^(model|recorder|instrument|device|logger|serial)\b/)
	};
}
