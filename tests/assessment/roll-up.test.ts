import { describe, expect, it } from 'vitest';
import { rollUpVerdicts, weakestEvidence } from '$lib/assessment/roll-up';
import { VERDICTS, type Verdict } from '$lib/assessment/assessment';

describe('the worst governs', () => {
	it.each<[Verdict[], Verdict]>([
		[[], 'not-assessed'],
		[['compliant'], 'compliant'],
		[['compliant', 'compliant-inside-uncertainty'], 'compliant-inside-uncertainty'],
		[['compliant', 'not-assessed'], 'not-assessed'],
		[['compliant-inside-uncertainty', 'not-assessed'], 'not-assessed'],
		[['not-assessed', 'exceeds-inside-uncertainty'], 'exceeds-inside-uncertainty'],
		[['exceeds', 'not-assessed', 'compliant'], 'exceeds']
	])('%j is %s', (verdicts, expected) => {
		expect(rollUpVerdicts(verdicts)).toBe(expected);
		expect(rollUpVerdicts([...verdicts].reverse())).toBe(expected);
	});

	it('knows every verdict', () => {
		for (const verdict of VERDICTS) expect(rollUpVerdicts([verdict])).toBe(verdict);
	});

	it('claims no more than the weakest evidence', () => {
		expect(weakestEvidence(['weekly', 'partial'])).toBe('partial');
		expect(weakestEvidence(['snapshot', 'weekly'])).toBe('snapshot');
		expect(weakestEvidence(['weekly'])).toBe('weekly');
		expect(weakestEvidence([])).toBe('snapshot');
	});
});
