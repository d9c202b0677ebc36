import { z } from 'zod';

/** Own limit of a practice for its originals, in GB as typed; empty means none of its own. */
export const storageQuotaSchema = z.object({
	limit_GB: z
		.string()
		.trim()
		.transform((text) => text.replace(',', '.').replace(/\s*GB$/i, ''))
		.refine((text) => text === '' || (Number(text) > 0 && Number(text) <= 1e6), {
			message: 'Enter a number of gigabytes such as 200, or leave the field empty.'
		})
});

/** Null where the field was left empty. */
export function quotaOf(limit_GB: string): number | null {
	return limit_GB === '' ? null : Math.round(Number(limit_GB) * 1e9);
}
