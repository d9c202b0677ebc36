import type { RecordedCheck } from '../checks/recorded-check';
import type { AssessedPoint, DecisionRule, Evidence, Verdict } from '../assessment/assessment';
import type { LimitBasis, Provenance } from '../limits/limit-set';
import type { Phase, PhaseNames } from '../recording/phase';
import type { ReportEquipment } from './equipment';
import type { RevisionStatus } from './revision-status';

/**
 * The whole report as plain data: what the PDF prints, what the portal shows, what is frozen at issue. It survives
 * JSON unchanged: instants are ISO-8601 UTC text, missing figures are null, every figure is unrounded.
 */
export interface ReportModel {
	schema: 'sinewright-report/1';
	document: ReportDocument;
	practice: ReportPractice;
	client: { name: string };
	site: { name: string; address: string; utility: string; timeZone: string };
	point: ReportPoint;
	survey: ReportSurvey;
	verdict: ReportVerdict;
	/** The engineer's own words for the reader who is no engineer; paragraphs are parted by blank lines. */
	summary: string;
	findings: string[];
	actions: ReportAction[];
	/** The survey's instrument; what reports made before `equipment` say of what was measured with. */
	instrument: ReportInstrument | null;
	/** Every instrument that a capture of the report was taken with; absent in reports made before it. */
	equipment?: ReportEquipment[];
	method: ReportMethod;
	tables: ReportTable[];
	spectra: ReportSpectrum[];
	waveform: ReportWaveform | null;
	trends: ReportTrend[];
	quality: ReportQuality;
	lineage: ReportLineage;
}

export interface ReportDocument {
	title: string;
	/** e.g. "TH-2026-0142"; null until the first issue. */
	number: string | null;
	revision: string;
	status: RevisionStatus;
	reason: string;
	preparedBy: string;
	preparedAt: string;
	/** Null until somebody has checked. */
	checkedBy: string | null;
	issuedAt: string | null;
	/** Checker and author are one person, which the practice allows: the report says so. */
	selfChecked: boolean;
	revisions: ReportRevisionEntry[];
	/** Fixed instant written into the file, so that the same data give the same bytes. */
	createdAt: string;
}

export interface ReportRevisionEntry {
	revision: string;
	status: RevisionStatus;
	reason: string;
	preparedBy: string;
	checkedBy: string | null;
	issuedAt: string | null;
}

export interface ReportPractice {
	name: string;
	shortName: string;
	address: string;
	email: string;
	phone: string;
	paper: 'A4' | 'LETTER';
	timeZone: string;
	relianceStatement: string;
}

export interface ReportPoint {
	name: string;
	kind: AssessedPoint['kind'];
	system: AssessedPoint['system'];
	nominalVoltage_V: number;
	nominalFrequency_Hz: 50 | 60;
	phaseNames: PhaseNames;
	demandCurrent_A: number | null;
	shortCircuitCurrent_A: number | null;
	shortCircuitRatio: number | null;
	/** Working in words, step by step, as shown on the point's page. */
	demandWorking: string[];
	shortCircuitWorking: string[];
	/** How I_sc was obtained: "stated by the utility", "computed from transformer data". */
	shortCircuitOrigin: string;
	ctRatio: { primary_A: number; secondary_A: number } | null;
	vtRatio: { primary_V: number; secondary_V: number } | null;
	limitSetReason: string;
}

export interface ReportSurvey {
	number: string;
	title: string;
	engineer: string;
	/** First and last instant of all captures; null when no capture tells its time. */
	measuredFrom: string | null;
	measuredTo: string | null;
}

export interface ReportVerdict {
	verdict: Verdict;
	evidence: Evidence;
	/** At an in-plant point the comparison is advisory. */
	advisory: boolean;
	/** Engineer's sentence. */
	sentence: string;
	/** One sentence for a reader who is no engineer, and the explanation under it. */
	plainSentence: string;
	plainExplanation: string;
	evidenceText: string;
	decisionRule: DecisionRule;
	limitSetTitle: string;
	/** The figure that governs; null when nothing was assessed. */
	worst: ReportFigure | null;
	headline: {
		tdd: { phase: Phase; value_pct: number }[];
		currentThd: { phase: Phase; value_pct: number }[];
		voltageThd: { phase: Phase; value_pct: number }[];
	};
	/** Orders and totals over their limit, e.g. ["5th", "TDD"]. */
	overLimit: string[];
	/** Facts that are missing, each saying what it is needed for. */
	missing: string[];
	flaggedCount: number;
}

/** One value beside its limit, named for people. */
export interface ReportFigure {
	quantity: 'voltage' | 'current';
	/** "5th harmonic", "total demand distortion". */
	label: string;
	phase: Phase;
	basis: LimitBasis;
	/** What 100 % is: "of demand current", "of nominal voltage". */
	ofWhat: string;
	value_pct: number;
	limit_pct: number;
	utilisation: number;
	verdict: Verdict;
	statistic: string;
}

export interface ReportAction {
	title: string;
	detail: string;
	priority: 'urgent' | 'normal' | 'advice';
	side: 'client' | 'practice';
	responsible: string;
	/** Calendar date, ISO. */
	dueOn: string | null;
}

export interface ReportInstrument {
	name: string;
	model: string;
	serialNumber: string;
	harmonicClass: 'I' | 'II' | 'unknown';
	sensors: string;
	calibrations: { certificate: string; laboratory: string; calibratedOn: string; dueOn: string }[];
	/** Whether a calibration was in force over the whole measurement; null when the time is not known. */
	calibratedDuringSurvey: boolean | null;
}

export interface ReportMethod {
	limitSetTitle: string;
	standard: string;
	edition: string;
	decisionRule: DecisionRule;
	uncertaintyText: string;
	/** Expanded uncertainty at a few orders, percent of reading; null where it is not known. */
	uncertaintyAtOrders: { order: number; voltage_pct: number | null; current_pct: number | null }[];
	statistics: {
		quantity: 'voltage' | 'current';
		key: string;
		text: string;
		clause: string;
		multiplier: number;
	}[];
	tables: { title: string; clause: string; basisText: string; selection: string; provenance: Provenance }[];
}

export interface ReportTable {
	key: string;
	title: string;
	clause: string;
	quantity: 'voltage' | 'current';
	basis: LimitBasis;
	ofWhat: string;
	selection: string;
	verdict: Verdict;
	evidence: Evidence;
	phases: Phase[];
	rules: ReportRule[];
}

/** One statistical rule of a table: a row for each order and total. */
export interface ReportRule {
	statisticKey: string;
	text: string;
	rows: ReportRow[];
}

export interface ReportRow {
	/** "5" or "TDD". */
	label: string;
	order: number | null;
	/** In the order of ReportTable.phases; a null value was not assessed. */
	cells: { phase: Phase; value_pct: number | null; verdict: Verdict }[];
	limit_pct: number | null;
	comparator: '<' | '<=';
	worstPhase: Phase;
	utilisation: number | null;
	uncertainty_pct: number | null;
	verdict: Verdict;
	reason: string;
	limitRowId: number | null;
	intervalCount: number;
	flaggedCount: number;
	coverage: number;
	worstPeriod: string | null;
}

/** Values per order for one chart; index 0 is order 2. */
export interface ReportSpectrum {
	tableKey: string;
	quantity: 'voltage' | 'current';
	title: string;
	/** What the percentages are of, and which statistic. */
	note: string;
	orders: number[];
	phases: { phase: Phase; values_pct: (number | null)[] }[];
	limits_pct: (number | null)[];
}

export interface ReportWaveform {
	title: string;
	captureName: string;
	/** Seconds from the capture's first sample. */
	from_s: number;
	to_s: number;
	/** Interleaved [seconds, value, …], primary V or A; null where samples are missing. */
	channels: { quantity: 'voltage' | 'current'; phase: Phase; unit: 'V' | 'A'; points: (number | null)[] }[];
}

export interface ReportTrend {
	title: string;
	quantity: 'voltage' | 'current';
	ofWhat: string;
	/** Starts of the intervals, milliseconds since 1970 UTC, and a value for each; null where there is none. */
	phases: { phase: Phase; times_ms: number[]; values_pct: (number | null)[] }[];
	flagged: { from_ms: number; to_ms: number }[];
	percentile: { label: string; value_pct: number } | null;
	limit_pct: number | null;
}

export interface ReportQuality {
	/** Worst first, passes included. */
	checks: RecordedCheck[];
	/** At most 200 are listed; `flaggedTotal` counts all. */
	flagged: { interval: string; startsAt: string; length_s: number; quantity: string; phase: Phase }[];
	flaggedTotal: number;
	intervalTotal: number;
}

export interface ReportLineage {
	engineVersion: string;
	assessmentId: string;
	limitSet: { id: number; title: string; sourceSha256: string };
	limitRows: {
		id: number;
		table: string;
		clause: string;
		what: string;
		limit_pct: number | null;
		provenance: Provenance;
	}[];
	captures: ReportCapture[];
	/** SHA-256 over the canonical text of the measured part of this model; see measured-data.ts. */
	dataSha256: string;
}

export interface ReportCapture {
	name: string;
	format: string;
	variant: string;
	startedAt: string | null;
	duration_s: number;
	samplingRate_Hz: number | null;
	windowCount: number;
	files: { name: string; sha256: string; size_bytes: number }[];
	channels: { channel: string; quantity: string; phase: Phase; toPrimary: number }[];
}
