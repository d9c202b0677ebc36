import { z } from 'zod';
import { VERDICTS } from '../assessment/assessment';
import { PHASES } from '../recording/phase';

/** A measured figure: rounded as `rounded.ts` says; null where it could not be measured, never 0 in its place. */
const figure = z.number().nullable();
const count = z.number().int().min(0);
const instant = z.iso.datetime();
const quantity = z.enum(['voltage', 'current']);
const phase = z.enum(PHASES);

const remark = z.object({
	severity: z
		.enum(['blocks', 'warns', 'notes'])
		.describe('blocks: do not use the figures before it is mended'),
	code: z.string().describe('stable name of the finding'),
	channel: z.string().nullable().describe('name of the channel; null when the whole capture is meant'),
	sentence: z.string()
});

const recording = z.object({
	format: z.enum(['COMTRADE', 'PQDIF', 'delimited text', 'WAV']),
	startTime: instant.nullable().describe('instant of the first sample, UTC; null where nothing tells it'),
	samplingRate_Hz: figure.describe(
		'of the first stretch; null for a log and where only time stamps tell the time'
	),
	duration_s: z.number().describe('from the first sample to the end of the last one, gaps included'),
	files: z.array(z.object({ name: z.string(), sha256: z.string().regex(/^[0-9a-f]{64}$/) })).min(1),
	kind: z.enum(['waveform', 'trend']).describe('samples, or a log of values per interval'),
	variant: z.string(),
	stationName: z.string(),
	recorderName: z.string(),
	startTimeFrom: z
		.enum(['file', 'file-and-time-zone', 'option'])
		.nullable()
		.describe('file-and-time-zone: local time of the file, read in the time zone given (UTC when none was)'),
	timeZone: z.string(),
	sampleCount: count,
	samplingRates_Hz: z.object({ lowest: z.number(), highest: z.number() }).nullable(),
	interval_s: figure.describe('spacing of the rows of a log; null for a waveform')
});

const intervals = z.object({
	window: count.describe('10/12-cycle windows'),
	threeSecond: count.describe('150/180 cycles, or rows of a 3 s log'),
	tenMinute: count.describe('ten minutes of the clock, complete ones only'),
	flagged: count.describe('windows (rows of a log) with a dip, swell or interruption'),
	twoHour: count
});

const order = z.object({
	order: z.number().int().min(1).max(50),
	magnitude: figure.describe('rms of the single line at this order, V or A'),
	percent: figure.describe('magnitude in percent of that of order 1'),
	phase_deg: figure.describe(
		'cosine convention, (−180, 180], first window: φ_h − h·φ_1 of the first voltage channel'
	),
	subgroup: figure.describe('rms of the harmonic subgroup, V or A')
});

const channel = z.object({
	name: z.string(),
	unit: z.enum(['V', 'A']),
	quantity,
	phase: phase.nullable().describe('conductor or pair of conductors; null where nothing tells it'),
	rms: figure,
	dc: figure,
	frequency_Hz: figure,
	thd40_percent: figure.describe('lines of orders 2 to 40 on that of order 1'),
	thd50_percent: figure.describe('lines of orders 2 to 50 on that of order 1'),
	thdSubgroup_percent: figure.describe('subgroups of orders 2 to 50 on that of order 1'),
	crestFactor: figure.describe('greatest absolute sample of the capture on the rms'),
	orders: z.array(order),
	use: z
		.enum(['point', 'additional'])
		.describe(
			'point: conductor of the point, judged where a point is given; additional: measured and shown only'
		),
	toPrimary: z.number().describe('factor from the recorded value to the primary one; figures are primary'),
	mapping: z.string().describe('why this quantity, conductor and factor'),
	kFactor: figure.describe(
		'currents: Σh²I_h²/ΣI_h² over orders 1 to 50 (K at rated current); null for voltages'
	)
});

const powers = z.object({
	phase: z.enum(['L1', 'L2', 'L3', 'total']),
	activePower_W: figure.describe('mean of u·i; positive into the installation'),
	fundamentalActivePower_W: figure,
	fundamentalReactivePower_var: figure.describe('positive where the current lags'),
	apparentPower_VA: figure.describe('U·I of a phase; effective apparent power S_e of three phases together'),
	powerFactor: figure,
	displacementFactor: figure.describe(
		'of a phase cos φ1; of three phases together that of the positive sequence'
	)
});

const event = z.object({
	kind: z.enum(['dip', 'swell', 'interruption']),
	start_s: z.number().describe('after the first sample'),
	duration_s: z.number(),
	extreme_percent: z.number().describe('least or greatest half-cycle rms in percent of the nominal voltage'),
	phases: z.array(phase)
});

const flicker = z.object({
	phase,
	shortTerm: z.array(z.object({ startTime: instant, pst: figure })),
	longTerm: z.array(z.object({ startTime: instant, plt: figure }))
});

const row = z.object({
	table: z.string(),
	quantity,
	order: z.union([z.number().int(), z.enum(['THD', 'TDD'])]).describe('harmonic order, or the total'),
	phase,
	statistic: z
		.string()
		.describe('key of the statistical rule; snapshot where the capture is too short for any'),
	value_percent: figure,
	limit_percent: figure,
	utilisation: figure.describe('value on limit'),
	verdict: z.enum(VERDICTS),
	basis: z.enum(['nominal-voltage', 'fundamental', 'demand-current']),
	comparator: z.enum(['<', '<=']),
	uncertainty_percent: figure.describe('expanded uncertainty, percentage points of the basis'),
	evidence: z.enum(['weekly', 'partial', 'snapshot']),
	coverage: z.number().describe('share of the period of the rule that valid intervals cover'),
	intervalCount: count,
	flaggedCount: count,
	worstPeriod: z.string().nullable(),
	reason: z.string()
});

const assessment = z.object({
	verdict: z.enum(VERDICTS),
	evidence: z
		.enum(['weekly', 'partial', 'snapshot'])
		.describe('the weakest among the tables judged; snapshot: indicative only'),
	rows: z.array(row),
	limitSet: z.object({ key: z.string(), title: z.string(), reason: z.string() }),
	point: z.object({
		name: z.string().nullable(),
		kind: z.enum(['pcc', 'in-plant']),
		system: z.enum(['single-phase', 'split-phase', 'three-wire', 'four-wire']),
		nominalVoltage_V: z.number(),
		nominalFrequency_Hz: z.union([z.literal(50), z.literal(60)]),
		demandCurrent_A: figure,
		shortCircuitCurrent_A: figure
	}),
	assumptions: z.array(z.string()).describe('facts that the point file leaves open and what was taken'),
	decisionRule: z.enum(['guarded', 'simple']),
	advisory: z.boolean().describe('true at an in-plant point'),
	uncertainty: z.string(),
	missing: z.array(z.string()),
	notes: z.array(z.string())
});

/** What `npm run analyse` prints. Docs: docs/analyse.md; as JSON Schema: docs/analyse-output.schema.json. */
export const analysisDocumentSchema = z.object({
	recording,
	intervals,
	channels: z.array(channel),
	assessment: assessment.optional().describe('where a point is given'),
	schema: z.literal('analysis/1'),
	engineVersion: z.string(),
	nominalFrequency_Hz: z.union([z.literal(50), z.literal(60)]).nullable(),
	highestOrder: z
		.number()
		.int()
		.nullable()
		.describe('highest order that the sampling rate supports, at most 50'),
	system: z.enum(['single-phase', 'split-phase', 'three-wire', 'four-wire']),
	systemFrom: z.enum(['point', 'channels']).describe('channels: told from what was recorded'),
	phaseReference: z.string().nullable().describe('name of the channel whose fundamental has phase 0'),
	leftOut: z.array(z.object({ name: z.string(), reason: z.string() })).describe('channels without figures'),
	powers: z.array(powers),
	unbalance: z.object({
		u2_percent: figure.describe('negative on positive sequence of the voltage at order 1'),
		u0_percent: figure,
		i2_percent: figure
	}),
	events: z
		.array(event)
		.nullable()
		.describe('null where no nominal voltage was given and nothing was looked for'),
	flicker: z.array(flicker),
	remarks: z.array(remark).describe('findings of the reader and of the analysis about the capture itself')
});

export type AnalysisDocument = z.infer<typeof analysisDocumentSchema>;
export type ChannelEntry = AnalysisDocument['channels'][number];
export type RemarkEntry = AnalysisDocument['remarks'][number];
export type PowersEntry = AnalysisDocument['powers'][number];
export type AssessmentEntry = NonNullable<AnalysisDocument['assessment']>;

/** The same for programs that know JSON Schema (draft 2020-12). */
export function analysisJsonSchema(): Record<string, unknown> {
	return {
		title: 'Analysis of one capture, as printed by npm run analyse',
		...z.toJSONSchema(analysisDocumentSchema)
	};
}
