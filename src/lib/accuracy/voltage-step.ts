import type { CaptureEvent } from '../harmonics/flag-windows';
import { analyseWaveform } from '../harmonics/analyse-waveform';
import { sampleSignal } from './exact-signal';

export interface StepCase {
	/** Level during the event, percent of the declared voltage. */
	level_pct: number;
	cycles: number;
	nominalFrequency_Hz: 50 | 60;
}

export interface StepErrors {
	kind: string;
	/** Residual or greatest voltage, percentage points of the declared voltage. */
	level_pct: number;
	/** Measured less true duration, cycles. */
	duration_cycles: number;
}

export const STEP_CASES: readonly StepCase[] = ([50, 60] as const).flatMap((nominalFrequency_Hz) =>
	[
		{ level_pct: 70, cycles: 5 },
		{ level_pct: 40, cycles: 2.5 },
		{ level_pct: 2, cycles: 10 },
		{ level_pct: 120, cycles: 8 }
	].map((step) => ({ ...step, nominalFrequency_Hz }))
);

const DECLARED_V = 230;
const SAMPLING_RATE_HZ = 12_800;

/** A voltage that changes at a zero crossing for so many cycles and back, in two seconds; what the engine finds of it. */
export function measureStep({ level_pct, cycles, nominalFrequency_Hz }: StepCase): StepErrors {
	const frequency_Hz = nominalFrequency_Hz * 1.0004;
	const { recording, mappings } = sampleSignal(
		{
			frequency_Hz,
			channels: [
				{ quantity: 'voltage', phase: 'L1', orders: [{ order: 1, rms: DECLARED_V, phase_deg: -90 }] }
			]
		},
		SAMPLING_RATE_HZ,
		2
	);
	// The wave is a sine from t = 0, so it crosses zero after every whole cycle.
	const from = (45 / frequency_Hz) * SAMPLING_RATE_HZ;
	const to = ((45 + cycles) / frequency_Hz) * SAMPLING_RATE_HZ;
	const { samples } = recording.channels[0]!;
	for (let n = Math.ceil(from); n < to; n++) samples[n]! *= level_pct / 100;
	const outcome = analyseWaveform(recording, mappings, {
		nominalFrequency_Hz,
		nominalVoltages_V: { L1: DECLARED_V }
	});
	if (!outcome.ok) throw new Error(outcome.problem.sentence);
	const events = outcome.value.events ?? [];
	const event = events.find(({ kind }) => kind === 'interruption') ?? (events[0] as CaptureEvent | undefined);
	if (!event) return { kind: 'none', level_pct: NaN, duration_cycles: NaN };
	return {
		kind: event.kind,
		level_pct: event.extreme_pct - level_pct,
		duration_cycles: event.duration_s * frequency_Hz - cycles
	};
}
