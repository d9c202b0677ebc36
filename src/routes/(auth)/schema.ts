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
