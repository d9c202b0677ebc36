import { z } from 'zod';

/** Bounds as the data files print them: from ≥, above >, to and upTo ≤, below <, equals an exact class. */
export const boundsSchema = z.object({
	from: z.number().nullish(),
	above: z.number().nullish(),
	to: z.number().nullish(),
	upTo: z.number().nullish(),
	below: z.number().nullish(),
	equals: z.number().nullish()
});
export type FileBounds = z.infer<typeof boundsSchema>;

const provenance = z.enum(['cross-checked', 'single-source', 'from-memory', 'own']);

const classFields = {
	isc_il: boundsSchema.optional(),
	isc_il_label: z.string().optional(),
	nominalVoltage_kV: boundsSchema.optional(),
	label: z.string().optional()
};

export const rowSchema = z
	.object({
		...classFields,
		orders: boundsSchema.extend({
			list: z.array(z.number().int().min(2)).min(1).optional(),
			parity: z.enum(['odd', 'even', 'all']),
			triplen: z.enum(['only', 'exclude', 'any'])
		}),
		limit_percent: z.number().positive().optional(),
		limit_percent_formula: z.string().optional(),
		origin: z.enum(['printed', 'derived']).optional(),
		provenance: provenance.optional()
	})
	.refine((row) => (row.limit_percent === undefined) !== (row.limit_percent_formula === undefined), {
		message: 'a row needs limit_percent or limit_percent_formula, and not both'
	});
export type FileRow = z.infer<typeof rowSchema>;

export const totalSchema = z.object({
	...classFields,
	index: z.string(),
	limit_percent: z.number().positive(),
	ordersIncluded: z.object({ from: z.number().int(), to: z.number().int() }).optional(),
	provenance: provenance.optional()
});
export type FileTotal = z.infer<typeof totalSchema>;

export const statisticSchema = z.object({
	id: z.string(),
	intervalSeconds: z.number().positive().optional(),
	percentile: z.number().gt(0).lt(100).optional(),
	period: z.string().optional(),
	multiplier: z.number().positive().optional(),
	multiplier_formula: z.string().optional(),
	comparator: z.enum(['<', '<=']).optional(),
	provenance: provenance.optional()
});
export type FileStatistic = z.infer<typeof statisticSchema>;

/** Only what every table has; rows and totals are read once the table is known to be of a kind that can be judged. */
export const tableSchema = z.object({
	id: z.string(),
	title: z.string(),
	clause: z.string().optional(),
	kind: z.string(),
	quantity: z.string(),
	unit: z.string().optional(),
	basis: z.string().optional(),
	appliesTo: z.object({ nominalVoltage_kV: z.union([boundsSchema, z.string()]).optional() }).nullish(),
	orderRange: z.object({ from: z.number().int(), to: z.number().int().nullable() }).optional(),
	rows: z.array(z.unknown()).optional(),
	total: z.array(totalSchema).nullish(),
	statistics: z.array(statisticSchema).nullish(),
	provenance,
	sources: z.array(z.string()).optional(),
	doubts: z.array(z.string()).optional()
});
export type FileTable = z.infer<typeof tableSchema>;

export const limitFileSchema = z.object({
	schema: z.literal('harmonic-limits/1'),
	standard: z.string().min(1),
	edition: z.string().min(1),
	title: z.string(),
	publisher: z.string(),
	jurisdiction: z.string(),
	status: z.string(),
	supersededBy: z.string().optional(),
	notes: z.array(z.string()).optional(),
	rules: z.array(z.object({ text: z.string() })).optional(),
	tables: z.array(tableSchema).min(1),
	doubts: z.array(z.string()).optional()
});
export type LimitFile = z.infer<typeof limitFileSchema>;
