/**
 * Limit sets as data. A published standard edition and a utility's own contract have one type; both live in SQLite.
 * Bounds: `null` is open. `inclusive` states whether the printed bound itself belongs to the row.
 */
export interface Bound {
	value: number;
	inclusive: boolean;
}

export interface Range {
	lower: Bound | null;
	upper: Bound | null;
}

export type Provenance = 'cross-checked' | 'single-source' | 'from-memory' | 'own';

/** What 100 % means for a table. */
export type LimitBasis = 'nominal-voltage' | 'fundamental' | 'demand-current';

export interface LimitRow {
	id: number;
	/** Orders the row covers: an explicit list, or a range with parity and triplen rule. */
	orders:
		| { kind: 'list'; list: number[] }
		| { kind: 'range'; range: Range; parity: 'odd' | 'even' | 'all'; triplen: 'only' | 'exclude' | 'any' };
	/** I_sc/I_L class with its printed label; null where the table has none. */
	shortCircuitRatio: (Range & { label: string }) | null;
	/** Voltage class within the table (kV) with its label; null where the table has one class only. */
	nominalVoltage_kV: (Range & { label: string }) | null;
	/** Percent of the table's basis; null when `formula` gives it. */
	limit_pct: number | null;
	/** mathjs expression in `h`; null for plain values. */
	formula: string | null;
	origin: 'printed' | 'derived';
	provenance: Provenance;
}

/** A row for THD or TDD. */
export interface LimitTotal {
	id: number;
	index: 'THD' | 'TDD';
	shortCircuitRatio: (Range & { label: string }) | null;
	nominalVoltage_kV: (Range & { label: string }) | null;
	limit_pct: number;
	/** Orders summed; IEEE Std 519: 2…50, EN 50160: 2…40. */
	ordersIncluded: { from: number; to: number };
	provenance: Provenance;
}

/** One statistical rule: every one of a table's rules must be met. */
export interface StatisticRule {
	id: number;
	/** e.g. "I-week-95". */
	key: string;
	interval_s: 3 | 600 | number;
	percentile: number;
	period: 'day' | 'week';
	/** Times the table value. */
	multiplier: number;
	comparator: '<' | '<=';
	provenance: Provenance;
}

export interface LimitTable {
	id: number;
	/** e.g. "table-2". */
	key: string;
	title: string;
	clause: string;
	kind:
		| 'limit'
		| 'compatibility-level'
		| 'planning-level'
		| 'emission-limit'
		| 'indicative'
		| 'recommendation'
		| string;
	quantity: 'voltage' | 'current';
	basis: LimitBasis;
	/** The basis in words, as the library shows it. */
	basisText: string;
	/** System voltages the table applies to (kV); null = all. */
	nominalVoltage_kV: Range | null;
	orderRange: { from: number; to: number };
	rows: LimitRow[];
	totals: LimitTotal[];
	statistics: StatisticRule[];
	provenance: Provenance;
	sources: string[];
	doubts: string[];
}

export interface LimitSet {
	id: number;
	/** e.g. "ieee-519-2022". */
	key: string;
	standard: string;
	edition: string;
	title: string;
	publisher: string;
	jurisdiction: string;
	status: string;
	/** null for published sets; the owning practice otherwise. */
	practiceId: string | null;
	notes: string[];
	tables: LimitTable[];
}
