import type { ReportModel } from './report-model';

/** JSON with sorted keys: the same data give the same text, whatever order they were put together in. */
export function canonicalJson(value: unknown): string {
	if (Array.isArray(value)) return `[${value.map(canonicalJson).join(',')}]`;
	if (value !== null && typeof value === 'object') {
		const entries = Object.entries(value)
			.filter(([, held]) => held !== undefined)
			.sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0));
		return `{${entries.map(([key, held]) => `${JSON.stringify(key)}:${canonicalJson(held)}`).join(',')}}`;
	}
	return JSON.stringify(value) ?? 'null';
}

/**
 * The part of a report that the data hash stands for: captures, mappings, engine, limits and results. Words and
 * names are left out, so that a revision that only corrects the text keeps its hash.
 */
export function measuredDataText(model: ReportModel): string {
	const { dataSha256: _self, assessmentId: _id, ...lineage } = model.lineage;
	return canonicalJson({
		lineage,
		point: {
			kind: model.point.kind,
			system: model.point.system,
			nominalVoltage_V: model.point.nominalVoltage_V,
			nominalFrequency_Hz: model.point.nominalFrequency_Hz,
			demandCurrent_A: model.point.demandCurrent_A,
			shortCircuitCurrent_A: model.point.shortCircuitCurrent_A
		},
		decisionRule: model.method.decisionRule,
		tables: model.tables.map((table) => ({
			key: table.key,
			rules: table.rules.map((rule) => ({
				statisticKey: rule.statisticKey,
				rows: rule.rows.map((row) => ({
					label: row.label,
					cells: row.cells,
					limit_pct: row.limit_pct,
					limitRowId: row.limitRowId,
					uncertainty_pct: row.uncertainty_pct,
					verdict: row.verdict
				}))
			}))
		}))
	});
}
