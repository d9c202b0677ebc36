import type { Phase } from '../recording/phase';
import type { LimitBasis } from '../limits/limit-set';
import type { Budget } from '../uncertainty/budget';
import type { Figure, FigureEvidence } from '../uncertainty/figure-budget';

export const VERDICTS = [
	'compliant',
	'compliant-inside-uncertainty',
	'exceeds-inside-uncertainty',
	'exceeds',
	'not-assessed'
] as const;
export type Verdict = (typeof VERDICTS)[number];

/** `weekly`: all that the rule asks for; `partial`: a share of it; `snapshot`: too short for any percentile, indicative only. */
export type Evidence = 'weekly' | 'partial' | 'snapshot';

/** Printed with every verdict. `guarded` gives the four outcomes of ILAC-G8:09/2019, 4.2.3 with guard band w = U. */
export type DecisionRule = 'guarded' | 'simple';

/** The facts about a point that choose tables and rows. */
export interface AssessedPoint {
	kind: 'pcc' | 'in-plant';
	system: 'single-phase' | 'split-phase' | 'three-wire' | 'four-wire';
	/** Nominal system voltage, V: line-to-line for three-phase systems; line-to-neutral for single and split phase. */
	nominalVoltage_V: number;
	nominalFrequency_Hz: 50 | 60;
	/** Maximum demand load current I_L, A; null = not known: current is then not assessed. */
	demandCurrent_A: number | null;
	/** Short-circuit current I_sc at the point, A; null = not known. */
	shortCircuitCurrent_A: number | null;
}

/** How well the levels of a survey are known: a budget for each, and words and figures for print. */
export interface UncertaintyStatement {
	/** In words, as printed: where the figures come from. */
	text: string;
	/**
	 * Expanded uncertainty (k = 2) of a single order well above the recorder's floor and at rated load, percent of reading;
	 * null where it is not known.
	 */
	voltage_pctOfReading: (order: number) => number | null;
	current_pctOfReading: (order: number) => number | null;
	/** The budget of one level, percentage points of its basis. */
	budgetOf: (figure: Figure) => Budget;
}

/** A conductor on which no verdict may stand, because of what was found about its capture. */
export interface BlockedLevels {
	quantity: 'voltage' | 'current';
	phase: Phase;
	/** The finding. */
	sentence: string;
}

export interface VerdictRow {
	tableKey: string;
	quantity: 'voltage' | 'current';
	/** A harmonic order, or the total. */
	item: { kind: 'order'; order: number } | { kind: 'total'; index: 'THD' | 'TDD' };
	phase: Phase;
	/** Key of the statistical rule ("I-week-95"); "snapshot" when the capture is too short for any. */
	statisticKey: string;
	basis: LimitBasis;
	/** Unrounded, percent of the basis; null when not assessed. */
	value_pct: number | null;
	/** Table value × multiplier, percent of the basis; null when no row applies. */
	limit_pct: number | null;
	/** Id of the limit row or total used; null when none applies. */
	limitRowId: number | null;
	comparator: '<' | '<=';
	/** value ÷ limit; null when not assessed. */
	utilisation: number | null;
	/**
	 * Expanded uncertainty U of the value, percentage points of the basis; null when not assessed, and where a source of
	 * error is not known (the verdict then counts the known part).
	 */
	uncertainty_pct: number | null;
	/** What the budget of the value was made from; absent when there is no value. */
	figure?: FigureEvidence & { orders: { from: number; to: number } };
	evidence: Evidence;
	/** Share of the rule's period that valid intervals cover, 0…1. */
	coverage: number;
	/** Valid and flagged intervals behind the value. */
	intervalCount: number;
	flaggedCount: number;
	/** ISO date of the worst day for daily rules; null otherwise. */
	worstPeriod: string | null;
	verdict: Verdict;
	/** Sentence: clause, row, why this verdict (or why none). */
	reason: string;
}

export interface TableVerdict {
	tableKey: string;
	title: string;
	clause: string;
	quantity: 'voltage' | 'current';
	verdict: Verdict;
	evidence: Evidence;
	/** The governing row, or null when nothing was assessed. */
	worst: VerdictRow | null;
	/** Why this table and this row class, e.g. "I_sc/I_L 31.2 lies in 20 < 50". */
	selection: string;
}

export interface Assessment {
	limitSetId: number;
	limitSetTitle: string;
	decisionRule: DecisionRule;
	uncertaintyText: string;
	/** True at an in-plant point: the comparison is advisory. */
	advisory: boolean;
	verdict: Verdict;
	evidence: Evidence;
	/** Governing row over all tables. */
	worst: VerdictRow | null;
	tables: TableVerdict[];
	rows: VerdictRow[];
	/** Facts still missing, each a sentence that says what it is needed for. */
	missing: string[];
	/** Facts that a reader should know beside the verdict (neutral, dc, flagged intervals), each a sentence. */
	notes?: string[];
	/** Figures shown beside the verdict; per phase where it applies. */
	headline: {
		tdd: { phase: Phase; value_pct: number }[];
		currentThd: { phase: Phase; value_pct: number }[];
		voltageThd: { phase: Phase; value_pct: number }[];
		shortCircuitRatio: number | null;
	};
}
