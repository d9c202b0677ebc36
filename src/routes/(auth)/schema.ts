import { z } from 'zod';

export const emailField = z
	.string()
	.trim()
	.min(1, 'Enter your e-mail address.')
	.max(254, 'This address is too long.')
	.pipe(z.email('Enter a full e-mail address, such as name@company.com.'));

/** A password being chosen. Length counts more than a mixture of signs. */
export const newPasswordField = z
	.string()
	.min(12, 'Choose a password of at least 12 characters; a few words in a row do well.')
	.max(200, 'Choose a password of at most 200 characters.');

export const signInForm = z.object({
	email: emailField,
	password: z.string().min(1, 'Enter your password.').max(200, 'No password here is as long as that.')
});

export const addressForm = z.object({ email: emailField });

export const tokenForm = z.object({ token: z.string().min(20).max(200) });

export const resetForm = z.object({ password: newPasswordField });

const nameField = z
	.string()
	.trim()
	.min(1, 'Enter your name as it is to stand on reports.')
	.max(120, 'Enter a name of at most 120 characters.');

export const invitationForm = z.object({ name: nameField, password: newPasswordField });

/** For somebody who has an account: name and password are theirs already. */
export const joinForm = z.object({
	name: z.string().max(120),
	password: z
		.string()
		.min(1, 'Enter the password of your account.')
		.max(200, 'No password here is as long as that.')
});

export const nameForm = z.object({ name: nameField });

export const passwordForm = z.object({
	current: z.string().max(200, 'No password here is as long as that.'),
	wanted: newPasswordField
});
