import { z } from 'zod';
import { defineJob } from './job-definition';

/** Goes once through the samples of a capture and keeps least and greatest values for every zoom. */
export const makePyramid = defineJob(
	'make-pyramid',
	1,
	z.object({ surveyId: z.string(), captureId: z.string() })
);

/** One such job per capture at a time. */
export function pyramidKey(captureId: string): string {
	return `make-pyramid/${captureId}`;
}
