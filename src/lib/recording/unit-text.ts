import type { ChannelQuantity } from './recording';

/** What a unit written in a file means: its base unit, and value_base = value × times ÷ over (one of them is 1). */
export interface ParsedUnit {
	base: string;
	quantity: ChannelQuantity;
	times: number;
	over: number;
}

const VOLT_OR_AMPERE = /^([kmMKµμunGg]?)\s*(v|volts?|a|amps?|amperes?)(?:\s*(?:rms|ac|eff))?$/i;

/** Small prefixes divide instead of multiplying by 0.001: a division by a power of ten rounds only once. */
const PREFIXES: Record<string, { times: number; over: number }> = {
	'': { times: 1, over: 1 },
	k: { times: 1e3, over: 1 },
	K: { times: 1e3, over: 1 },
	M: { times: 1e6, over: 1 },
	G: { times: 1e9, over: 1 },
	m: { times: 1, over: 1e3 },
	µ: { times: 1, over: 1e6 },
	μ: { times: 1, over: 1e6 },
	u: { times: 1, over: 1e6 },
	n: { times: 1, over: 1e9 }
};

/** "kV" → volts × 1000; anything that is neither volts nor amperes keeps its own name and scale. */
export function parseUnit(text: string): ParsedUnit {
	const written = text.trim();
	const match = VOLT_OR_AMPERE.exec(written);
	const prefix = match === null ? undefined : PREFIXES[match[1] ?? ''];
	if (match === null || prefix === undefined) return { base: written, quantity: 'other', times: 1, over: 1 };
	const isVolt = (match[2] ?? '').toLowerCase().startsWith('v');
	return { base: isVolt ? 'V' : 'A', quantity: isVolt ? 'voltage' : 'current', ...prefix };
}

/** One value from the written unit to the base unit. */
export function toBaseUnit(value: number, unit: ParsedUnit): number {
	return unit.over === 1 ? value * unit.times : value / unit.over;
}
