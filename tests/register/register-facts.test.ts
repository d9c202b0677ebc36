import { describe, expect, it } from 'vitest';
import { clientSchema } from '$lib/register/client-facts';
import { computeDemandCurrent } from '$lib/register/demand-facts';
import { isCalendarDay } from '$lib/register/form-text';
import { calibrationSchema, calibrationState } from '$lib/register/instrument-facts';
import { formatShortCircuitRatio } from '$lib/register/ratio-class';
import { pointGaps } from '$lib/register/point-gaps';
import { computeShortCircuit } from '$lib/register/short-circuit-facts';
import { siteSchema } from '$lib/register/site-facts';
import { formatSurveyNumber, suggestSurveyTitle } from '$lib/register/survey-facts';
import { countryOfTimeZone, isTimeZone, timeZoneNames } from '$lib/register/time-zones';

const LV = { system: 'four-wire' as const, nominalVoltage_V: 480 };

describe('demand current from what was entered', () => {
	const monthly = (given: number[], quantity: 'active' | 'apparent' = 'active') => ({
		...LV,
		demand: {
			method: 'monthly' as const,
			quantity,
			demands: Array.from({ length: 12 }, (_, i) => given[i] ?? null),
			powerFactor: quantity === 'active' ? 0.9 : null,
			source: ''
		}
	});

	it('twelve equal months give the current of one: S = √3·U·I', () => {
		const computed = computeDemandCurrent(monthly(Array<number>(12).fill(720_000)));
		// 720 kW at 0.9 is 800 kVA; 800 kVA ÷ (√3 · 480 V) = 962.25 A.
		expect(computed.current_A).toBeCloseTo(800_000 / (Math.sqrt(3) * 480), 9);
		expect(computed.working).toHaveLength(13);
		expect(computed.remarks).toEqual([]);
	});

	it('fewer months give their own mean, and the remark says how many', () => {
		const computed = computeDemandCurrent(monthly([600_000, 840_000, 720_000]));
		expect(computed.current_A).toBeCloseTo(800_000 / (Math.sqrt(3) * 480), 9);
		expect(computed.remarks.join(' ')).toContain('Only 3 of the twelve');
	});

	it('is null, not zero, while nothing is known', () => {
		expect(computeDemandCurrent({ ...LV, demand: { method: 'unknown' } }).current_A).toBeNull();
		expect(computeDemandCurrent(monthly([])).current_A).toBeNull();
	});
});

describe('short-circuit current from what was entered', () => {
	it('1500 kVA of 5.75 % at 480 V: 31.4 kA on an infinite bus', () => {
		const shortCircuit = {
			method: 'transformer' as const,
			rating_VA: 1_500_000,
			impedance_pct: 5.75,
			upstreamFaultLevel_VA: null,
			source: ''
		};
		// The usual hand calculation (common practice): rated current S/(√3·U) = 1804 A, divided by 0.0575.
		const byHand_A = 1_500_000 / (Math.sqrt(3) * 480) / 0.0575;
		expect(computeShortCircuit({ ...LV, shortCircuit }).current_A).toBeCloseTo(byHand_A, 6);
		expect(computeShortCircuit({ ...LV, shortCircuit }).remarks.join(' ')).toContain('infinite');
		const stiff = { ...shortCircuit, upstreamFaultLevel_VA: 26_086_956.521739 };
		// An equal impedance in front halves the current.
		expect(computeShortCircuit({ ...LV, shortCircuit: stiff }).current_A).toBeCloseTo(byHand_A / 2, 6);
	});

	it('is null while nothing is known', () => {
		expect(computeShortCircuit({ ...LV, shortCircuit: { method: 'unknown' } }).current_A).toBeNull();
	});
});

describe('the short-circuit ratio', () => {
	it.each([
		[31.2, '31.2'],
		[20, '20.0'],
		[19.98, '19.98'],
		[1000.0004, '1,000.0004']
	])('%f reads %s', (ratio, shown) => {
		expect(formatShortCircuitRatio(ratio)).toBe(shown);
	});
});

describe('what a point lacks', () => {
	it('says what each missing fact is needed for', () => {
		const gaps = pointGaps({
			limitSetId: null,
			demand: { method: 'unknown' },
			shortCircuit: { method: 'unknown' }
		});
		expect(gaps.map((gap) => gap.fact)).toEqual(['limit-set', 'demand-current', 'short-circuit-current']);
		expect(
			pointGaps({
				limitSetId: 1,
				demand: { method: 'entered', demandCurrent_A: 1, source: '' },
				shortCircuit: { method: 'current', shortCircuitCurrent_A: 1, source: '' }
			})
		).toEqual([]);
	});
});

describe('calibration', () => {
	it.each([
		[null, 'none'],
		['2026-03-18', 'overdue'],
		['2026-03-19', 'soon'],
		['2026-05-18', 'soon'],
		['2026-05-19', 'valid']
	] as const)('due %s is %s on 19 March 2026', (dueOn, state) => {
		expect(calibrationState(dueOn, '2026-03-19')).toBe(state);
	});

	it('is due after it was made', () => {
		const certificate = { certificateNumber: 'C-1', laboratory: '', calibratedOn: '2026-01-01' };
		expect(calibrationSchema.safeParse({ ...certificate, dueOn: '2027-01-01' }).success).toBe(true);
		expect(calibrationSchema.safeParse({ ...certificate, dueOn: '2026-01-01' }).success).toBe(false);
		expect(isCalendarDay('2026-02-30')).toBe(false);
		expect(isCalendarDay('2024-02-29')).toBe(true);
	});
});

describe('clients, sites and surveys', () => {
	it('drop outer blanks and refuse what cannot be an address', () => {
		const client = {
			name: ' Ostler Lane ',
			contactName: '',
			contactEmail: '',
			contactPhone: '',
			address: '',
			notes: ''
		};
		expect(clientSchema.parse(client).name).toBe('Ostler Lane');
		expect(clientSchema.safeParse({ ...client, contactEmail: 'nobody' }).success).toBe(false);
		expect(clientSchema.safeParse({ ...client, name: '   ' }).success).toBe(false);
	});

	it('know time zones and the country they lie in', () => {
		expect(timeZoneNames()[0]).toBe('UTC');
		expect(isTimeZone('Europe/London')).toBe(true);
		expect(isTimeZone('Europe/Nowhere')).toBe(false);
		const site = { name: 'x', address: '', utility: '', timeZone: 'Mars/Base', notes: '' };
		expect(siteSchema.safeParse(site).success).toBe(false);
		// tz database, zone1970.tab: the country of each zone.
		expect(countryOfTimeZone('America/New_York')).toBe('US');
		expect(countryOfTimeZone('Europe/Berlin')).toBe('DE');
		expect(countryOfTimeZone('UTC')).toBeNull();
	});

	it('number surveys and name them by the site’s own month', () => {
		expect(formatSurveyNumber(142)).toBe('S-0142');
		expect(formatSurveyNumber(12_345)).toBe('S-12345');
		// 31 March 23:30 UTC is April in Berlin already.
		const now = new Date('2026-03-31T23:30:00Z');
		expect(suggestSurveyTitle('Harrow Dock 4', now, 'Europe/Berlin')).toContain('April 2026');
		expect(suggestSurveyTitle('Harrow Dock 4', now, 'UTC')).toContain('March 2026');
	});
});
