import type { IntervalSeries } from '../harmonics/intervals';
import type { LimitSet } from '../limits/limit-set';
import { selectTables } from '../limits/select-table';
import { assessTable } from './assess-table';
import type {
	AssessedPoint,
	Assessment,
	BlockedLevels,
	DecisionRule,
	UncertaintyStatement
} from './assessment';
import { blockOn } from './blocked-row';
import { headlineOf } from './headline';
import { systemVoltage_kV } from './judged-phases';
import { notesOf } from './notes';
import { collectPhaseData } from './phase-data';
import { governingRow, rollUpVerdicts, weakestEvidence } from './roll-up';

export interface AssessmentInput {
	point: AssessedPoint;
	limitSet: LimitSet;
	/** Everything recorded at the point, any mix of phases, quantities and interval kinds; several captures allowed. */
	series: IntervalSeries[];
	/** IANA name; days of the daily rules are the site's own. */
	siteTimeZone: string;
	uncertainty: UncertaintyStatement;
	decisionRule: DecisionRule;
	/** Keys of the tables to judge, for sets that offer classes to choose from; all that apply when absent. */
	tableKeys?: string[];
	/** Findings about the captures that nobody has overruled and that forbid a verdict; none when absent. */
	blocked?: readonly BlockedLevels[];
}

/**
 * Judges a survey's interval values against one limit set: every table that applies at the point's voltage, every
 * phase, order, total and statistical rule. Deterministic; reads no clock. Rows keep unrounded figures.
 */
export function assess(input: AssessmentInput): Assessment {
	const { point, limitSet, decisionRule, uncertainty, siteTimeZone } = input;
	const phases = collectPhaseData(input.series);
	const blocked = input.blocked ?? [];
	const sound = phases.filter((data) => blockOn(blocked, data.quantity, data.phase) === null);
	const selected = selectTables(limitSet, systemVoltage_kV(point)).filter(
		({ table }) => input.tableKeys === undefined || input.tableKeys.includes(table.key)
	);
	const context = { point, phases, blocked, siteTimeZone, uncertainty, decisionRule };
	const assessed = selected.map((selection) => assessTable(context, selection));
	const tables = assessed.map((table) => table.verdict);
	const rows = assessed.flatMap((table) => table.rows);
	const missing = [...new Set(assessed.flatMap((table) => table.missing))];
	if (selected.length === 0) {
		missing.push(
			`${limitSet.standard} (${limitSet.edition}) has no table for ${systemVoltage_kV(point)} kV: choose another limit set.`
		);
	}
	const voltageTable = selected.find(({ table }) => table.quantity === 'voltage')?.table;
	const judged = tables.filter((table) => table.worst !== null);
	return {
		limitSetId: limitSet.id,
		limitSetTitle: `${limitSet.standard} (${limitSet.edition})`,
		decisionRule,
		uncertaintyText: uncertainty.text,
		advisory: point.kind === 'in-plant',
		verdict: rollUpVerdicts(tables.map((table) => table.verdict)),
		evidence: weakestEvidence(judged.map((table) => table.evidence)),
		worst: governingRow(rows),
		tables,
		rows,
		missing,
		notes: notesOf(point, sound, rows),
		headline: headlineOf(point, sound, voltageTable?.basis ?? 'fundamental')
	};
}
