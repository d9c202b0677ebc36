import { z } from 'zod';
import { defineJob } from './job-definition';

/** Unpacks an archive and sorts its files into captures, as if they had been sent by themselves. */
export const unpackArchiveJob = defineJob(
	'unpack-archive',
	1,
	z.object({
		surveyId: z.string(),
		uploadId: z.string(),
		/** The archive's file name. */
		name: z.string().min(1),
		requestedBy: z.object({ userId: z.string(), name: z.string() })
	})
);
