import { z } from 'zod';
import { defineJob } from './job-definition';

/** Reads the files of one set and makes a capture of them, or says why not. */
export const recogniseCapture = defineJob(
	'recognise-capture',
	1,
	z.object({
		surveyId: z.string(),
		uploadIds: z.array(z.string()).min(1),
		/** What the capture will be called: the files' common stem. */
		name: z.string().min(1),
		requestedBy: z.object({ userId: z.string(), name: z.string() })
	})
);
