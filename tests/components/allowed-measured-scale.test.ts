import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { placeLabels, scaleForComparison, telling } from '$lib/components/verdict/allowed-measured-scale';

describe('scaleForComparison', () => {
	it('leaves room over the greatest value and keeps to the number of steps', () => {
		fc.assert(
			fc.property(
				fc.double({ min: 1e-3, max: 1e4, noNaN: true }),
				fc.constantFrom(8, 16),
				(greatest, most) => {
					const scale = scaleForComparison(greatest, most);
					expect(scale.end).toBeGreaterThan(greatest);
					expect(scale.ticks.length).toBeLessThanOrEqual(most);
				}
			),
			{ seed: 519 }
		);
	});
});

describe('placeLabels', () => {
	it('keeps both labels inside the figure', () => {
		fc.assert(
			fc.property(
				fc.integer({ min: 240, max: 640 }),
				fc.double({ min: 0, max: 0.8, noNaN: true }),
				fc.double({ min: 0, max: 0.8, noNaN: true }),
				(width, a, m) => {
					const places = placeLabels(a * width, m * width, width);
					for (const place of [places.allowed, places.measured]) {
						const [left, right] =
							place.anchor === 'end' ? [place.x - 112, place.x] : [place.x, place.x + 112];
						expect(left).toBeGreaterThanOrEqual(-8);
						expect(right).toBeLessThanOrEqual(width + 8);
					}
				}
			),
			{ seed: 519 }
		);
	});
});

describe('telling', () => {
	it('adds digits until an exceedance shows', () => {
		expect(telling(1, 7, 7.004)).toBe(3);
		expect(telling(1, 7, 9.63)).toBe(1);
		expect(telling(1, 7, 7)).toBe(1);
	});
});
