import { z } from 'zod';
import { defineJob } from './job-definition';

/** Makes the PDF of a draft, to be looked at before it is sent for check. */
export const renderReport = defineJob('render-report', 1, z.object({ revisionId: z.string() }));
