import { redirect } from '@sveltejs/kit';
import { superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { calibrationSchema } from '$lib/register/instrument-facts';
import { container } from '$lib/server/container';
import { keepCertificate } from '$lib/server/http/certificate-action';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('register.read', async (event: PageServerLoadEvent, actor) => ({
	page: await container().services.sensors.page(actor, event.params.sensor),
	form: await superValidate(zod4(calibrationSchema))
}));

const here = (event: RequestEvent) => `/instruments/sensors/${event.params.sensor}`;

export const actions = {
	calibrate: guard('register.write', (event: RequestEvent, actor) =>
		keepCertificate(event, actor, { sensorId: event.params.sensor }, here(event))
	),
	archive: guard('register.write', async (event: RequestEvent, actor) => {
		await container().services.sensors.setArchived(actor, event.params.sensor, true);
		redirect(303, '/instruments/sensors');
	}),
	restore: guard('register.write', async (event: RequestEvent, actor) => {
		await container().services.sensors.setArchived(actor, event.params.sensor, false);
		redirect(303, here(event));
	})
};
