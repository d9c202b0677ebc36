/**
 * The views of the readings page, in the order of its tabs. A further one is a line here, a read-model beside this file
 * called from readings.ts, and a component shown by the page where `detail.kind` is its own.
 */
export const READING_VIEWS = [
	{ view: 'spectrum', label: 'Spectrum' },
	{ view: 'power', label: 'Power and direction' },
	{ view: 'sequence', label: 'Sequence and unbalance' },
	{ view: 'losses', label: 'Losses and neutral' },
	{ view: 'over-time', label: 'Over time' },
	{ view: 'heatmap', label: 'Orders over time' },
	{ view: 'interharmonics', label: 'Interharmonics' },
	{ view: 'reconstruction', label: 'Wave shape' }
] as const;

export type ReadingView = (typeof READING_VIEWS)[number]['view'];

export const READING_VIEW_NAMES = READING_VIEWS.map(({ view }) => view) as [ReadingView, ...ReadingView[]];

/** A view that needs samples, asked of a log of intervals. */
export interface NoWaveform {
	kind: 'no-waveform';
}

/** A view of single samples, asked of a window that cannot be looked at so closely. */
export interface NoSamples {
	kind: 'no-samples';
}

/** Order × time, of a capture that holds no interval of the quantity. */
export interface NoIntervals {
	kind: 'no-intervals';
}
