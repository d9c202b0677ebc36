import { z } from 'zod';
import { optionalEmail, requiredText, text } from './form-text';
import { isTimeZone } from './time-zones';

/** What a practice says of itself on its reports, and its house rules, as entered. */
export const letterheadSchema = z.object({
	name: requiredText(200, 'Enter the name of the practice as it stands on its reports.'),
	shortName: requiredText(40, 'Enter a short name for narrow places, such as the foot of a page.'),
	reportPrefix: z
		.string()
		.trim()
		.toUpperCase()
		.regex(/^[A-Z0-9]{1,8}$/, 'Enter 1 to 8 letters or digits, e.g. TH for numbers like TH-2026-0142.'),
	address: text(500),
	phone: text(60),
	email: optionalEmail,
	paper: z.enum(['A4', 'LETTER'], 'Choose A4 or Letter.'),
	timeZone: z.string().refine(isTimeZone, 'Choose a time zone from the list.'),
	phaseL1: requiredText(12, 'Enter what the first line conductor is called.'),
	phaseL2: requiredText(12, 'Enter what the second line conductor is called.'),
	phaseL3: requiredText(12, 'Enter what the third line conductor is called.'),
	phaseN: requiredText(12, 'Enter what the neutral is called.'),
	allowSelfCheck: z.boolean(),
	relianceStatement: text(4000)
});

export type Letterhead = z.infer<typeof letterheadSchema>;
