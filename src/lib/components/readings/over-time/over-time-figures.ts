import type { IntervalKind } from '$lib/harmonics/intervals';
import type { Phase } from '$lib/recording/phase';

export interface TimePanelFigures {
	key: string;
	title: string;
	valueAxis: string;
	unit: string;
	fromZero: boolean;
	series: { label: string; phase: Phase; times_ms: number[]; values: (number | null)[] }[];
}

export interface OverTimeFigures {
	interval: IntervalKind;
	kinds: IntervalKind[];
	intervalCount: number;
	intervalsPerPoint: number;
	panels: TimePanelFigures[];
	flagged: { from_ms: number; to_ms: number }[];
}

export const INTERVAL_WORDS: Record<IntervalKind, string> = {
	window: '10/12-cycle windows',
	'3s': '3-second values',
	'10min': '10-minute values',
	'2h': '2-hour values'
};
