import { z } from 'zod';
import type { CaptureEvidence } from '../../harmonics/quality/capture-evidence';
import { PHASES } from '../../recording/phase';
import { samplesLayout } from './samples-blob';

/** Part of an analysis that lists and pages read without touching the long series. */
const qualityRemark = z.object({
	severity: z.enum(['blocks', 'warns', 'notes']),
	code: z.string(),
	sentence: z.string(),
	channelIndex: z.number().int().nullable()
});

const nullableNumbers = z.array(z.number().nullable());

/** CaptureEvidence of harmonics/quality; absent on analyses made before it was kept. */
const captureEvidence = z.object({
	samplingRate_Hz: z.number().nullable(),
	frequency_Hz: z.number().nullable(),
	statedFrequency_Hz: z.number().nullable(),
	stretches: z.array(z.object({ from_s: z.number(), to_s: z.number() })),
	stretchCount: z.number().int(),
	channels: z.array(
		z.object({
			channelIndex: z.number().int(),
			name: z.string(),
			quantity: z.enum(['voltage', 'current']),
			phase: z.enum(PHASES),
			rms: z.number().nullable(),
			dc: z.number().nullable(),
			fundamental: z.object({ rms: z.number(), phase_deg: z.number().nullable() }).nullable(),
			floor: nullableNumbers,
			excerpt: z.object({ from_s: z.number(), step_s: z.number(), values: nullableNumbers }).nullable(),
			missingOrders: z.array(z.number().int()),
			highestOrder: z.number().int(),
			implausible: z.array(z.string())
		})
	)
}) satisfies z.ZodType<CaptureEvidence>;

const summaryChannel = z.object({
	channelIndex: z.number().int(),
	name: z.string(),
	quantity: z.enum(['voltage', 'current']),
	phase: z.enum(PHASES),
	toPrimary: z.number()
});

const summaryEvent = z.object({
	kind: z.enum(['dip', 'swell', 'interruption']),
	/** Seconds after sample 0. */
	start_s: z.number(),
	end_s: z.number(),
	extreme_pct: z.number(),
	phases: z.array(z.enum(PHASES))
});
export type SummaryEvent = z.infer<typeof summaryEvent>;

const waveformSummary = z.object({
	kind: z.literal('waveform'),
	nominalFrequency_Hz: z.union([z.literal(50), z.literal(60)]),
	cyclesPerWindow: z.number().int(),
	referenceChannelIndex: z.number().int(),
	highestOrder: z.number().int(),
	windowCount: z.number().int(),
	flaggedCount: z.number().int(),
	channels: z.array(summaryChannel),
	quality: z.array(qualityRemark),
	evidence: captureEvidence.optional(),
	samples: samplesLayout,
	/** Dips, swells and interruptions; absent in analyses from before they were kept, null where none could be looked for. */
	events: z.array(summaryEvent).nullable().optional()
});

const trendSummary = z.object({
	kind: z.literal('trend'),
	interval_s: z.number(),
	intervalCount: z.number().int(),
	flaggedCount: z.number().int(),
	quality: z.array(qualityRemark),
	evidence: captureEvidence.optional()
});

export const analysisSummary = z.discriminatedUnion('kind', [waveformSummary, trendSummary]);
export type AnalysisSummary = z.infer<typeof analysisSummary>;
export type WaveformSummary = z.infer<typeof waveformSummary>;
export type TrendSummary = z.infer<typeof trendSummary>;

/** What the figures of an analysis rest on, beside the samples. */
export interface AnalysisParameters {
	nominalFrequency_Hz: 50 | 60;
	/** Instant of the first sample or interval, milliseconds since 1970-01-01 UTC. */
	start_ms: number;
	settings: unknown;
	fileHashes: string[];
}

export function parseSummary(json: string): AnalysisSummary {
	return analysisSummary.parse(JSON.parse(json));
}
