import { z } from 'zod';

export const judgedBySchema = z.object({
	limitSetId: z.coerce.number('Choose a limit set.').int().positive('Choose a limit set.'),
	decisionRule: z.enum(['guarded', 'simple'], 'Choose a decision rule.')
});
