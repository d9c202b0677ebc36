import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { parseCalibrationFilter } from '$lib/server/read-models/calibration-filter';
import { INSTRUMENT_SORTS } from '$lib/server/read-models/instrument-list';
import { parseListQuery } from '$lib/server/read-models/list-query';
import type { PageServerLoadEvent } from './$types';

export const load = guard('register.read', async ({ url }: PageServerLoadEvent, actor) => {
	const query = {
		...parseListQuery(url.searchParams, INSTRUMENT_SORTS, 'name'),
		archived: url.searchParams.get('show') === 'archived',
		calibration: parseCalibrationFilter(url.searchParams.get('calibration'))
	};
	return {
		query,
		today: container().clock().toISOString().slice(0, 10),
		list: await container().services.instruments.list(actor, query)
	};
});
