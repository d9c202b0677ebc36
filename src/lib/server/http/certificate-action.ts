import { fail, type RequestEvent } from '@sveltejs/kit';
import { superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import type { Actor } from '../../access/access';
import { calibrationSchema } from '../../register/instrument-facts';
import { container } from '../container';
import type { CalibrationSubject } from '../repositories/calibrations.repository';
import { saveForm } from './save-form';

/** The form action that keeps a certificate, with its file where one was chosen, and goes back to `address`. */
export async function keepCertificate(
	event: RequestEvent,
	actor: Actor,
	subject: CalibrationSubject,
	address: string
) {
	const sent = await event.request.formData();
	const form = await superValidate(sent, zod4(calibrationSchema));
	if (!form.valid) return fail(422, { form });
	const file = sent.get('file');
	return saveForm(form, async () => {
		// A field left alone sends a file without a name.
		const received =
			file instanceof File && file.size > 0
				? { name: file.name, bytes: new Uint8Array(await file.arrayBuffer()) }
				: null;
		await container().services.calibrations.add(actor, subject, form.data, received);
		return address;
	});
}
