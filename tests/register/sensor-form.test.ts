import { describe, expect, it } from 'vitest';
import { errorOfClass_pct, sensorError_pct, type SensorKind } from '$lib/register/sensor-facts';
import {
	EMPTY_SENSOR,
	parseAngle_deg,
	sensorFactsFromForm,
	sensorFormFromFacts,
	sensorFormSchema
} from '$lib/register/sensor-form';
import { formatSensorRatio, parseSensorRatio, toPrimaryFactor } from '$lib/register/sensor-ratio';

describe('the ratio of a sensor as people type it', () => {
	it.each([
		['clamp', '1000 A : 1 V', 1000, 1, 'V'],
		['clamp', '1000A/1V', 1000, 1, 'V'],
		['clamp', '10 mV/A', 1, 10, 'mV'],
		['clamp', '1 mV per A', 1, 1, 'mV'],
		['clamp', '0.1 V/A', 1, 0.1, 'V'],
		['clamp', '1 kA : 1 A', 1000, 1, 'A'],
		['flexible-coil', '3000 A / 333 mV', 3000, 333, 'mV'],
		['flexible-coil', '3000 : 3', 3000, 3, 'V'],
		['current-transformer', '200 : 5 A', 200, 5, 'A'],
		['current-transformer', '200/5', 200, 5, 'A'],
		['current-transformer', '400 A : 333 mV', 400, 333, 'mV'],
		['shunt', '100 A : 60 mV', 100, 60, 'mV'],
		['shunt', '60 mV / 100 A', 100, 60, 'mV'],
		['voltage-transformer', '14.4 kV : 120 V', 14400, 120, 'V'],
		['voltage-transformer', '14.4 kV/120 V', 14400, 120, 'V'],
		['voltage-lead', '10 : 1', 10, 1, 'V']
	] as const)('%s “%s”', (kind, text, primary, secondary, secondaryUnit) => {
		const parsed = parseSensorRatio(kind, text);
		expect(parsed).toEqual({ ok: true, value: { primary, secondary, secondaryUnit } });
		if (!parsed.ok) return;
		// What is shown reads back as the same.
		expect(parseSensorRatio(kind, formatSensorRatio(kind, parsed.value))).toEqual(parsed);
	});

	it.each([
		['clamp', '1000'],
		['clamp', 'a lot : 1 V'],
		['clamp', '0 A : 1 V'],
		['clamp', '1 : 2 : 3'],
		['shunt', '100 A : 5 A'],
		['voltage-transformer', '14.4 kV : 5 A'],
		['current-transformer', '200 V : 5 A']
	] as [SensorKind, string][])('refuses %s “%s” with an example', (kind, text) => {
		const parsed = parseSensorRatio(kind, text);
		expect(parsed.ok).toBe(false);
		if (!parsed.ok) expect(parsed.problem).toContain('for example');
	});

	it('turns a value at the input into one of the primary', () => {
		expect(toPrimaryFactor({ primary: 1000, secondary: 1, secondaryUnit: 'V' })).toBe(1000);
		expect(toPrimaryFactor({ primary: 200, secondary: 5, secondaryUnit: 'A' })).toBe(40);
		expect(toPrimaryFactor({ primary: 1, secondary: 10, secondaryUnit: 'mV' })).toBe(100);
	});
});

describe('accuracy of a sensor', () => {
	it.each([
		['0.5', 0.5],
		['0,5', 0.5],
		['0.5S', 0.5],
		['class 1', 1],
		['cl. 3', 3],
		['5P20', null],
		['good', null],
		['', null]
	])('class “%s” stands for %s %%', (mark, error_pct) => {
		expect(errorOfClass_pct(mark)).toBe(error_pct);
	});

	it('prefers the stated error, and says not known where there is neither', () => {
		expect(sensorError_pct({ ratioError_pct: 0.7, accuracyClass: '1' })).toBe(0.7);
		expect(sensorError_pct({ ratioError_pct: null, accuracyClass: '1' })).toBe(1);
		expect(sensorError_pct({ ratioError_pct: null, accuracyClass: '' })).toBeNull();
	});

	it('reads angles in degrees and in minutes of arc', () => {
		expect(parseAngle_deg('0.5°')).toBe(0.5);
		expect(parseAngle_deg('30 min')).toBe(0.5);
		expect(parseAngle_deg("45'")).toBe(0.75);
		expect(parseAngle_deg('1,5')).toBe(1.5);
		expect(parseAngle_deg('half')).toBeNull();
	});
});

describe('the sensor form', () => {
	const form = {
		...EMPTY_SENSOR,
		name: 'Clamp 3',
		ratio: '1000 A : 1 V',
		ratioError: '0.75 %',
		phaseError: '45 min',
		highestFrequency: '10 kHz'
	};

	it('gives facts, and the same facts again after showing them', () => {
		const facts = sensorFactsFromForm(sensorFormSchema.parse(form));
		expect(facts).toMatchObject({
			ratio: { primary: 1000, secondary: 1, secondaryUnit: 'V' },
			ratioError_pct: 0.75,
			phaseError_deg: 0.75,
			highestFrequency_Hz: 10_000
		});
		expect(sensorFactsFromForm(sensorFormFromFacts(facts))).toEqual(facts);
	});

	it('says beside the field what to enter', () => {
		const checked = sensorFormSchema.safeParse({
			...form,
			name: '',
			ratio: 'much',
			ratioError: '80 %',
			phaseError: '90°',
			highestFrequency: 'high'
		});
		expect(checked.error?.issues.map((issue) => issue.path[0]).sort()).toEqual(
			['name', 'ratio', 'ratioError', 'phaseError', 'highestFrequency'].sort()
		);
	});
});
