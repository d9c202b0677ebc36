import type { AssessedPoint } from '../../assessment/assessment';
import { levelBaseOf, type LevelBase } from '../../assessment/interval-levels';
import { BASIS_WORDS } from '../../assessment/wording';
import { nominalVoltageOn_V, shortCircuitRatio, systemVoltage_kV } from '../../assessment/judged-phases';
import type { LimitBasis, LimitSet, LimitTable } from '../../limits/limit-set';
import { lookUpLimit } from '../../limits/look-up-limit';
import { selectTables } from '../../limits/select-table';
import type { Phase } from '../../recording/phase';

/** What 100 % means on the readings page, and the limits that are stated in it. */
export interface ReadingBasis {
	basis: LimitBasis;
	/** In words, as after "percent": "of demand current". */
	words: string;
	/** Index = order; percent of the basis; null where the table states none. Null without a usable table. */
	limits_pct: (number | null)[] | null;
	/** Limit of the total (THD or TDD); null where none is stated. */
	totalLimit_pct: number | null;
	/** Table and clause, and why no line is drawn where there is none. */
	source: string;
}

function withoutLimits(source: string, basis: LimitBasis = 'fundamental'): ReadingBasis {
	return { basis, words: BASIS_WORDS[basis], limits_pct: null, totalLimit_pct: null, source };
}

function tableFor(set: LimitSet, point: AssessedPoint, quantity: 'voltage' | 'current'): LimitTable | null {
	const tables = selectTables(set, systemVoltage_kV(point)).map((selection) => selection.table);
	return tables.find((table) => table.quantity === quantity && table.rows.length > 0) ?? null;
}

/** Basis and limit line of one quantity at a point, from the limit set that applies there. */
export function readingBasis(
	set: LimitSet | null,
	point: AssessedPoint,
	quantity: 'voltage' | 'current',
	highestOrder: number
): ReadingBasis {
	const ownBasis =
		quantity === 'current' && point.demandCurrent_A !== null ? 'demand-current' : 'fundamental';
	if (!set) return withoutLimits('No limit set is chosen at the point, so no limit is drawn.', ownBasis);
	const table = tableFor(set, point, quantity);
	const name = `${set.standard}, ${set.edition}`;
	if (!table) return withoutLimits(`${name} states no ${quantity} limits at this voltage.`, ownBasis);
	if (table.basis === 'demand-current' && point.demandCurrent_A === null)
		return withoutLimits(
			`${name} states its ${quantity} limits in percent of I_L, which is not known at this point: no limit is drawn.`
		);
	const ratio = shortCircuitRatio(point);
	const ask = (item: Parameters<typeof lookUpLimit>[1]['item']) =>
		lookUpLimit(table, { item, nominalVoltage_kV: systemVoltage_kV(point), shortCircuitRatio: ratio });
	const limits_pct: (number | null)[] = [null, null];
	for (let order = 2; order <= highestOrder; order++) {
		const answer = ask({ kind: 'order', order });
		if (!answer.ok && answer.problem.code === 'short-circuit-ratio-missing')
			return withoutLimits(answer.problem.sentence, table.basis);
		limits_pct.push(answer.ok ? answer.value.limit_pct : null);
	}
	const total = ask({ kind: 'total', index: table.basis === 'demand-current' ? 'TDD' : 'THD' });
	return {
		basis: table.basis,
		words: BASIS_WORDS[table.basis],
		limits_pct,
		totalLimit_pct: total.ok ? total.value.limit_pct : null,
		source: `${name}: ${table.title} (${table.clause}).`
	};
}

/** 100 % of the basis on one conductor; null where the point has none for it. */
export function phaseBase(basis: LimitBasis, point: AssessedPoint, phase: Phase): LevelBase | null {
	if (basis === 'demand-current') return levelBaseOf(basis, point.demandCurrent_A);
	return levelBaseOf(basis, nominalVoltageOn_V(point, phase));
}

/** 100 % in V or A beside a measured fundamental; NaN where there is none. */
export function baseValue(base: LevelBase | null, fundamental: number): number {
	if (base === null) return NaN;
	return base.kind === 'fixed' ? base.value : fundamental;
}
