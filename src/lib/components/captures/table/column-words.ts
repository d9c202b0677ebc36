import type { ToldColumn } from '$lib/recording/readers/delimited-text/table-layout-told';
import { formatPhase, type PhaseNames } from '$lib/recording/phase';

/** A column's meaning as a mark and words, and the tone that goes with them: never colour alone. */
export interface ColumnWords {
	mark: string;
	words: string;
	tone: 'time' | 'voltage' | 'current' | 'other' | 'none';
}

export const TONE_CLASSES: Record<ColumnWords['tone'], string> = {
	time: 'bg-slate-tint text-slate',
	voltage: 'bg-copper-tint text-copper-deep',
	current: 'bg-verdigris-tint text-verdigris',
	other: 'bg-ochre-tint text-ochre',
	none: 'text-ink-soft'
};

export const ROLE_OPTIONS: Record<'waveform' | 'trend', { value: ToldColumn['role']; label: string }[]> = {
	waveform: [
		{ value: 'sample', label: 'Samples' },
		{ value: 'time', label: 'Time' },
		{ value: 'date', label: 'Date' },
		{ value: 'clock', label: 'Time of day' },
		{ value: 'ignore', label: 'Not used' }
	],
	trend: [
		{ value: 'value', label: 'Values per interval' },
		{ value: 'time', label: 'Time' },
		{ value: 'date', label: 'Date' },
		{ value: 'clock', label: 'Time of day' },
		{ value: 'flag', label: 'Flag of the interval' },
		{ value: 'ignore', label: 'Not used' }
	]
};

export const MEASURE_OPTIONS = [
	{ value: 'rms', label: 'rms' },
	{ value: 'order', label: 'One order' },
	{ value: 'thd', label: 'THD' },
	{ value: 'frequency', label: 'Frequency' }
];

export const EXTREME_OPTIONS = [
	{ value: 'none', label: 'Average or rms' },
	{ value: 'minimum', label: 'Minimum' },
	{ value: 'maximum', label: 'Maximum' }
];

export function columnWords(column: ToldColumn, names: PhaseNames): ColumnWords {
	const conductor = (phase: (ToldColumn & { role: 'sample' })['phase']) =>
		phase === null ? '' : ` ${formatPhase(phase, names)}`;
	switch (column.role) {
		case 'time':
			return { mark: '◷', words: 'Time', tone: 'time' };
		case 'date':
			return { mark: '◷', words: 'Date', tone: 'time' };
		case 'clock':
			return { mark: '◷', words: 'Time of day', tone: 'time' };
		case 'flag':
			return { mark: '⚑', words: 'Flag', tone: 'other' };
		case 'ignore':
			return { mark: '–', words: 'Not used', tone: 'none' };
		case 'sample': {
			if (column.quantity === 'other')
				return { mark: '?', words: `Samples${conductor(column.phase)}`, tone: 'other' };
			const symbol = column.quantity === 'voltage' ? 'U' : 'I';
			return {
				mark: symbol,
				words: `${column.quantity === 'voltage' ? 'Voltage' : 'Current'}${conductor(column.phase)}`,
				tone: column.quantity
			};
		}
		case 'value': {
			if (column.measure === 'frequency') return { mark: 'f', words: 'Frequency', tone: 'other' };
			const measure =
				column.measure === 'order'
					? `order ${column.order ?? '?'}`
					: column.measure === 'thd'
						? 'THD'
						: 'rms';
			const extreme = column.extreme === 'none' ? '' : `, ${column.extreme}`;
			return {
				mark: column.quantity === 'voltage' ? 'U' : 'I',
				words: `${column.quantity === 'voltage' ? 'Voltage' : 'Current'}${conductor(column.phase)}, ${measure}${extreme}`,
				tone: column.quantity
			};
		}
	}
}

/** A column that takes on another role keeps what the roles have in common. */
export function withRole(column: ToldColumn, role: ToldColumn['role']): ToldColumn {
	const before = column.role === 'sample' || column.role === 'value' ? column : null;
	const common = { phase: before?.phase ?? null, unit: before?.unit ?? '', factor: before?.factor ?? 1 };
	if (role === 'sample') return { role, quantity: before?.quantity ?? 'voltage', ...common };
	if (role === 'value')
		return {
			role,
			...common,
			quantity: before?.quantity === 'current' ? 'current' : 'voltage',
			measure: 'rms',
			order: null,
			extreme: 'none'
		};
	return { role };
}
