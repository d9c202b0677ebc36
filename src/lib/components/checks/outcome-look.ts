import type { CheckOutcome } from '$lib/checks/capture-check';

/** Mark and tone of an outcome; the word stands in OUTCOME_WORDS. */
export const OUTCOME_LOOK: Record<CheckOutcome, { mark: string; tone: string }> = {
	blocks: { mark: '▲', tone: 'text-oxide' },
	warns: { mark: '◐', tone: 'text-ochre' },
	'not-checked': { mark: '–', tone: 'text-ink-soft' },
	notes: { mark: '○', tone: 'text-slate' },
	passes: { mark: '●', tone: 'text-verdigris' }
};
