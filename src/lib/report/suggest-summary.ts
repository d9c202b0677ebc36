import type { Assessment, Verdict } from '../assessment/assessment';

/** What a verdict means for the client, after the sentence and the figure that the report states of itself. */
const CONSEQUENCE: Record<Verdict, string> = {
	exceeds:
		'The network operator can ask for the distortion to be lowered. The recommended actions name the first steps; each is preliminary and has to be designed and verified by a licensed engineer.',
	'exceeds-inside-uncertainty':
		'The measurement alone cannot decide on which side of the limit the value lies. Measure again with a smaller uncertainty before money is spent on a remedy.',
	'compliant-inside-uncertainty':
		'The limit is kept as measured, but so closely that the measurement cannot exclude the contrary. Measure again after any change of the load.',
	compliant:
		'Nothing has to be done because of the values measured. Have the point measured again when large converters, drives or capacitor banks are added.',
	'not-assessed':
		'The report lists what is missing. The assessment can be completed as soon as these facts or measurements are there.'
};

/** First draft of the summary for the client; the engineer edits it. */
export function suggestSummary(assessment: Pick<Assessment, 'verdict' | 'worst' | 'advisory'>): string {
	const consequence = CONSEQUENCE[assessment.worst === null ? 'not-assessed' : assessment.verdict];
	return assessment.advisory
		? `${consequence}\n\nThe point lies inside the plant: the comparison helps to find the cause and says nothing about the obligations at the point of common coupling.`
		: consequence;
}
