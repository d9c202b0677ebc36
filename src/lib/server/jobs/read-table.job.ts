import { z } from 'zod';
import { defineJob } from './job-definition';

/** Reads the files of a capture anew by the layout that was told for it. */
export const readTable = defineJob(
	'read-table',
	1,
	z.object({ surveyId: z.string(), captureId: z.string() })
);
