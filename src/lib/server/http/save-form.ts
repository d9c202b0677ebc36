import { redirect } from '@sveltejs/kit';
import { message, type SuperValidated } from 'sveltekit-superforms';
import { AppError } from '../app-error';

/**
 * Ends a form action: saves and goes to the address that `save` answers with. What the use case refuses comes back
 * as a sentence over the form, with everything that was typed still in it.
 */
export async function saveForm<T extends Record<string, unknown>>(
	form: SuperValidated<T, string>,
	save: () => Promise<string>
) {
	let address: string;
	try {
		address = await save();
	} catch (cause) {
		if (cause instanceof AppError && (cause.code === 'conflict' || cause.code === 'invalid'))
			return message(form, cause.message, { status: cause.code === 'conflict' ? 409 : 422 });
		throw cause;
	}
	redirect(303, address);
}
