import { describe, expect, it } from 'vitest';
import { directionOf, directionOfTotal, type DirectionQuestion } from '$lib/harmonics/power/direction';

function asked(angle_deg: number, change: Partial<DirectionQuestion> = {}): DirectionQuestion {
	const apparent = 5 * 20;
	return {
		order: 5,
		voltage_V: 5,
		current_A: 20,
		apparentPower_VA: apparent,
		fundamentalVoltage_V: 230,
		fundamentalCurrent_A: 100,
		activePower_W: apparent * Math.cos((angle_deg * Math.PI) / 180),
		reactivePower_var: apparent * Math.sin((angle_deg * Math.PI) / 180),
		agreeingShare: 1,
		angleUncertainty_deg: 5,
		...change
	};
}

describe('the direction of an order is an indication', () => {
	it.each([
		[0, 'from-network'],
		[80, 'from-network'],
		[-84.9, 'from-network'],
		[180, 'from-installation'],
		[100, 'from-installation'],
		[-95.1, 'from-installation']
	] as const)('%d°: %s', (angle_deg, indication) => {
		const found = directionOf(asked(angle_deg));
		expect(found).toMatchObject({ indication, reason: 'sign-of-power', angleUncertainty_deg: 5 });
		expect(found.angle_deg).toBeCloseTo(angle_deg, 9);
	});

	it.each([85.1, 90, 94.9, -85.1, -94.9])('%d° lies within 5° of the quadrature: undecided', (angle_deg) => {
		expect(directionOf(asked(angle_deg))).toMatchObject({
			indication: 'undecided',
			reason: 'angle-within-uncertainty'
		});
	});

	it('the same angle is decided where it is well known, and not where it is not', () => {
		const at = (angleUncertainty_deg: number | null) => directionOf(asked(75, { angleUncertainty_deg }));
		expect(at(14.9).indication).toBe('from-network');
		expect(at(15.1).reason).toBe('angle-within-uncertainty');
		expect(at(120).reason).toBe('angle-within-uncertainty');
		expect(at(null)).toMatchObject({ indication: 'undecided', reason: 'angle-not-known' });
	});

	// Floors of IEC 61000-4-7, table 1, class I, from memory: 0.05 % of the voltage, 0.15 % of the current.
	it('a level within the noise says nothing', () => {
		expect(directionOf(asked(0, { voltage_V: 0.0004 * 230 })).reason).toBe('voltage-too-small');
		expect(
			directionOf(asked(0, { voltage_V: 0.0006 * 230, activePower_W: 2, apparentPower_VA: 2 })).reason
		).toBe('sign-of-power');
		expect(directionOf(asked(0, { current_A: 0.0014 * 100 })).reason).toBe('current-too-small');
	});

	it('windows that disagree, a resonance near by and missing data are reasons of their own', () => {
		expect(directionOf(asked(0, { agreeingShare: 0.8 })).reason).toBe('windows-disagree');
		expect(directionOf(asked(0, { resonances: [5.6] })).reason).toBe('near-resonance');
		expect(directionOf(asked(0, { resonances: [7.2] })).indication).toBe('from-network');
		expect(directionOf(asked(NaN)).reason).toBe('no-data');
		expect(directionOf(asked(0, { voltage_V: NaN })).indication).toBe('undecided');
	});

	it('scatter of the angle weighs like an angle near the quadrature', () => {
		// Mean power a twentieth of U·I although the angle of the mean is 0°: asin 0.05 is 2.9°, less than 5°.
		expect(directionOf(asked(0, { activePower_W: 5, reactivePower_var: 0 })).reason).toBe(
			'angle-within-uncertainty'
		);
	});

	it('phases that point opposite ways leave the total undecided', () => {
		const into = directionOf(asked(20));
		const out = directionOf(asked(160));
		const unsure = directionOf(asked(90));
		expect(directionOfTotal(asked(20), [into, into, out])).toMatchObject({
			indication: 'undecided',
			reason: 'phases-disagree'
		});
		expect(directionOfTotal(asked(20), [into, into, unsure]).indication).toBe('from-network');
		expect(directionOfTotal(asked(90), [into, out, into]).reason).toBe('angle-within-uncertainty');
	});
});
