import { describe, expect, it } from 'vitest';
import { ORDER_STRIDE, type IntervalSeries } from '$lib/harmonics/intervals';
import { concatenateInTime } from '$lib/server/analysis/survey-series';

/** Ten-minute values from `start_min`, each with its own mark in order 5. */
function tenMinutes(start_min: number, count: number, mark: number): IntervalSeries {
	const subgroups = new Float64Array(count * ORDER_STRIDE).fill(NaN);
	for (let i = 0; i < count; i++) subgroups[i * ORDER_STRIDE + 5] = mark + i;
	return {
		quantity: 'voltage',
		phase: 'L1',
		interval: '10min',
		starts_ms: Float64Array.from({ length: count }, (_, i) => (start_min + 10 * i) * 60_000),
		lengths_s: new Float64Array(count).fill(600),
		rms: new Float64Array(count).fill(230),
		frequency_Hz: new Float64Array(count).fill(50),
		subgroups,
		flagged: new Uint8Array(count)
	};
}
const marks = (series: IntervalSeries) =>
	Array.from(series.starts_ms, (_, i) => series.subgroups[i * ORDER_STRIDE + 5]);

describe('captures laid end to end', () => {
	it('follow each other in time, whatever order they were uploaded in', () => {
		const { series, trimmed } = concatenateInTime([tenMinutes(60, 2, 200), tenMinutes(0, 2, 100)]);
		expect(marks(series)).toEqual([100, 101, 200, 201]);
		expect(trimmed).toBe(0);
	});

	it('count no moment twice: the one that starts later gives way', () => {
		const { series, trimmed } = concatenateInTime([tenMinutes(20, 4, 200), tenMinutes(0, 4, 100)]);
		expect(marks(series)).toEqual([100, 101, 102, 103, 202, 203]);
		expect(trimmed).toBe(2);
	});

	it('give way also where their intervals do not stand on the same ticks', () => {
		const { series, trimmed } = concatenateInTime([tenMinutes(0, 3, 100), tenMinutes(25, 2, 200)]);
		expect(marks(series)).toEqual([100, 101, 102, 201]);
		expect(trimmed).toBe(1);
	});

	it('drop a capture that lies wholly inside another', () => {
		const { series, trimmed } = concatenateInTime([tenMinutes(0, 10, 100), tenMinutes(20, 2, 200)]);
		expect(series.starts_ms).toHaveLength(10);
		expect(trimmed).toBe(2);
	});
});
