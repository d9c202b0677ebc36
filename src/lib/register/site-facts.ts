import { z } from 'zod';
import { requiredText, text } from './form-text';
import { isTimeZone } from './time-zones';

/** A site of a client, as entered. */
export const siteSchema = z.object({
	name: requiredText(200, 'Enter the name of the site, as people there call it.'),
	address: text(500),
	utility: text(200),
	timeZone: z.string().refine(isTimeZone, 'Choose the time zone in which the site lies.'),
	notes: text(4000)
});

export type SiteFacts = z.infer<typeof siteSchema>;
