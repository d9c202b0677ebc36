import type { CaptureFacts } from '$lib/recording/capture-facts';
import { formatNumber } from '$lib/units/format';

type Status = 'unread' | 'recognised' | 'queued' | 'analysing' | 'analysed' | 'failed';

/** A capture's state: mark and word together, never colour alone. */
export const STATUS_WORDS: Record<Status, { mark: string; word: string; tone: string }> = {
	unread: { mark: '◐', word: 'columns to tell', tone: 'text-ochre' },
	recognised: { mark: '◐', word: 'channels to confirm', tone: 'text-ochre' },
	queued: { mark: '○', word: 'waiting for analysis', tone: 'text-slate' },
	analysing: { mark: '○', word: 'being analysed', tone: 'text-slate' },
	analysed: { mark: '●', word: 'analysed', tone: 'text-verdigris' },
	failed: { mark: '▲', word: 'analysis failed', tone: 'text-oxide' }
};

export const SIDE_WORDS: Record<CaptureFacts['valuesAre'], string> = {
	primary: 'primary values',
	secondary: 'secondary values',
	unknown: 'side not stated',
	mixed: 'primary and secondary values mixed'
};

/** "12.80 kHz", or both ends where the rate changes. */
export function formatRate(rate_Hz: CaptureFacts['samplingRate_Hz']): string {
	if (rate_Hz === null) return 'not stated';
	const one = (value: number) =>
		value >= 1000
			? `${formatNumber(value / 1000, { decimals: 2 })}\u00a0kHz`
			: `${formatNumber(value, { decimals: 0 })}\u00a0Hz`;
	return rate_Hz.lowest === rate_Hz.highest
		? one(rate_Hz.lowest)
		: `${one(rate_Hz.lowest)} to ${one(rate_Hz.highest)}`;
}
