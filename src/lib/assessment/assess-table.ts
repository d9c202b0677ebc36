import { lookUpLimit, type LimitAnswer } from '../limits/look-up-limit';
import type { TableSelection } from '../limits/select-table';
import type { LimitTable } from '../limits/limit-set';
import type {
	AssessedPoint,
	BlockedLevels,
	DecisionRule,
	TableVerdict,
	UncertaintyStatement,
	VerdictRow
} from './assessment';
import { assessItem, baseRuleOf } from './assess-item';
import { blockedRow, blockOn } from './blocked-row';
import { levelBaseOf } from './interval-levels';
import { judgedPhases, nominalVoltageOn_V, shortCircuitRatio, systemVoltage_kV } from './judged-phases';
import type { PhaseData } from './phase-data';
import { governingRow, rollUpVerdicts, weakestEvidence } from './roll-up';

export interface TableContext {
	point: AssessedPoint;
	phases: PhaseData[];
	blocked: readonly BlockedLevels[];
	siteTimeZone: string;
	uncertainty: UncertaintyStatement;
	decisionRule: DecisionRule;
}

export interface AssessedTable {
	verdict: TableVerdict;
	rows: VerdictRow[];
	/** Sentences: facts or phases that this table needs and does not have. */
	missing: string[];
}

interface ItemLimit {
	item: VerdictRow['item'];
	orders: { from: number; to: number };
	limit: LimitAnswer;
}

/** Orders and totals of a table that have a limit at this point. */
function limitedItems(
	table: LimitTable,
	point: AssessedPoint
): { items: ItemLimit[]; missing: string | null } {
	const question = {
		nominalVoltage_kV: systemVoltage_kV(point),
		shortCircuitRatio: shortCircuitRatio(point)
	};
	const items: ItemLimit[] = [];
	let missing: string | null = null;
	const ask = (item: VerdictRow['item'], orders: { from: number; to: number }) => {
		const found = lookUpLimit(table, { ...question, item });
		if (found.ok) items.push({ item, orders, limit: found.value });
		else if (found.problem.code === 'short-circuit-ratio-missing') missing = found.problem.sentence;
	};
	for (const index of new Set(table.totals.map((total) => total.index))) {
		const total = table.totals.find((candidate) => candidate.index === index);
		if (total !== undefined) ask({ kind: 'total', index }, total.ordersIncluded);
	}
	for (let order = table.orderRange.from; order <= table.orderRange.to; order++)
		ask({ kind: 'order', order }, { from: order, to: order });
	return { items, missing };
}

/** Phases to judge; at a single-phase point whichever line the recorder was on. */
function phasesToJudge(context: TableContext, quantity: 'voltage' | 'current') {
	const expected = judgedPhases(context.point, quantity);
	if (context.point.system !== 'single-phase') return expected;
	const recorded = context.phases.filter((data) => data.quantity === quantity && data.phase !== 'N');
	return recorded.length === 0 ? expected : recorded.map((data) => data.phase);
}

function absentRow(table: LimitTable, phase: VerdictRow['phase'], first: ItemLimit): VerdictRow {
	const base = baseRuleOf(table);
	return {
		tableKey: table.key,
		quantity: table.quantity,
		item: first.item,
		phase,
		statisticKey: base?.key ?? 'snapshot',
		basis: table.basis,
		value_pct: null,
		limit_pct: first.limit.limit_pct * (base?.multiplier ?? 1),
		limitRowId: first.limit.rowId,
		comparator: base?.comparator ?? '<=',
		utilisation: null,
		uncertainty_pct: null,
		evidence: 'snapshot',
		coverage: 0,
		intervalCount: 0,
		flaggedCount: 0,
		worstPeriod: null,
		verdict: 'not-assessed',
		reason: `Not assessed: no ${table.quantity} was recorded on this phase.`
	};
}

function tableEvidence(rows: VerdictRow[]): TableVerdict['evidence'] {
	const assessed = rows.filter((row) => row.verdict !== 'not-assessed');
	if (assessed.length === 0) return 'snapshot';
	// A rule without a value beside one with a value is a share of what the standard asks for.
	const unmetRule = rows.some((row) => row.verdict === 'not-assessed' && row.evidence === 'partial');
	return weakestEvidence([
		...assessed.map((row) => row.evidence),
		...(unmetRule ? (['partial'] as const) : [])
	]);
}

function summarise(selection: TableSelection, rows: VerdictRow[], classWhy: string): TableVerdict {
	const { table, why } = selection;
	return {
		tableKey: table.key,
		title: table.title,
		clause: table.clause,
		quantity: table.quantity,
		verdict: rollUpVerdicts(rows.map((row) => row.verdict)),
		evidence: tableEvidence(rows),
		worst: governingRow(rows),
		selection: [why, classWhy].filter((part) => part !== '').join(' ')
	};
}

const NEEDS_DEMAND_CURRENT =
	'Enter the maximum demand load current of the point: harmonic currents are judged in percent of it.';

/** Judges one table on every phase that it speaks about. */
export function assessTable(context: TableContext, selection: TableSelection): AssessedTable {
	const { table } = selection;
	const { point } = context;
	const unable = (missing: string): AssessedTable => ({
		verdict: summarise(selection, [], ''),
		rows: [],
		missing: [missing]
	});
	const demandCurrent_A = point.demandCurrent_A;
	if (table.basis === 'demand-current' && (demandCurrent_A === null || !(demandCurrent_A > 0)))
		return unable(NEEDS_DEMAND_CURRENT);
	const { items, missing } = limitedItems(table, point);
	if (missing !== null) return unable(missing);
	const first = items[0];
	if (first === undefined) return unable(`“${table.title}” states no value for this point.`);

	const rows: VerdictRow[] = [];
	const absent: string[] = [];
	const forbidden: string[] = [];
	for (const phase of phasesToJudge(context, table.quantity)) {
		const data = context.phases.find((one) => one.quantity === table.quantity && one.phase === phase);
		const block = blockOn(context.blocked, table.quantity, phase);
		if (block !== null) {
			rows.push(...items.map(({ item, limit }) => blockedRow(table, item, limit, block)));
			forbidden.push(`A check of the captures stands in the way of a verdict: ${block.sentence}`);
			continue;
		}
		const fixed = table.basis === 'demand-current' ? demandCurrent_A : nominalVoltageOn_V(point, phase);
		const base = levelBaseOf(table.basis, fixed);
		if (data === undefined || base === null) {
			rows.push(absentRow(table, phase, first));
			absent.push(phase);
			continue;
		}
		const itemContext = { ...context, table, data, base };
		for (const { item, orders, limit } of items) rows.push(...assessItem(itemContext, item, orders, limit));
	}
	const classWhy = items.find((one) => one.limit.why !== '')?.limit.why ?? '';
	return {
		verdict: summarise(selection, rows, classWhy),
		rows,
		missing: [...forbidden, ...(absent.length === 0 ? [] : [absentSentence(table, absent)])]
	};
}

function absentSentence(table: LimitTable, phases: string[]): string {
	const which = phases.map((phase) =>
		phase.length === 4 ? `${phase.slice(0, 2)}–${phase.slice(2)}` : phase
	);
	const between = phases.some((phase) => phase.length === 4) ? 'line-to-line ' : '';
	return `No ${between}${table.quantity} was recorded on ${which.join(', ')}: “${table.title}” judges every phase.`;
}
