import type {
	LimitRow,
	LimitSet,
	LimitTable,
	LimitTotal,
	Range,
	StatisticRule
} from '../../limits/limit-set';
import type { LimitRowRow, LimitSetRow, LimitStatisticRow, LimitTableRow, LimitTotalRow } from '../db/rows';

type Flag = 0 | 1 | null;
type RatioAndVoltage = Pick<
	LimitRowRow,
	| 'ratio_lower'
	| 'ratio_lower_inclusive'
	| 'ratio_upper'
	| 'ratio_upper_inclusive'
	| 'ratio_label'
	| 'voltage_lower_kv'
	| 'voltage_lower_inclusive'
	| 'voltage_upper_kv'
	| 'voltage_upper_inclusive'
	| 'voltage_label'
>;

function rangeFrom(lower: number | null, lowerIn: Flag, upper: number | null, upperIn: Flag): Range {
	return {
		lower: lower === null ? null : { value: lower, inclusive: lowerIn === 1 },
		upper: upper === null ? null : { value: upper, inclusive: upperIn === 1 }
	};
}

function flag(bound: Range['lower']): Flag {
	if (bound === null) return null;
	return bound.inclusive ? 1 : 0;
}

function classesFrom(row: RatioAndVoltage): Pick<LimitRow, 'shortCircuitRatio' | 'nominalVoltage_kV'> {
	const ratio = rangeFrom(
		row.ratio_lower,
		row.ratio_lower_inclusive,
		row.ratio_upper,
		row.ratio_upper_inclusive
	);
	const voltage = rangeFrom(
		row.voltage_lower_kv,
		row.voltage_lower_inclusive,
		row.voltage_upper_kv,
		row.voltage_upper_inclusive
	);
	// The label tells a class that is open on both sides from no class at all.
	return {
		shortCircuitRatio: row.ratio_label === null ? null : { ...ratio, label: row.ratio_label },
		nominalVoltage_kV: row.voltage_label === null ? null : { ...voltage, label: row.voltage_label }
	};
}

function classColumns(row: Pick<LimitRow, 'shortCircuitRatio' | 'nominalVoltage_kV'>): RatioAndVoltage {
	const { shortCircuitRatio: ratio, nominalVoltage_kV: voltage } = row;
	return {
		ratio_lower: ratio?.lower?.value ?? null,
		ratio_lower_inclusive: flag(ratio?.lower ?? null),
		ratio_upper: ratio?.upper?.value ?? null,
		ratio_upper_inclusive: flag(ratio?.upper ?? null),
		ratio_label: ratio?.label ?? null,
		voltage_lower_kv: voltage?.lower?.value ?? null,
		voltage_lower_inclusive: flag(voltage?.lower ?? null),
		voltage_upper_kv: voltage?.upper?.value ?? null,
		voltage_upper_inclusive: flag(voltage?.upper ?? null),
		voltage_label: voltage?.label ?? null
	};
}

export function limitRowFrom(row: LimitRowRow): LimitRow {
	return {
		id: row.id,
		orders: JSON.parse(row.orders_json) as LimitRow['orders'],
		...classesFrom(row),
		limit_pct: row.limit_pct,
		formula: row.formula,
		origin: row.origin,
		provenance: row.provenance
	};
}

export function limitRowColumns(row: LimitRow, tableId: number, position: number): Omit<LimitRowRow, 'id'> {
	return {
		limit_table_id: tableId,
		position,
		orders_json: JSON.stringify(row.orders),
		...classColumns(row),
		limit_pct: row.limit_pct,
		formula: row.formula,
		origin: row.origin,
		provenance: row.provenance
	};
}

export function limitTotalFrom(row: LimitTotalRow): LimitTotal {
	return {
		id: row.id,
		index: row.index_name,
		...classesFrom(row),
		limit_pct: row.limit_pct,
		ordersIncluded: { from: row.order_from, to: row.order_to },
		provenance: row.provenance
	};
}

export function limitTotalColumns(
	total: LimitTotal,
	tableId: number,
	position: number
): Omit<LimitTotalRow, 'id'> {
	return {
		limit_table_id: tableId,
		position,
		index_name: total.index,
		...classColumns(total),
		limit_pct: total.limit_pct,
		order_from: total.ordersIncluded.from,
		order_to: total.ordersIncluded.to,
		provenance: total.provenance
	};
}

export function statisticFrom(row: LimitStatisticRow): StatisticRule {
	const { id, key, interval_s, percentile, period, multiplier, comparator, provenance } = row;
	return { id, key, interval_s, percentile, period, multiplier, comparator, provenance };
}

export function statisticColumns(
	rule: StatisticRule,
	tableId: number,
	position: number
): Omit<LimitStatisticRow, 'id'> {
	const { key, interval_s, percentile, period, multiplier, comparator, provenance } = rule;
	return {
		limit_table_id: tableId,
		position,
		key,
		interval_s,
		percentile,
		period,
		multiplier,
		comparator,
		provenance
	};
}

export function limitTableFrom(
	row: LimitTableRow,
	parts: Pick<LimitTable, 'rows' | 'totals' | 'statistics'>
): LimitTable {
	const band = rangeFrom(
		row.voltage_lower_kv,
		row.voltage_lower_inclusive,
		row.voltage_upper_kv,
		row.voltage_upper_inclusive
	);
	return {
		id: row.id,
		key: row.key,
		title: row.title,
		clause: row.clause,
		kind: row.kind,
		quantity: row.quantity,
		basis: row.basis,
		basisText: row.basis_text,
		nominalVoltage_kV: band.lower === null && band.upper === null ? null : band,
		orderRange: { from: row.order_from, to: row.order_to },
		...parts,
		provenance: row.provenance,
		sources: JSON.parse(row.sources_json) as string[],
		doubts: JSON.parse(row.doubts_json) as string[]
	};
}

export function limitTableColumns(
	table: LimitTable,
	setId: number,
	position: number
): Omit<LimitTableRow, 'id'> {
	const band = table.nominalVoltage_kV;
	return {
		limit_set_id: setId,
		position,
		key: table.key,
		title: table.title,
		clause: table.clause,
		kind: table.kind,
		quantity: table.quantity,
		basis: table.basis,
		basis_text: table.basisText,
		voltage_lower_kv: band?.lower?.value ?? null,
		voltage_lower_inclusive: flag(band?.lower ?? null),
		voltage_upper_kv: band?.upper?.value ?? null,
		voltage_upper_inclusive: flag(band?.upper ?? null),
		order_from: table.orderRange.from,
		order_to: table.orderRange.to,
		provenance: table.provenance,
		sources_json: JSON.stringify(table.sources),
		doubts_json: JSON.stringify(table.doubts)
	};
}

export function limitSetFrom(row: LimitSetRow, tables: LimitTable[]): LimitSet {
	return {
		id: row.id,
		key: row.key,
		standard: row.standard,
		edition: row.edition,
		title: row.title,
		publisher: row.publisher,
		jurisdiction: row.jurisdiction,
		status: row.status,
		practiceId: row.practice_id,
		notes: JSON.parse(row.notes_json) as string[],
		tables
	};
}

export function limitSetColumns(set: LimitSet, sourceSha256: string): Omit<LimitSetRow, 'id' | 'created_at'> {
	return {
		key: set.key,
		practice_id: set.practiceId,
		standard: set.standard,
		edition: set.edition,
		title: set.title,
		publisher: set.publisher,
		jurisdiction: set.jurisdiction,
		status: set.status,
		notes_json: JSON.stringify(set.notes),
		source_sha256: sourceSha256
	};
}
