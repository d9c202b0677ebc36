import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { lineToLineSquares } from '$lib/harmonics/power/effective-power';
import { pointPower, type PointPower } from '$lib/harmonics/power/point-power';
import { unmappedConductors, type PointWindows } from '$lib/harmonics/power/point-windows';
import { shifted, windowRows, type Spectrum } from '../window-rows';

const HIGHEST = 13;
const level = (most: number) => fc.double({ min: 0, max: most, noNaN: true });
const angle = fc.double({ min: -180, max: 180, noNaN: true });
/** A fundamental and whatever else, dc included. */
const spectrum = (fundamental: number): fc.Arbitrary<Spectrum> =>
	fc
		.record({
			1: fc.tuple(fc.double({ min: fundamental / 2, max: fundamental, noNaN: true }), angle),
			rest: fc.dictionary(
				fc.integer({ min: 2, max: HIGHEST }).map(String),
				fc.tuple(level(fundamental / 3), angle),
				{ maxKeys: 5 }
			),
			0: fc.tuple(fc.double({ min: -fundamental / 20, max: fundamental / 20, noNaN: true }), fc.constant(0))
		})
		.map(({ rest, ...own }) => ({ ...rest, ...own }) as Spectrum);
const three = (fundamental: number) =>
	fc.tuple(spectrum(fundamental), spectrum(fundamental), spectrum(fundamental));
/** Voltages that turn L1–L2–L3, each fundamental within 40° of its place: of others the rotation cannot be told. */
const voltages = fc
	.tuple(three(230), fc.array(fc.double({ min: -40, max: 40, noNaN: true }), { minLength: 3, maxLength: 3 }))
	.map(([spectra, off]) =>
		spectra.map((one, k): Spectrum => ({ ...one, 1: [one[1]![0], off[k]! - 120 * k] }))
	);

const rowsOf = (spectra: readonly Spectrum[]) =>
	Object.fromEntries(spectra.map((one, i) => [`L${i + 1}`, windowRows([one])]));
function fourWire(u: readonly Spectrum[], i: readonly Spectrum[]): PointWindows {
	return { system: 'four-wire', highestOrder: HIGHEST, voltages: rowsOf(u), currents: rowsOf(i) };
}
const measure = (point: PointWindows, windows = [0]): PointPower => {
	const power = pointPower(point, windows);
	if (!power) throw new Error('a complete point has powers');
	return power;
};
/** Agreement to 1e-9 of the size of what is compared. */
function close(a: number, b: number, size: number): void {
	expect(Math.abs(a - b)).toBeLessThan(1e-9 * Math.max(1, size));
}
/** Greatest apparent power that these voltages and three(100) can make, roundly. */
const SIZE = 3 * 230 * 100;
/**
 * The same powers. Those without a sign are roots of differences, known to the root of the rounding, so their squares
 * are compared; factors follow from them, and do not exist where nothing flows.
 */
function samePowers<T extends object>(found: T, expected: T): void {
	for (const [name, value] of Object.entries(expected) as [keyof T & string, number][]) {
		if (!/_(W|VA|var)$/.test(name)) continue;
		const signed = /activePower_W|reactivePower_var/i.test(name);
		if (signed) close(found[name] as number, value, SIZE);
		else close((found[name] as number) ** 2, value ** 2, SIZE ** 2);
	}
}
const minus = (a: Spectrum, b: Spectrum): Spectrum =>
	Object.fromEntries(
		[...new Set([...Object.keys(a), ...Object.keys(b)])].map((key) => {
			const order = Number(key);
			const at = ([rms, deg]: readonly [number, number]) => [
				rms * Math.cos((deg * Math.PI) / 180),
				rms * Math.sin((deg * Math.PI) / 180)
			];
			const [aRe, aIm] = at(a[order] ?? [0, 0]);
			const [bRe, bIm] = at(b[order] ?? [0, 0]);
			const re = aRe! - bRe!;
			const im = aIm! - bIm!;
			return [order, order === 0 ? [re, 0] : [Math.hypot(re, im), (Math.atan2(im, re) * 180) / Math.PI]];
		})
	);
const negative = (a: Spectrum): Spectrum => minus({}, a);

describe('the powers of a point (properties of the definitions)', () => {
	it('close: S² = P² + N² = S1² + D_I² + D_V² + S_H² in every phase, S_e² and S_e1² likewise', () => {
		fc.assert(
			fc.property(voltages, three(100), (u, i) => {
				const { phases, total } = measure(fourWire(u, i));
				for (const { powers: p } of phases) {
					const square = p.apparentPower_VA ** 2;
					close(p.activePower_W ** 2 + p.nonActivePower_var ** 2, square, square);
					close(
						p.fundamentalApparentPower_VA ** 2 +
							p.currentDistortionPower_var ** 2 +
							p.voltageDistortionPower_var ** 2 +
							p.harmonicApparentPower_VA ** 2,
						square,
						square
					);
					close(
						p.fundamentalActivePower_W ** 2 + p.fundamentalReactivePower_var ** 2,
						p.fundamentalApparentPower_VA ** 2,
						square
					);
				}
				const e = total!.effective!;
				const square = e.effectiveApparentPower_VA ** 2;
				close(
					e.fundamentalEffectiveApparentPower_VA ** 2 + e.nonFundamentalEffectiveApparentPower_VA ** 2,
					square,
					square
				);
				close(
					e.positiveApparentPower_VA ** 2 + e.unbalancePower_VA ** 2,
					e.fundamentalEffectiveApparentPower_VA ** 2,
					square
				);
			})
		);
	});

	it('are ordered: |P| ≤ S_V ≤ S_A, and N is never more than S', () => {
		fc.assert(
			fc.property(voltages, three(100), (u, i) => {
				const { total } = measure(fourWire(u, i));
				const { arithmetic_VA, vector_VA } = total!.summed!;
				const slack = 1e-9 * arithmetic_VA;
				expect(Math.abs(total!.activePower_W)).toBeLessThanOrEqual(vector_VA + slack);
				expect(vector_VA).toBeLessThanOrEqual(arithmetic_VA + slack);
				const { nonActivePower_var, effectiveApparentPower_VA } = total!.effective!;
				expect(nonActivePower_var).toBeLessThanOrEqual(effectiveApparentPower_VA);
			})
		);
	});

	it('do not depend on the instant from which angles are counted', () => {
		fc.assert(
			fc.property(voltages, three(100), angle, (u, i, turn) => {
				const turned = (one: Spectrum) =>
					Object.fromEntries(
						Object.entries(one).map(([order, [rms, deg]]) => [order, [rms, deg + turn * Number(order)]])
					) as Spectrum;
				const before = measure(fourWire(u, i));
				const after = measure(fourWire(u.map(turned), i.map(turned)));
				before.phases.forEach((phase, at) => {
					samePowers(after.phases[at]!.powers, phase.powers);
					for (let order = 0; order <= HIGHEST; order++)
						close(after.phases[at]!.orders.activePower_W[order]!, phase.orders.activePower_W[order]!, SIZE);
				});
				samePowers(after.total!.effective!, before.total!.effective!);
			})
		);
	});

	it('turn their sign with the currents and nothing else', () => {
		fc.assert(
			fc.property(voltages, three(100), (u, i) => {
				const before = measure(fourWire(u, i)).total!;
				const after = measure(fourWire(u, i.map(negative))).total!;
				const size = before.effective!.effectiveApparentPower_VA;
				close(after.activePower_W, -before.activePower_W, size);
				close(after.fundamentalReactivePower_var, -before.fundamentalReactivePower_var, size);
				close(after.effective!.effectiveApparentPower_VA, size, size);
			})
		);
	});

	it('add up: P is the sum of P_h over orders and of P over phases', () => {
		fc.assert(
			fc.property(voltages, three(100), (u, i) => {
				const { phases, total } = measure(fourWire(u, i));
				const orders = total!.orders.activePower_W.subarray(0, HIGHEST + 1);
				const size = total!.effective!.effectiveApparentPower_VA;
				close(
					orders.reduce((sum, p) => sum + p, 0),
					total!.activePower_W,
					size
				);
				close(
					phases.reduce((sum, { powers }) => sum + powers.activePower_W, 0),
					total!.activePower_W,
					size
				);
			})
		);
	});

	it('line-to-line squares follow from those to neutral and their zero sequence', () => {
		fc.assert(
			fc.property(voltages, (u) => {
				const square = (one: Spectrum) => Object.values(one).reduce((sum, [rms]) => sum + rms ** 2, 0);
				const [a, b, c] = u as [Spectrum, Spectrum, Spectrum];
				const sum = minus(minus(a, negative(b)), negative(c));
				const direct = square(minus(a, b)) + square(minus(b, c)) + square(minus(c, a));
				close(lineToLineSquares(square(a) + square(b) + square(c), square(sum) / 9), direct, direct);
			})
		);
	});
});

describe('three wires', () => {
	/** Currents that add up to nothing. */
	const closed = three(100).map(([a, b]) => [a, b, negative(minus(a, negative(b)))] as const);
	const pairs = (u: readonly Spectrum[]) => ({
		L1L2: windowRows([minus(u[0]!, u[1]!)]),
		L2L3: windowRows([minus(u[1]!, u[2]!)]),
		L3L1: windowRows([minus(u[2]!, u[0]!)])
	});

	it('two wattmeters give the power that three to any star point give (Blondel)', () => {
		fc.assert(
			fc.property(voltages, closed, (u, i) => {
				const three_W = measure({ ...fourWire(u, i), system: 'three-wire' });
				const { L1, L2 } = rowsOf(i);
				const { L2L3, L3L1 } = pairs(u);
				const two_W = measure({
					system: 'three-wire',
					highestOrder: HIGHEST,
					voltages: { L2L3: L2L3!, L3L1: L3L1! },
					currents: { L1: L1!, L2: L2! }
				});
				expect([...two_W.computed].sort()).toEqual(['L1L2', 'L3']);
				close(two_W.total!.activePower_W, three_W.total!.activePower_W, SIZE);
				samePowers(two_W.total!.effective!, three_W.total!.effective!);
				for (let order = 0; order <= HIGHEST; order++)
					close(two_W.total!.orders.activePower_W[order]!, three_W.total!.orders.activePower_W[order]!, SIZE);
			})
		);
	});

	it('states no arithmetic sum to a star point that nobody can touch', () => {
		const u: Spectrum[] = [0, -120, 120].map((deg) => ({ 1: [230, deg] }));
		const i: Spectrum[] = [-20, -140, 100].map((deg) => ({ 1: [10, deg] }));
		const power = measure({ ...fourWire([], i), system: 'three-wire', voltages: pairs(u) });
		expect(power.voltageOrigin).toBe('virtual-star');
		expect(power.total!.summed).toBeNull();
		// A balanced load: 3·U·I·cos φ (common practice).
		expect(power.total!.activePower_W).toBeCloseTo(3 * 230 * 10 * Math.cos(Math.PI / 9), 8);
		expect(power.total!.effective!.powerFactor).toBeCloseTo(Math.cos(Math.PI / 9), 12);
		expect(power.total!.effective!.unbalancePower_VA).toBeLessThan(1e-3);
	});
});

describe('what is missing stays missing', () => {
	const u: Spectrum[] = [0, -120, 120].map((deg) => ({ 1: [230, deg] }));
	const i: Spectrum[] = [-20, -140, 100].map((deg) => ({ 1: [10, deg] }));

	it('a conductor without a current: its phase has no power, the point no total', () => {
		const point = fourWire(u, i.slice(0, 2));
		const power = measure(point);
		expect(power.phases.map(({ phase }) => phase)).toEqual(['L1', 'L2']);
		expect(power.total).toBeNull();
		expect(unmappedConductors(point)).toEqual([{ quantity: 'current', phase: 'L3' }]);
	});

	it('no current at all: no powers', () => {
		expect(pointPower(fourWire(u, []), [0])).toBeNull();
	});

	it('windows without data are left out of the means and counted', () => {
		const rows = windowRows([{ 1: [230, 0] }, { 1: [230, 0] }]);
		rows.components.fill(NaN, 51);
		rows.rms[1] = NaN;
		const power = measure(
			{
				system: 'single-phase',
				highestOrder: HIGHEST,
				voltages: { L1: rows },
				currents: { L1: windowRows([{ 1: [10, 0] }, { 1: [20, 0] }]) }
			},
			[0, 1]
		);
		expect(power.windowCount).toBe(1);
		expect(power.total!.activePower_W).toBeCloseTo(2300, 10);
	});

	it('orders above the highest are no data', () => {
		expect(measure(fourWire(u, i)).phases[0]!.orders.activePower_W[HIGHEST + 1]).toBeNaN();
		expect(measure(fourWire(u, i)).total!.orders.activePower_W[HIGHEST + 1]).toBeNaN();
	});
});

describe('several windows together', () => {
	it('rms by root mean square, powers by mean, and the share of windows that agree on a sign', () => {
		const power = measure(
			{
				system: 'single-phase',
				highestOrder: HIGHEST,
				voltages: { L1: windowRows(Array.from({ length: 4 }, () => ({ 1: [100, 0], 5: [10, 0] }))) },
				currents: {
					L1: windowRows([
						{ 1: [3, 0], 5: [1, 0] },
						{ 1: [4, 0], 5: [1, 180] },
						{ 1: [3, 0], 5: [1, 180] },
						{ 1: [4, 0], 5: [1, 180] }
					])
				}
			},
			[0, 1, 2, 3]
		);
		const { orders, powers } = power.phases[0]!;
		expect(orders.current_A[1]).toBeCloseTo(Math.sqrt(12.5), 12);
		expect(powers.fundamentalActivePower_W).toBeCloseTo(350, 10);
		expect(orders.activePower_W[5]).toBeCloseTo(-5, 12);
		expect(orders.agreeingShare[5]).toBe(0.75);
		expect(power.total!.orders.agreeingShare[5]).toBe(0.75);
	});

	it('takes P from the samples where it was kept: interharmonics carry power too', () => {
		const point: PointWindows = {
			system: 'single-phase',
			highestOrder: HIGHEST,
			voltages: { L1: windowRows([{ 1: [100, 0] }], 3) },
			currents: { L1: windowRows([{ 1: [10, 0] }], 2) }
		};
		const power = pointPower(point, [0], { L1: Float64Array.of(1006) })!;
		expect(power.activePowerFrom).toBe('samples');
		expect(power.phases[0]!.powers.harmonicActivePower_W).toBeCloseTo(6, 10);
		expect(measure(point).activePowerFrom).toBe('orders');
		expect(power.phases[0]!.powers.apparentPower_VA).toBeCloseTo(Math.hypot(100, 3) * Math.hypot(10, 2), 9);
	});
});

it('a balanced rectifier exports nothing at the fundamental and the sign it was given at the 5th', () => {
	const u: Spectrum = { 1: [230, 0], 5: [5, 0] };
	const i: Spectrum = { 1: [100, -10], 5: [20, 150] };
	const turn = (one: Spectrum) => [one, shifted(one, 1), shifted(one, 2)];
	const { total } = measure(fourWire(turn(u), turn(i)));
	expect(total!.orders.activePower_W[5]).toBeCloseTo(3 * 5 * 20 * Math.cos((150 * Math.PI) / 180), 9);
	expect(total!.orders.apparentPower_VA[5]).toBeCloseTo(300, 9);
	// Fifths turn backwards: nothing of them is in the positive sequence of the fundamental.
	expect(total!.effective!.positiveActivePower_W).toBeCloseTo(total!.fundamentalActivePower_W, 8);
});
