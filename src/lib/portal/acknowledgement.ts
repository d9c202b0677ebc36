import { z } from 'zod';

/** What an acknowledgement says; stored with it, so that later wording changes touch no old one. */
export const ACKNOWLEDGEMENT_STATEMENT =
	'I have received and read this report on behalf of my organisation. This confirms receipt; it does not accept liability or approve the work described.';

export const acknowledgeForm = z.object({
	typedName: z
		.string()
		.trim()
		.min(3, 'Type your full name, as you would sign.')
		.max(120, 'Type your name in at most 120 characters.'),
	confirmed: z.literal('yes', 'Tick the box to confirm that you have read the report.')
});

export const questionForm = z.object({
	body: z
		.string()
		.trim()
		.min(5, 'Write your question in a few words at least.')
		.max(4000, 'Keep it under 4,000 characters; send the rest as a second message.')
});

export const actionDoneForm = z.object({
	actionId: z.string().min(1),
	note: z.string().trim().max(2000, 'Keep the note under 2,000 characters.').default('')
});
