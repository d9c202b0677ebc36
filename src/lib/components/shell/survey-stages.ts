/** The six stages of a survey, in the order they are worked. */
export const SURVEY_STAGES = [
	{ key: 'point', label: 'Point' },
	{ key: 'captures', label: 'Captures' },
	{ key: 'readings', label: 'Readings' },
	{ key: 'verdict', label: 'Verdict' },
	{ key: 'remedies', label: 'Remedies' },
	{ key: 'report', label: 'Report' }
] as const;

export type SurveyStageKey = (typeof SURVEY_STAGES)[number]['key'];

export interface SurveyStageState {
	/** `done`: the line is drawn; `open`: work in hand or ahead; `blocked`: something earlier is missing. */
	progress: 'done' | 'open' | 'blocked';
	/** A few words: "3 files, 7.1 days", "needs a demand current". */
	text: string;
	href: string;
}
