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
}
