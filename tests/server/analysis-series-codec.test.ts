import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { ORDER_STRIDE, type IntervalSeries } from '$lib/harmonics/intervals';
import {
	bufferToFloat32,
	bufferToFloat64,
	decodeSeries,
	encodeSeries,
	float64ToBuffer
} from '$lib/server/analysis/series-codec';

function series(n: number): IntervalSeries {
	return {
		quantity: 'current',
		phase: 'L2',
		interval: '3s',
		starts_ms: Float64Array.from({ length: n }, (_, i) => 1.7e12 + 3000 * i + 0.125),
		lengths_s: new Float64Array(n).fill(3),
		rms: Float64Array.from({ length: n }, (_, i) => i / 3),
		frequency_Hz: new Float64Array(n).fill(NaN),
		subgroups: Float64Array.from({ length: n * ORDER_STRIDE }, (_, i) => (i % 7 === 0 ? NaN : i * 1e-3)),
		flagged: Uint8Array.from({ length: n }, (_, i) => i % 2)
	};
}

describe('series in the database', () => {
	it('come back bit for bit, missing values included', () => {
		fc.assert(
			fc.property(fc.float64Array(), (values) => {
				expect(bufferToFloat64(float64ToBuffer(values))).toEqual(values);
			}),
			{ seed: 20260319 }
		);
		expect(decodeSeries(encodeSeries(series(5)))).toEqual(series(5));
	});

	// IEEE 754 binary64: 1 is 3FF0000000000000, the lowest byte first.
	it('are little-endian', () => {
		expect(float64ToBuffer(Float64Array.of(1)).toString('hex')).toBe('000000000000f03f');
	});

	it('are read from bytes at any address', () => {
		const shifted = Buffer.concat([Buffer.of(9), float64ToBuffer(Float64Array.of(2.5, -4))]).subarray(1);
		expect(bufferToFloat64(shifted)).toEqual(Float64Array.of(2.5, -4));
	});

	it('do not take a view of a larger array for the whole of it', () => {
		const whole = Float64Array.of(1, 2, 3, 4);
		expect(bufferToFloat64(float64ToBuffer(whole.subarray(1, 3)))).toEqual(Float64Array.of(2, 3));
	});

	it('are refused when their length cannot be right', () => {
		expect(() => bufferToFloat64(Buffer.alloc(12))).toThrow(/12 bytes/);
		expect(() => bufferToFloat32(Buffer.alloc(6))).toThrow(/6 bytes/);
		expect(() => decodeSeries({ ...encodeSeries(series(5)), interval_count: 4 })).toThrow(/4 intervals/);
	});
});
