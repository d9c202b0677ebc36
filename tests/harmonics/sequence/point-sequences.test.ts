import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { PointWindows } from '$lib/harmonics/power/point-windows';
import { balancedSequence } from '$lib/harmonics/sequence/order-sequences';
import { neutralCurrent } from '$lib/harmonics/sequence/neutral-current';
import { pointSequences, type PointSequences } from '$lib/harmonics/sequence/point-sequences';
import { sequenceComponents } from '$lib/harmonics/sequence/sequence-components';
import { shifted, windowRows, type Spectrum } from '../window-rows';

const polar = fc.record({
	rms: fc.double({ min: 0, max: 1000, noNaN: true }),
	phase_deg: fc.double({ min: -180, max: 180, noNaN: true })
});
const rectangular = (p: { rms: number; phase_deg: number }, turn_deg = 0) => {
	const angle = ((p.phase_deg + turn_deg) * Math.PI) / 180;
	return [p.rms * Math.cos(angle), p.rms * Math.sin(angle)] as const;
};
const point = (
	voltages: readonly Spectrum[][],
	currents: readonly Spectrum[][] = [],
	neutral?: Spectrum[]
): PointWindows => {
	const rows = (of: readonly Spectrum[][]) =>
		Object.fromEntries(of.map((spectra, i) => [`L${i + 1}`, windowRows(spectra)]));
	return {
		system: 'four-wire',
		highestOrder: 50,
		voltages: rows(voltages),
		currents: { ...rows(currents), ...(neutral ? { N: windowRows(neutral) } : {}) }
	};
};
const balanced = (one: Spectrum) => [[one], [shifted(one, 1)], [shifted(one, 2)]];
const found = (of: PointWindows, windows = [0]): PointSequences => {
	const sequences = pointSequences(of, windows);
	if (!sequences) throw new Error('a three-phase point has sequences');
	return sequences;
};

describe('sequences', () => {
	it('add up to the phases again, and their squares to a third of the phases’', () => {
		fc.assert(
			fc.property(polar, polar, polar, (a, b, c) => {
				const { zero, positive, negative } = sequenceComponents(a, b, c);
				const size = Math.max(1, a.rms, b.rms, c.rms);
				// Xb = X0 + a²·X1 + a·X2, Xc = X0 + a·X1 + a²·X2 (Fortescue).
				for (const [phase, turn] of [
					[a, 0],
					[b, -120],
					[c, 120]
				] as const) {
					const [re, im] = rectangular(phase);
					const parts = [rectangular(zero), rectangular(positive, turn), rectangular(negative, -turn)];
					expect(Math.abs(parts.reduce((sum, [x]) => sum + x, 0) - re)).toBeLessThan(1e-10 * size);
					expect(Math.abs(parts.reduce((sum, [, y]) => sum + y, 0) - im)).toBeLessThan(1e-10 * size);
				}
				const squares = zero.rms ** 2 + positive.rms ** 2 + negative.rms ** 2;
				expect(Math.abs(3 * squares - (a.rms ** 2 + b.rms ** 2 + c.rms ** 2))).toBeLessThan(
					1e-10 * size ** 2
				);
			})
		);
	});

	it('of a balanced wave: 3n+1 positive, 3n−1 negative, 3n zero (common practice)', () => {
		const wave: Spectrum = Object.fromEntries(
			Array.from({ length: 50 }, (_, i) => [i + 1, [i === 0 ? 230 : 10, 7 * i]])
		);
		const { voltage, rotation } = found(point(balanced(wave)));
		expect(rotation).toBe('L1-L2-L3');
		for (let order = 1; order <= 50; order++)
			for (const name of ['positive', 'negative', 'zero'] as const)
				expect(voltage![name].rms[order], `${order} ${name}`).toBeCloseTo(
					name === balancedSequence(order) ? wave[order]![0] : 0,
					9
				);
		expect(voltage!.u2_pct).toBeLessThan(1e-10);
	});

	it('keep their names when two conductors are exchanged: the rotation is found first', () => {
		const wave: Spectrum = { 1: [230, 15], 5: [8, 40], 7: [5, 0] };
		const [a, b, c] = balanced(wave) as [Spectrum[], Spectrum[], Spectrum[]];
		const straight = found(point([a, b, c], [a, b, c]));
		const exchanged = found(point([a, c, b], [a, c, b]));
		expect(exchanged.rotation).toBe('L1-L3-L2');
		for (const quantity of ['voltage', 'current'] as const)
			for (const order of [1, 5, 7])
				for (const name of ['positive', 'negative', 'zero'] as const)
					expect(exchanged[quantity]![name].rms[order]).toBeCloseTo(
						straight[quantity]![name].rms[order]!,
						10
					);
	});

	it('a third harmonic between two lines is positive and negative sequence, not zero (single-phase load L1–L2)', () => {
		const current: Spectrum = { 1: [10, 0], 3: [5, 0] };
		const back: Spectrum = { 1: [10, 180], 3: [5, 180] };
		const sequences = found(point(balanced({ 1: [230, 0] }), [[current], [back], [{ 1: [0, 0] }]]));
		expect(sequences.current!.zero.rms[3]).toBeLessThan(1e-12);
		expect(sequences.current!.positive.rms[3]).toBeCloseTo(5 / Math.sqrt(3), 10);
		expect(sequences.current!.negative.rms[3]).toBeCloseTo(5 / Math.sqrt(3), 10);
		expect(sequences.current!.u2_pct).toBeCloseTo(100, 8);
	});

	it('of line-to-line voltages have no zero sequence to state, and u2 all the same', () => {
		const levels = [73, 80, 87];
		const phase = levels.map((rms, i) => ({ rms, phase_deg: -120 * i }));
		const pair = (a: number, b: number): Spectrum => {
			const [aRe, aIm] = rectangular(phase[a]!);
			const [bRe, bIm] = rectangular(phase[b]!);
			return {
				1: [Math.hypot(aRe - bRe, aIm - bIm), (Math.atan2(aIm - bIm, aRe - bRe) * 180) / Math.PI]
			};
		};
		const sequences = found({
			system: 'three-wire',
			highestOrder: 50,
			voltages: { L1L2: windowRows([pair(0, 1)]), L2L3: windowRows([pair(1, 2)]) },
			currents: {}
		});
		// IEC 62586-2 testing state 2, from memory.
		expect(sequences.voltage!.u2_pct).toBeCloseTo(5.051814855, 8);
		expect(sequences.voltage!.u0_pct).toBeNaN();
		expect(sequences.voltage!.zero.rms[1]).toBeNaN();
	});

	it('u2 over windows is the root mean square of theirs', () => {
		const state = (levels: readonly number[]) => levels.map((rms, i): Spectrum => ({ 1: [rms, -120 * i] }));
		const windows = [state([73, 80, 87]), state([100, 100, 100])];
		const voltages = [0, 1, 2].map((i) => windows.map((window) => window[i]!));
		expect(found(point(voltages), [0, 1]).voltage!.u2_pct).toBeCloseTo(5.051814855 / Math.SQRT2, 8);
	});

	it('need three conductors', () => {
		expect(pointSequences(point(balanced({ 1: [230, 0] }).slice(0, 2)), [0])).toBeNull();
		expect(pointSequences({ ...point(balanced({ 1: [230, 0] })), system: 'split-phase' }, [0])).toBeNull();
	});
});

describe('the neutral current', () => {
	const wave: Spectrum = { 1: [100, -10], 3: [40, 20], 5: [20, 0], 9: [10, 0] };

	it('computed agrees with measured, and says when the transducer points the other way', () => {
		const measured: Spectrum = { 1: [0, 0], 3: [120, 20], 9: [30, 0] };
		const backwards: Spectrum = { 1: [0, 0], 3: [120, -160], 9: [30, 180] };
		const straight = neutralCurrent(point([], balanced(wave), [measured]), [0])!;
		expect(straight.comparison!.difference_A).toBeLessThan(1e-9);
		expect(straight.comparison!.turned).toBe(false);
		const turned = neutralCurrent(point([], balanced(wave), [backwards]), [0])!;
		expect(turned.comparison!.difference_A).toBeLessThan(1e-9);
		expect(turned.comparison!.turned).toBe(true);
		expect(turned.measured!.rms_A).toBeCloseTo(Math.hypot(120, 30), 9);
	});

	it('leaves the rest to leakage or another return path, as an rms of phasors', () => {
		const { comparison } = neutralCurrent(point([], balanced(wave), [{ 3: [110, 20], 9: [30, 0] }]), [0])!;
		expect(comparison!.difference_A).toBeCloseTo(10, 9);
		expect(comparison!.difference_pct).toBeCloseTo(1000 / Math.hypot(110, 30), 8);
	});

	it('tells odd triplen orders from all multiples of three, and both from unbalance', () => {
		const neutral: Spectrum = { 1: [3, 0], 3: [4, 0], 6: [2, 0], 15: [1, 0] };
		const { measured, computed } = neutralCurrent(point([], [], [neutral]), [0])!;
		expect(computed).toBeNull();
		expect(measured!.oddTriplenShare).toBeCloseTo(17 / 30, 12);
		expect(measured!.multiplesOfThreeShare).toBeCloseTo(21 / 30, 12);
	});

	it('of unbalance alone is fundamental (three loads of 10, 20 and 30 A: 17.32 A, common practice)', () => {
		const { computed } = neutralCurrent(
			point([], [[{ 1: [10, 0] }], [{ 1: [20, -120] }], [{ 1: [30, 120] }]]),
			[0]
		)!;
		expect(computed!.rms_A).toBeCloseTo(17.3205080757, 9);
		expect(computed!.oddTriplenShare).toBe(0);
	});

	it('does not exist in a three-wire system', () => {
		expect(neutralCurrent({ ...point([], balanced(wave)), system: 'three-wire' }, [0])).toBeNull();
	});
});
