import { describe, expect, it } from 'vitest';
import { assessedPointOf } from '$lib/analysis-document/assessment-entry';
import { parsePointFile } from '$lib/analysis-document/point-file';

const measured = { system: 'four-wire', nominalFrequency_Hz: 50 } as const;

function sentence(json: unknown): string {
	const parsed = parsePointFile('p.json', typeof json === 'string' ? json : JSON.stringify(json));
	if (parsed.ok) throw new Error('was read');
	return parsed.problem;
}

describe('a point file', () => {
	it('needs the nominal voltage only; what it leaves open is taken and said', () => {
		const parsed = parsePointFile('p.json', '\uFEFF{"nominalVoltage_V": 400, "Kind": "pcc"}');
		if (!parsed.ok) throw new Error(parsed.problem);
		const { point, assumptions } = assessedPointOf(parsed.value, measured);
		expect(point).toEqual({
			kind: 'pcc',
			system: 'four-wire',
			nominalVoltage_V: 400,
			nominalFrequency_Hz: 50,
			demandCurrent_A: null,
			shortCircuitCurrent_A: null
		});
		expect(assumptions.map((text) => /"\w+"/.exec(text)![0])).toEqual([
			'"kind"',
			'"system"',
			'"nominalFrequency_Hz"',
			'"Kind"'
		]);
	});

	it('computes I_sc from a transformer', () => {
		const transformer = {
			method: 'transformer',
			rating_VA: 1e6,
			impedance_pct: 6,
			upstreamFaultLevel_VA: null
		};
		const parsed = parsePointFile(
			'p.json',
			JSON.stringify({ nominalVoltage_V: 400, shortCircuit: { ...transformer, source: 'nameplate' } })
		);
		if (!parsed.ok) throw new Error(parsed.problem);
		// S/(√3·U·u_k) = 1 MVA/(√3·400 V·0.06) (common practice).
		const { point } = assessedPointOf(parsed.value, measured);
		expect(point.shortCircuitCurrent_A).toBeCloseTo(1e6 / (Math.sqrt(3) * 400 * 0.06), 6);
	});

	it('names the place and the expectation where it is wrong', () => {
		expect(sentence('{"nominalVoltage_V": 400')).toContain('p.json is not valid JSON');
		expect(sentence([400])).toContain('one JSON object');
		expect(sentence({})).toMatch(/^p\.json lacks "nominalVoltage_V"; add a number of volts/);
		expect(sentence({ nominalVoltage_V: 0 })).toMatch(/"nominalVoltage_V" is 0; a number of volts above 0/);
		expect(sentence({ nominalVoltage_V: 400, nominalFrequency_Hz: 55 })).toMatch(
			/is 55; 50 or 60 was expected/
		);
		expect(sentence({ nominalVoltage_V: 400, timeZone: 'Mars' })).toContain('"timeZone" is "Mars"');
		expect(sentence({ nominalVoltage_V: 400, currentTransformer: { primary: 100 } })).toContain(
			'(at "secondary")'
		);
		expect(
			sentence({
				nominalVoltage_V: 400,
				demandCurrent_A: 5,
				demand: { method: 'entered', demandCurrent_A: 5, source: '' }
			})
		).toContain('leave one of them out');
	});
});
