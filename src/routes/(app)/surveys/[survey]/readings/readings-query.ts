import { z } from 'zod';
import { MAX_ORDER } from '$lib/harmonics/intervals';
import { PHASES } from '$lib/recording/phase';
import { READING_VIEW_NAMES } from '$lib/server/read-models/readings/reading-views';

/** What the address asks for. Whatever is not understood falls back: an old link must still open. */
const query = z.object({
	capture: z.string().nullable().catch(null),
	view: z.enum(READING_VIEW_NAMES).catch('spectrum'),
	quantity: z.enum(['voltage', 'current']).catch('voltage'),
	window: z.coerce.number().int().min(1).nullable().catch(null),
	order: z.union([z.literal('total'), z.coerce.number().int().min(1).max(MAX_ORDER)]).catch('total'),
	interval: z.enum(['window', '3s', '10min', '2h']).nullable().catch(null),
	phase: z.enum(PHASES).nullable().catch(null),
	scale: z.enum(['fundamental', 'limit']).nullable().catch(null)
});

export function parseReadingsQuery(parameters: URLSearchParams) {
	const given = (name: string) => parameters.get(name) || null;
	return query.parse({
		capture: given('capture'),
		view: given('view'),
		quantity: given('quantity'),
		window: given('window') === null || given('window') === 'all' ? null : given('window'),
		order: given('order') ?? 'total',
		interval: given('interval'),
		phase: given('phase'),
		scale: given('scale')
	});
}
