import type { Phase } from '../recording/phase';

/** Worst first. `not-checked`: what the check needs is not known. */
export const CHECK_OUTCOMES = ['blocks', 'warns', 'not-checked', 'notes', 'passes'] as const;
export type CheckOutcome = (typeof CHECK_OUTCOMES)[number];

/** Data of a small picture; everything is primary V or A, seconds from the first sample, or instants in ms since 1970 UTC. */
export type CheckEvidence =
	| {
			kind: 'waveform';
			label: string;
			quantity: 'voltage' | 'current';
			phase: Phase;
			from_s: number;
			step_s: number;
			/** null where a sample is missing. */
			values: (number | null)[];
			/** Parts that show the finding. */
			marked: { from_s: number; to_s: number; label: string }[];
	  }
	| {
			kind: 'phasors';
			vectors: {
				label: string;
				quantity: 'voltage' | 'current';
				phase: Phase;
				rms: number;
				phase_deg: number;
			}[];
	  }
	| {
			/** Measured beside expected; the band between low and high is accepted, null is open. */
			kind: 'levels';
			axis: string;
			bars: {
				label: string;
				measured: number;
				expected: number | null;
				low: number | null;
				high: number | null;
			}[];
	  }
	| {
			kind: 'floor';
			axis: string;
			orders: number[];
			sets: { label: string; phase: Phase; floor: (number | null)[] }[];
			limits: (number | null)[];
	  }
	| {
			/** Stretches of time in rows, and single instants across all of them. */
			kind: 'spans';
			timeZone: string;
			spans: { row: string; from_ms: number; to_ms: number; label: string; tone: SpanTone }[];
			marks: { at_ms: number; label: string }[];
	  };

export type SpanTone = 'plain' | 'good' | 'attention' | 'bad';

/** What one check found about a capture, or about a survey's captures together. */
export interface CaptureCheck {
	/** Stable, e.g. `clipped`; with the channel it is what an overrule refers to. */
	code: string;
	title: string;
	outcome: CheckOutcome;
	/** What was found, with figures. */
	sentence: string;
	/** What to do about it; empty where there is nothing to do. */
	advice: string;
	/** Index into the recording's channels (or a trend's columns); null when the whole is meant. */
	channelIndex: number | null;
	evidence: CheckEvidence | null;
}

const RANK = new Map(CHECK_OUTCOMES.map((outcome, rank) => [outcome, rank]));

/** Worst first; equal ones stay in the order in which they were checked. */
export function worstFirst<C extends { check: CaptureCheck }>(checks: readonly C[]): C[] {
	return [...checks].sort((a, b) => RANK.get(a.check.outcome)! - RANK.get(b.check.outcome)!);
}

export const OUTCOME_WORDS: Record<CheckOutcome, string> = {
	blocks: 'blocks the verdict',
	warns: 'warns',
	'not-checked': 'not checked',
	notes: 'notes',
	passes: 'in order'
};
