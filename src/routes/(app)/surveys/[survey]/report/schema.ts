import { z } from 'zod';

/** A draft as its form states it; empty findings are left out. */
export const draftSchema = z.object({
	revisionId: z.string().min(1),
	edition: z.coerce.number().int().positive(),
	title: z
		.string()
		.trim()
		.min(1, 'Give the report a title.')
		.max(160, 'Keep the title below 160 characters.'),
	summary: z.string().trim().max(8000, 'Keep the summary below 8,000 characters: it is one page.'),
	findings: z
		.array(z.string().trim().max(4000, 'Keep each finding below 4,000 characters.'))
		.max(60, 'Keep to 60 findings.')
		.transform((list) => list.filter((text) => text !== ''))
});
