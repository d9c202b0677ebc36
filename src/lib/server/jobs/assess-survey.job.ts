import { z } from 'zod';
import { defineJob } from './job-definition';

/** Judges a survey anew from the current analyses of its captures. */
export const assessSurvey = defineJob('assess-survey', 1, z.object({ surveyId: z.string() }));
