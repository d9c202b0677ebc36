import { z } from 'zod';
import { requiredText, text } from './form-text';

const title = requiredText(200, 'Enter a title, as it shall stand on the report.');
const instrumentId = z.string();
const decisionRule = z.enum(['guarded', 'simple']);

/** A survey to be opened. An empty instrument means: not decided yet. */
export const newSurveySchema = z.object({
	pointId: z.string().min(1, 'Choose the point where you measure.'),
	title,
	instrumentId,
	notes: text(4000)
});
export type NewSurvey = z.infer<typeof newSurveySchema>;

export const surveySchema = z.object({ title, instrumentId, decisionRule, notes: text(4000) });
export type SurveyFacts = z.infer<typeof surveySchema>;

export const DECISION_RULE_WORDS = {
	guarded: {
		word: 'Guarded',
		meaning: 'A value closer to its limit than the measurement uncertainty is shown as inconclusive.'
	},
	simple: {
		word: 'Simple acceptance',
		meaning: 'The value alone decides; the uncertainty is stated beside it.'
	}
} as const;

/** "Harmonic survey, Harrow Dock 4, March 2026", in the site's own month. */
export function suggestSurveyTitle(siteName: string, now: Date, timeZone: string): string {
	const month = new Intl.DateTimeFormat('en-GB', { month: 'long', year: 'numeric', timeZone }).format(now);
	return `Harmonic survey, ${siteName}, ${month}`;
}

/** 142 → "S-0142". */
export function formatSurveyNumber(count: number): string {
	return `S-${String(count).padStart(4, '0')}`;
}
