import type { Phase } from '$lib/recording/phase';

type Figure = number | null;

export interface WaveFigures {
	channelIndex: number;
	name: string;
	phase: Phase;
	label: string;
	quantity: 'voltage' | 'current';
	unit: 'V' | 'A';
	/** Two cycles, evenly spaced. */
	wave: number[];
	dc: number;
	components: number[];
	phases_deg: number[];
	symmetry: {
		halfWave_pctOfRms: Figure;
		odd_pctOfRms: Figure;
		even_pctOfRms: Figure;
		evenOrders_pctOfFundamental: Figure;
		dc_pctOfFundamental: Figure;
		sentence: string | null;
	};
	notches: {
		count: number;
		deepest: { depth_V: Figure; depth_pct: Figure; width_us: Figure; area_Vus: Figure } | null;
		caution: string | null;
	} | null;
}

export interface ShapeFigures {
	window: number;
	frequency_Hz: Figure;
	cycle_s: number;
	highestOrder: number;
	waves: WaveFigures[];
}

/** Quick choices of orders, with the rule that each of them follows; order 0 is dc. */
export const ORDER_CHOICES: readonly { label: string; holds: (order: number) => boolean }[] = [
	{ label: 'Fundamental', holds: (order) => order === 1 },
	{ label: 'Odd', holds: (order) => order % 2 === 1 },
	{ label: 'Even and dc', holds: (order) => order % 2 === 0 },
	{ label: 'Triplen', holds: (order) => order > 0 && order % 3 === 0 },
	{ label: '6n ± 1', holds: (order) => order % 6 === 1 || order % 6 === 5 },
	{ label: 'All', holds: () => true },
	{ label: 'None', holds: () => false }
];
