import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { parseCalibrationFilter } from '$lib/server/read-models/calibration-filter';
import { parseListQuery } from '$lib/server/read-models/list-query';
import { SENSOR_SORTS } from '$lib/server/read-models/sensor-list';
import type { PageServerLoadEvent } from './$types';

export const load = guard('register.read', async ({ url }: PageServerLoadEvent, actor) => {
	const query = {
		...parseListQuery(url.searchParams, SENSOR_SORTS, 'name'),
		archived: url.searchParams.get('show') === 'archived',
		calibration: parseCalibrationFilter(url.searchParams.get('calibration'))
	};
	return {
		query,
		today: container().clock().toISOString().slice(0, 10),
		list: await container().services.sensors.list(actor, query)
	};
});
