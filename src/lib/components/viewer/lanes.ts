import type { Phase } from '$lib/recording/phase';

/** One analogue channel: recorded value × toPrimary, in `unit`. */
export interface ViewerChannel {
	index: number;
	name: string;
	quantity: 'voltage' | 'current' | 'other';
	phase: Phase | null;
	label: string;
	unit: string;
	toPrimary: number;
	from: 'confirmed' | 'suggested' | 'recorded';
}

/** Channels that share one value axis. */
export interface Lane {
	key: string;
	/** "Voltage, V". */
	title: string;
	unit: string;
	channels: ViewerChannel[];
}

const WORDS = { voltage: 'Voltage', current: 'Current', other: 'Other' } as const;
const RANK = { voltage: 0, current: 1, other: 2 } as const;

/** Voltages over currents over the rest, those of one unit together; or each channel for itself. */
export function lanesOf(channels: readonly ViewerChannel[], isEachAlone: boolean): Lane[] {
	const lanes = new Map<string, Lane>();
	const sorted = [...channels].sort((a, b) => RANK[a.quantity] - RANK[b.quantity] || a.index - b.index);
	for (const channel of sorted) {
		const key = isEachAlone ? `channel ${channel.index}` : `${channel.quantity} ${channel.unit}`;
		const unit = channel.unit === '' ? '' : `, ${channel.unit}`;
		const title = isEachAlone ? `${titleOf(channel)}${unit}` : `${WORDS[channel.quantity]}${unit}`;
		const lane = lanes.get(key) ?? { key, title, unit: channel.unit, channels: [] };
		lane.channels.push(channel);
		lanes.set(key, lane);
	}
	return [...lanes.values()];
}

/** Name as people look for it: conductor first where it is known. */
export function titleOf(channel: ViewerChannel): string {
	if (channel.phase === null) return channel.name;
	const symbol = channel.quantity === 'voltage' ? 'U' : channel.quantity === 'current' ? 'I' : '';
	return `${symbol} ${channel.label}`.trim();
}

/** Channels shown before anybody has chosen: all of a usual recorder, the first of a large one. */
export const MOST_SHOWN_AT_FIRST = 16;

/** A value axis: round steps that cover [low, high]. */
export function axisSteps(low: number, high: number, most: number): number[] {
	const span = high - low;
	if (!(span > 0)) return [];
	const rough = span / Math.max(1, most);
	const power = 10 ** Math.floor(Math.log10(rough));
	const step = [1, 2, 5, 10].map((m) => m * power).find((candidate) => candidate >= rough)!;
	const steps: number[] = [];
	for (let k = Math.ceil(low / step - 1e-9); k * step <= high + 1e-9 * step; k++) steps.push(k * step);
	return steps;
}

/** As many digits as steps of that size need. */
export function digitsFor(step: number): number {
	return Math.max(0, Math.min(9, -Math.floor(Math.log10(Math.abs(step)) + 1e-9)));
}
