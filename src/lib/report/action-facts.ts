import { z } from 'zod';

const CALENDAR_DAY = /^\d{4}-\d{2}-\d{2}$/;

/** A recommended action as its form states it; an empty due day means no date. */
export const actionSchema = z.object({
	title: z
		.string()
		.trim()
		.min(1, 'Say in a few words what is to be done.')
		.max(200, 'Keep the title below 200 characters.'),
	detail: z.string().trim().max(4000, 'Keep the details below 4,000 characters.').default(''),
	priority: z.enum(['urgent', 'normal', 'advice']).default('normal'),
	side: z.enum(['client', 'practice']).default('client'),
	responsible: z.string().trim().max(120, 'Keep the name below 120 characters.').default(''),
	dueOn: z
		.string()
		.refine(
			(day) => day === '' || (CALENDAR_DAY.test(day) && !Number.isNaN(Date.parse(`${day}T00:00:00Z`))),
			{
				message: 'Enter a day, e.g. 2026-04-30, or leave the field empty.'
			}
		)
		.default('')
});
export type ActionFacts = z.infer<typeof actionSchema>;

export const PRIORITY_WORDS = { urgent: 'Urgent', normal: 'Normal', advice: 'Advice' } as const;
