import type { Phase } from '$lib/recording/phase';

/** null = no data, never zero. */
type Figure = number | null;

export interface ChannelFigures {
	channelIndex: number;
	name: string;
	quantity: 'voltage' | 'current';
	phase: Phase;
	label: string;
	unit: 'V' | 'A';
	rms: Figure;
	fundamental: Figure;
	dc: Figure;
	peak: Figure;
	crest: Figure;
	thd_pctOfFundamental: Figure;
	tdd_pctOfDemandCurrent: Figure;
	fundamentalAngle_deg: Figure;
}

/** Totals of one phase, percent of the fundamental but for the partial odd current. */
export interface TotalFigures {
	phase: Phase;
	label: string;
	thd40_pct: Figure;
	thd50_pct: Figure;
	thds_pct: Figure;
	thdg_pct: Figure;
	pwhd_pct: Figure;
	odd_pct: Figure;
	even_pct: Figure;
	triplen_pct: Figure;
	partialOdd_A: Figure;
}

/** What the page's server part hands over about a waveform. */
export interface WaveformFigures {
	highestOrder: number;
	cyclesPerWindow: number;
	windowCount: number;
	window: number | null;
	place: { from_s: number; to_s: number; start_ms: number; flagged: boolean } | null;
	frequency_Hz: Figure;
	duration_s: number;
	channels: ChannelFigures[];
	phases: { phase: Phase; label: string; unit: 'V' | 'A' }[];
	orders: {
		order: number;
		limit_pct: Figure;
		phases: { magnitude: Figure; pctOfFundamental: Figure; pctOfBasis: Figure; angle_deg: Figure }[];
	}[];
	totals: TotalFigures[];
}
