import { z } from 'zod';
import { defineJob } from './job-definition';

/** Turns a capture with confirmed channels into an analysis. */
export const analyseCapture = defineJob(
	'analyse-capture',
	1,
	z.object({ surveyId: z.string(), captureId: z.string() })
);
