import { z } from 'zod';
import { optionalEmail, requiredText, text } from './form-text';

/** A client organisation, as entered. */
export const clientSchema = z.object({
	name: requiredText(200, 'Enter the name of the organisation.'),
	contactName: text(200),
	contactEmail: optionalEmail,
	contactPhone: text(60),
	address: text(500),
	notes: text(4000)
});

export type ClientFacts = z.infer<typeof clientSchema>;
