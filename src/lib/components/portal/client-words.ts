import type { Verdict } from '$lib/assessment/assessment';

/** The verdicts in words for readers who are no engineers. */
export const CLIENT_VERDICT_WORDS: Record<Verdict, string> = {
	compliant: 'within the limits',
	'compliant-inside-uncertainty': 'within the limits, but close',
	'exceeds-inside-uncertainty': 'too close to call',
	exceeds: 'exceeds the limit',
	'not-assessed': 'not assessed'
};
