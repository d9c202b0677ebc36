import { describe, expect, it } from 'vitest';
import { collectPhaseData, everythingFlagged, snapshotSeries } from '$lib/assessment/phase-data';
import { makeSeries, spectrum } from './series-builder';

const one = (interval: 'window' | '3s', count: number, flagged: (i: number) => boolean) =>
	makeSeries({ quantity: 'voltage', phase: 'L1', interval, count, level: spectrum(277, { 5: 2 }), flagged });

describe('a short capture with an event in it', () => {
	it('is read window by window when the event flags every 3-second value', () => {
		const [data] = collectPhaseData([one('3s', 1, () => true), one('window', 20, (i) => i > 4)]);
		expect(snapshotSeries(data!)?.interval).toBe('window');
		expect(everythingFlagged(data!)).toBe(false);
	});

	it('is read by its 3-second values while one of them is free of events', () => {
		const [data] = collectPhaseData([one('3s', 2, (i) => i === 0), one('window', 30, (i) => i < 15)]);
		expect(snapshotSeries(data!)?.interval).toBe('3s');
	});

	it('says so when nothing is free of events', () => {
		const [data] = collectPhaseData([one('3s', 1, () => true), one('window', 15, () => true)]);
		expect(everythingFlagged(data!)).toBe(true);
	});
});
