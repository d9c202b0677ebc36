import { describe, expect, it } from 'vitest';
import { assess } from '$lib/assessment/assess';
import { engineerSentence, portalSentence, rowSentence } from '$lib/assessment/verdict-sentence';
import type { Assessment, AssessedPoint, UncertaintyStatement } from '$lib/assessment/assessment';
import { limitSet } from '../limits/load-limit-files';
import { EXACT, FIVE_PERCENT, makeSeries, POINT, spectrum } from './series-builder';

const NAMES = { phaseNames: { L1: 'A', L2: 'B', L3: 'C', N: 'N' } };
const plain = (text: string) => text.replaceAll('\u00a0', ' ');

function snapshot(
	fifth: number,
	point: Partial<AssessedPoint> = {},
	uncertainty: UncertaintyStatement = EXACT
): Assessment {
	return assess({
		point: { ...POINT, ...point },
		limitSet: limitSet('ieee-519-2022'),
		series: (['L1', 'L2', 'L3'] as const).map((phase) =>
			makeSeries({
				...{ quantity: 'current', phase, interval: '3s', count: 3 },
				level: spectrum(1000, { 5: phase === 'L3' ? fifth : 1 })
			})
		),
		siteTimeZone: 'UTC',
		uncertainty,
		decisionRule: 'guarded',
		tableKeys: ['table-2']
	});
}

describe('for the engineer', () => {
	it('names phase, value, basis, order and what is allowed', () => {
		const { worst } = snapshot(9.63);
		expect(worst && plain(rowSentence(worst, NAMES))).toBe(
			'Phase C draws 9.63 % of demand current as total demand distortion, where less than 8.00 % is allowed.'.replace(
				'as total demand distortion, where less than 8.00 %',
				'at the 5th order, where less than 7.00 %'
			)
		);
	});

	it('counts what else exceeds, and says that a snapshot is indicative', () => {
		const sentence = plain(engineerSentence(snapshot(9.63), NAMES));
		expect(sentence).toContain('1 more level exceeds its limit.');
		expect(sentence).toContain('Indicative only');
	});

	it('never rounds an exceedance into a pass', () => {
		const sentence = plain(engineerSentence(snapshot(7.004), NAMES));
		expect(sentence).toContain('draws 7.004 % of demand current');
		expect(sentence).toContain('less than 7.000 %');
	});

	it('names the closest level of a compliant point', () => {
		expect(plain(engineerSentence(snapshot(5), NAMES))).toContain(
			'Every level keeps its limit; the closest is phase C at the 5th order with 5.00 % of demand current of 7.00 % allowed.'
		);
	});

	it('says which side of the limit an inconclusive value lies on', () => {
		expect(engineerSentence(snapshot(6.9, {}, FIVE_PERCENT), NAMES)).toContain(
			'below the limit by less than'
		);
		expect(engineerSentence(snapshot(7.1, {}, FIVE_PERCENT), NAMES)).toContain(
			'above the limit by less than'
		);
	});

	it('says what is missing', () => {
		expect(engineerSentence(snapshot(5, { demandCurrent_A: null }), NAMES)).toMatch(
			/^Not assessed\. Enter the maximum demand load current/
		);
	});

	it('says at an in-plant point that the comparison is advisory', () => {
		expect(engineerSentence(snapshot(5, { kind: 'in-plant' }), NAMES)).toContain('advisory');
	});

	it('follows the locale', () => {
		expect(engineerSentence(snapshot(9.63), { ...NAMES, locale: 'de' })).toContain('9,63');
	});
});

describe('for the reader who is not an engineer', () => {
	it.each([
		[9.63, EXACT, 'more harmonic current on the supply than is allowed'],
		[5, EXACT, 'is within the limits'],
		[6.9, FIVE_PERCENT, 'cannot tell for certain'],
		[7.1, FIVE_PERCENT, 'may or may not be too high']
	])('%d %%', (fifth, uncertainty, part) => {
		const sentence = portalSentence(snapshot(fifth, {}, uncertainty), NAMES);
		expect(sentence).toContain(part);
		expect(sentence).not.toMatch(/I_|THD|TDD|clause|order/i);
	});

	it('never lets a share of the limit round to the other side', () => {
		expect(plain(portalSentence(snapshot(6.9999), NAMES))).toContain('99.9 %');
		expect(plain(portalSentence(snapshot(7.0001, {}, FIVE_PERCENT), NAMES))).toContain('100.1 %');
	});

	it('does not call an exceedance an indication when its own rule was answered in full', () => {
		const short = snapshot(9.63);
		const worst = { ...short.worst!, evidence: 'weekly' as const };
		const answered = { ...short, evidence: 'partial' as const, worst };
		expect(portalSentence(answered, NAMES)).not.toContain('indication');
		expect(engineerSentence(answered, { phaseNames: NAMES.phaseNames })).toContain(
			'Other rules of the standard'
		);
		expect(portalSentence(short, NAMES)).toContain('indication');
	});

	it('admits when nothing could be assessed', () => {
		expect(portalSentence(snapshot(5, { demandCurrent_A: null }), NAMES)).toContain(
			'could not be fully assessed'
		);
	});
});
