import { describe, expect, it } from 'vitest';
import { createHalfCycles, measureHalfCycles } from '$lib/harmonics/events/half-cycle-rms';

// Definition of Urms(1/2): IEC 61000-4-30:2015, 3.25 (from memory).
const PER_CYCLE = 256;

/** Sine that crosses zero at sample 0 and changes its rms at a sample. */
function stepped(before: number, after: number, at: number, cycles = 24): Float64Array {
	return Float64Array.from(
		{ length: PER_CYCLE * cycles },
		(_, n) => (n < at ? before : after) * Math.SQRT2 * Math.sin((2 * Math.PI * n) / PER_CYCLE)
	);
}

function measure(samples: Float64Array, start: number, phase_deg: number, base = 0, end = samples.length) {
	const into = createHalfCycles(10);
	measureHalfCycles({ samples, base, end }, { start, length: 10 * PER_CYCLE }, phase_deg, into);
	return into;
}

describe('Urms(1/2)', () => {
	it('of a step from 1.0 to 0.5 at a crossing is 1.0, 0.790569415042, 0.5 (√((1 + 0.25)/2) by the definition)', () => {
		const { first, rms } = measure(stepped(1, 0.5, 5 * PER_CYCLE), 0, -90);
		expect(first).toBe(0);
		expect(rms).toHaveLength(20);
		[1, 0.790569415042, 0.5].forEach((expected, i) =>
			expect(Math.abs(rms[8 + i]! - expected)).toBeLessThan(1e-9)
		);
	});

	it('does not depend on where the buffer begins', () => {
		const whole = stepped(1, 0.3, 700);
		const from = measure(whole, 400.25, 50);
		const part = whole.slice(300);
		const shifted = measure(part, 400.25, 50, 300, 300 + part.length);
		expect(shifted.first).toBe(from.first);
		shifted.rms.forEach((value, k) => expect(Math.abs(value - from.rms[k]!)).toBeLessThan(1e-13));
	});

	it('starts at the first crossing of the fundamental in the window, falling or rising', () => {
		const samples = stepped(1, 1, 0);
		for (const lead of [0, 0.1, 0.49, 0.51, 0.99]) {
			const { first } = measure(samples, lead * (PER_CYCLE / 2), -90 + 180 * lead);
			expect(Math.abs(first - ((1 - lead) % 1))).toBeLessThan(1e-12);
		}
	});

	it('of a steady sine is within 20/r³ at 12.8 samples per cycle and at 128.37', () => {
		for (const perCycle of [12.8, 40.1, 128.37]) {
			const samples = Float64Array.from(
				{ length: Math.ceil(13 * perCycle) },
				(_, n) => Math.SQRT2 * Math.cos((2 * Math.PI * n) / perCycle)
			);
			const into = createHalfCycles(10);
			const window = { start: 0.6 * perCycle, length: 10 * perCycle };
			measureHalfCycles({ samples, base: 0, end: samples.length }, window, 216, into);
			for (const value of into.rms) expect(Math.abs(value - 1)).toBeLessThan(20 / perCycle ** 3);
		}
	});

	it('is missing where a sample is, and where the buffer ends', () => {
		const samples = stepped(1, 1, 0);
		samples[1000] = NaN;
		const { rms } = measure(samples, 0, -90);
		expect([...rms].flatMap((v, k) => (Number.isNaN(v) ? [k] : []))).toEqual([6, 7]);
		const cut = measure(stepped(1, 1, 0), 0, -90, 0, 10 * PER_CYCLE + 1).rms;
		expect([cut[18], cut[19]].map(Number.isNaN)).toEqual([false, true]);
		const none = measure(samples, 0, NaN);
		expect(none.first).toBeNaN();
		expect(none.rms.every(Number.isNaN)).toBe(true);
	});
});
