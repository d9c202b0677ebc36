/** Published and derived figures with their sources: power-and-sequence-examples.json. */
import { describe, expect, it } from 'vitest';
import { singlePhasePower } from '$lib/harmonics/power/apparent-power';
import {
	effectiveCurrent_A,
	effectiveVoltageFourWire_V,
	effectiveVoltageThreeWire_V
} from '$lib/harmonics/power/effective-power';
import { pointPower } from '$lib/harmonics/power/point-power';
import { lineVoltageDeviation_pct } from '$lib/harmonics/sequence/line-deviation';
import { neutralCurrent } from '$lib/harmonics/sequence/neutral-current';
import { pointSequences } from '$lib/harmonics/sequence/point-sequences';
import { lineToLineUnbalance_pct, sequenceComponents } from '$lib/harmonics/sequence/sequence-components';
import { shifted, windowRows, type Spectrum } from '../harmonics/window-rows';
import { examples } from './power-and-sequence-examples.json';

type Figures = Record<string, number>;

function example(id: string) {
	const found = examples.find((candidate) => candidate.id === id);
	if (!found) throw new Error(`no example ${id}`);
	return found as unknown as {
		inputs: Record<string, never>;
		expected: Figures;
		unrounded: Figures;
		tolerance: number | Figures;
	};
}

/** Measured figures against the published ones by their tolerance, and the unrounded ones to 1e-8 of their size. */
function agree(id: string, measured: Figures): void {
	const { expected, unrounded, tolerance } = example(id);
	for (const [name, value] of Object.entries(measured)) {
		const allowed = typeof tolerance === 'number' ? tolerance : tolerance[name];
		if (expected[name] !== undefined && allowed !== undefined)
			expect(Math.abs(value - expected[name]), `${id} ${name} published`).toBeLessThanOrEqual(allowed);
		const exact = unrounded[name];
		if (exact === undefined) throw new Error(`${id} states no ${name}`);
		expect(Math.abs(value - exact), `${id} ${name}`).toBeLessThan(2e-9 * Math.max(1, Math.abs(exact)));
	}
}

const rows = (spectrum: Spectrum) => windowRows([spectrum]);
const point = (system: 'single-phase' | 'three-wire' | 'four-wire', voltages: object, currents: object) => ({
	system,
	highestOrder: 50,
	voltages,
	currents
});

describe('powers of one phase', () => {
	it('IEEE Std 1459-2010, example of one phase', () => {
		const { inputs } = example('ex-ieee1459-single-phase');
		// Angles of the example are those of sines; at one order the convention drops out of every power.
		const measured = pointPower(
			point('single-phase', { L1: rows(inputs['V_rms_angle']!) }, { L1: rows(inputs['I_rms_angle']!) }),
			[0]
		)!;
		const { powers, orders } = measured.phases[0]!;
		agree('ex-ieee1459-single-phase', {
			P1: powers.fundamentalActivePower_W,
			P3: orders.activePower_W[3]!,
			P5: orders.activePower_W[5]!,
			P7: orders.activePower_W[7]!,
			P_H: powers.harmonicActivePower_W,
			P: powers.activePower_W,
			Q1: powers.fundamentalReactivePower_var,
			Q3: orders.reactivePower_var[3]!,
			Q5: orders.reactivePower_var[5]!,
			Q7: orders.reactivePower_var[7]!,
			S1: powers.fundamentalApparentPower_VA,
			S_N: powers.nonFundamentalApparentPower_VA,
			D_I: powers.currentDistortionPower_var,
			D_V: powers.voltageDistortionPower_var,
			S_H: powers.harmonicApparentPower_VA,
			D_H: powers.harmonicDistortionPower_var,
			N: powers.nonActivePower_var,
			PF1: powers.displacementFactor,
			PF: powers.powerFactor,
			S_N_over_S1: powers.harmonicPollution
		});
		// The remembered S is 0.06 VA off what its own inputs give; the unrounded one is what counts.
		expect(Math.abs(powers.apparentPower_VA - 10517.49257)).toBeLessThan(1e-5);
	});

	it('mean power of two series with few orders in common (Erickson & Maksimovic, chapter 20)', () => {
		const { inputs } = example('ex-avg-power-harmonics');
		const rms = (peaks: Spectrum): Spectrum =>
			Object.fromEntries(
				Object.entries(peaks).map(([order, [peak, angle]]) => [order, [peak / Math.SQRT2, angle]])
			);
		const measured = pointPower(
			point('single-phase', { L1: rows(rms(inputs['v_peak']!)) }, { L1: rows(rms(inputs['i_peak']!)) }),
			[0]
		)!;
		agree('ex-avg-power-harmonics', { P: measured.phases[0]!.powers.activePower_W });
	});

	// Power factor from the split, current at the derated rating; the efficiency belongs to the load behind it.
	it.each(['ex-outlet-power-peak-rectifier', 'ex-outlet-power-pfc'])('power at an outlet: %s', (id) => {
		const given = example(id).inputs as unknown as Figures;
		const current = given['I_breaker']! * given['derating']!;
		const powers = singlePhasePower({
			voltage_V: given['V']!,
			current_A: current,
			fundamentalVoltage_V: given['V']!,
			// A voltage without harmonics: only the fundamental of the current carries power.
			fundamentalCurrent_A: current * given['power_factor']!,
			activePower_W: given['V']! * current * given['power_factor']!,
			fundamentalActivePower_W: given['V']! * current * given['power_factor']!,
			fundamentalReactivePower_var: 0
		});
		agree(id, {
			P_W: given['V']! * current * powers.powerFactor * given['efficiency']!
		});
		expect(powers.displacementFactor).toBeCloseTo(1, 12);
	});
});

describe('effective quantities', () => {
	it('one loaded phase of four wires (IEEE Std 1459-2010, definitions of I_e and U_e)', () => {
		const measured = pointPower(
			point(
				'four-wire',
				{ L1: rows({ 1: [230, 0] }), L2: rows({ 1: [230, -120] }), L3: rows({ 1: [230, 120] }) },
				{
					L1: rows({ 1: [100, 0] }),
					L2: rows({ 1: [0, 0] }),
					L3: rows({ 1: [0, 0] }),
					N: rows({ 1: [100, 0] })
				}
			),
			[0]
		)!.total!;
		agree('ex-ieee1459-effective-one-phase', {
			Ie: measured.effective!.effectiveCurrent_A,
			Se: measured.effective!.effectiveApparentPower_VA,
			PFe: measured.effective!.powerFactor
		});
		// What the older sum says of the same load.
		expect(measured.summed!.arithmetic_VA).toBeCloseTo(23000, 8);
		expect(measured.summed!.arithmeticPowerFactor).toBeCloseTo(1, 12);
		expect(measured.summed!.vector_VA).toBeCloseTo(23000, 8);
	});

	it('is the plain rms where everything is balanced', () => {
		const lineToLine = 230 * Math.sqrt(3);
		expect(effectiveVoltageFourWire_V([230, 230, 230], [lineToLine, lineToLine, lineToLine])).toBeCloseTo(
			230,
			10
		);
		expect(effectiveVoltageThreeWire_V([400, 400, 400])).toBeCloseTo(400 / Math.sqrt(3), 10);
		expect(effectiveCurrent_A([10, 10, 10], 0)).toBeCloseTo(10, 12);
	});
});

describe('symmetrical components', () => {
	const polar = ([rms, phase_deg]: readonly [number, number]) => ({ rms, phase_deg });
	const sequencesOf = (id: string, names: readonly [string, string, string]) => {
		const given = example(id).inputs as unknown as Record<string, [number, number]>;
		return sequenceComponents(polar(given[names[0]]!), polar(given[names[1]]!), polar(given[names[2]]!));
	};

	it('12+j24, 16−j2, −4−j6 (university textbook companion)', () => {
		const given = example('ex-seq-12j24').inputs as unknown as Record<string, [number, number]>;
		const [a, b, c] = ['IR', 'IY', 'IB'].map((name) => {
			const [re, im] = given[name]!;
			return { rms: Math.hypot(re, im), phase_deg: (Math.atan2(im, re) * 180) / Math.PI };
		});
		const { zero, positive, negative } = sequenceComponents(a!, b!, c!);
		const re = (p: typeof zero) => p.rms * Math.cos((p.phase_deg * Math.PI) / 180);
		const im = (p: typeof zero) => p.rms * Math.sin((p.phase_deg * Math.PI) / 180);
		agree('ex-seq-12j24', {
			I0_re: re(zero),
			I0_im: im(zero),
			I1_re: re(positive),
			I1_im: im(positive),
			I2_re: re(negative),
			I2_im: im(negative)
		});
	});

	it('100∠90°, 116∠0°, 71∠224.8° (university textbook companion)', () => {
		const { zero, positive, negative } = sequencesOf('ex-seq-100-116-71', ['va', 'vb', 'vc']);
		agree('ex-seq-100-116-71', {
			V0: zero.rms,
			V1: positive.rms,
			V2: negative.rms,
			V0_deg: zero.phase_deg,
			V1_deg: positive.phase_deg,
			V2_deg: negative.phase_deg
		});
	});

	it.each(['ex-seq-open-line', 'ex-seq-blown-fuse'])('%s (from memory)', (id) => {
		const { zero, positive, negative } = sequencesOf(id, ['Ia', 'Ib', 'Ic']);
		agree(id, {
			I0: zero.rms,
			I1: positive.rms,
			I1_deg: positive.phase_deg,
			I2: negative.rms,
			I2_deg: negative.phase_deg
		});
	});

	it('finds that phase b leads before it names the sequences', () => {
		const given = example('ex-seq-phase-order-trap').inputs as unknown as Record<string, [number, number]>;
		const found = pointSequences(
			point(
				'four-wire',
				{ L1: rows({ 1: given['va']! }), L2: rows({ 1: given['vb']! }), L3: rows({ 1: given['vc']! }) },
				{}
			),
			[0]
		)!;
		expect(found.rotation).toBe('L1-L3-L2');
		agree('ex-seq-phase-order-trap', {
			larger_component: found.voltage!.positive.rms[1]!,
			smaller_component: found.voltage!.negative.rms[1]!,
			V0: found.voltage!.zero.rms[1]!,
			angle_larger: found.voltage!.positive.phase_deg[1]!,
			angle_smaller: found.voltage!.negative.phase_deg[1]!,
			angle_V0: found.voltage!.zero.phase_deg[1]!
		});
	});
});

describe('unbalance', () => {
	it.each(['ex-unbalance-iec-state2', 'ex-unbalance-iec-state3'])(
		'%s: u2 and u0 of a four-wire point, u2 of its line-to-line voltages (from memory)',
		(id) => {
			const levels = (example(id).inputs as unknown as { phase_percent: number[] }).phase_percent;
			const voltages = Object.fromEntries(
				levels.map((level, i) => [`L${i + 1}`, rows({ 1: [level, -120 * i] })])
			);
			const found = pointSequences(point('four-wire', voltages, {}), [0])!;
			const [u12, u23, u31] = found.lineToLine_V!;
			agree(id, {
				u2_percent: found.voltage!.u2_pct,
				u0_percent: found.voltage!.u0_pct,
				u2_from_line_line_formula: lineToLineUnbalance_pct(u12, u23, u31),
				U12: u12,
				U23: u23,
				U31: u31
			});
		}
	);

	it.each(['ex-nema-462-463-455', 'ex-nema-460-467-450'])(
		'%s: deviation from the mean, beside the negative-sequence factor of the same voltages',
		(id) => {
			const [u12, u23, u31] = (example(id).inputs as unknown as { V_LL: [number, number, number] }).V_LL;
			agree(id, {
				nema_percent: lineVoltageDeviation_pct(u12, u23, u31),
				u2_percent_iec: lineToLineUnbalance_pct(u12, u23, u31)
			});
		}
	);
});

describe('neutral current', () => {
	it('of balanced third and ninth harmonics is three times theirs', () => {
		const line: Spectrum = { 1: [100, 0], 3: [60, 30], 9: [20, -50] };
		const found = neutralCurrent(
			point('four-wire', {}, { L1: rows(line), L2: rows(shifted(line, 1)), L3: rows(shifted(line, 2)) }),
			[0]
		)!;
		agree('ex-neutral-triplen', {
			I_N: found.computed!.rms_A,
			ratio: found.ratioToLine,
			I_phase_rms: found.computed!.rms_A / found.ratioToLine
		});
		expect(found.computed!.oddTriplenShare).toBeCloseTo(1, 12);
	});
});
