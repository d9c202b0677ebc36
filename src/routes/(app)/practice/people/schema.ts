import { z } from 'zod';
import { ROLES } from '$lib/access/access';

export const inviteForm = z
	.object({
		email: z
			.string()
			.trim()
			.min(1, 'Enter the e-mail address.')
			.max(254, 'This address is too long.')
			.pipe(z.email('Enter a full e-mail address, such as name@company.com.')),
		name: z
			.string()
			.trim()
			.min(1, 'Enter the name of the person.')
			.max(120, 'Shorten this to 120 characters.'),
		role: z.enum(ROLES).default('engineer'),
		clientId: z.string().max(60).default('')
	})
	.refine((form) => form.role !== 'client' || form.clientId !== '', {
		path: ['clientId'],
		message: 'Choose the organisation for which this person reads reports.'
	});

export const roleForm = z.object({
	membership: z.string().min(1),
	role: z.enum(['owner', 'engineer', 'checker'])
});
