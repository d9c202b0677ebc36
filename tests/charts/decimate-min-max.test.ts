import { describe, expect, it } from 'vitest';
import { decimateMinMax } from '$lib/charts/decimate-min-max';

const asIndex = (sample: number) => sample;

function pointsOf(flat: Float64Array): [number, number][] {
	return Array.from({ length: flat.length / 2 }, (_, i) => [
		flat[2 * i] as number,
		flat[2 * i + 1] as number
	]);
}

describe('decimateMinMax', () => {
	it('keeps a spike of one sample among a million', () => {
		const samples = new Float64Array(1_000_000);
		samples[654_321] = 99;
		samples[222_222] = -77;
		const points = pointsOf(decimateMinMax(samples, 0, samples.length, 1000, asIndex));
		expect(points).toContainEqual([654_321, 99]);
		expect(points).toContainEqual([222_222, -77]);
		expect(points.length).toBeLessThanOrEqual(2000);
	});

	it('keeps the order of time', () => {
		const samples = Float64Array.from({ length: 5000 }, (_, i) => Math.sin(i / 7));
		const times = pointsOf(decimateMinMax(samples, 0, 5000, 100, asIndex)).map(([time]) => time);
		expect(times).toEqual([...times].sort((a, b) => a - b));
	});

	it('gives every sample of a short stretch as it is', () => {
		const samples = Float64Array.from([3, 1, 4, 1, 5, 9]);
		expect(pointsOf(decimateMinMax(samples, 1, 4, 10, (i) => i / 10))).toEqual([
			[0.1, 1],
			[0.2, 4],
			[0.3, 1]
		]);
	});

	it('breaks the line where a whole bucket has no data, and skips single gaps', () => {
		const samples = Float64Array.from({ length: 30 }, (_, i) => (i >= 10 && i < 20 ? Number.NaN : i));
		samples[3] = Number.NaN;
		const points = pointsOf(decimateMinMax(samples, 0, 30, 3, asIndex));
		expect(points).toEqual([
			[0, 0],
			[9, 9],
			[10, Number.NaN],
			[20, 20],
			[29, 29]
		]);
	});
});
