import { z } from 'zod';
import { defineJob } from './job-definition';

/** Freezes a checked revision: model, PDF, hashes, mail to the client. */
export const issueReport = defineJob(
	'issue-report',
	1,
	z.object({
		revisionId: z.string(),
		/** Edition that was checked; a later one is not issued by this job. */
		edition: z.number().int(),
		checker: z.object({ userId: z.string(), name: z.string() })
	})
);
