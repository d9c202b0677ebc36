import { describe, expect, it } from 'vitest';
import { createAggregator } from '$lib/harmonics/aggregation/aggregator';
import { analyseWaveform } from '$lib/harmonics/analyse-waveform';
import { MAX_ORDER, ORDER_STRIDE } from '$lib/harmonics/intervals';
import type { WaveformAnalysis } from '$lib/harmonics/waveform-analysis';
import type { Phase } from '$lib/recording/phase';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import type { AmplitudeEvent, HarmonicTruth } from '$lib/synthesis/waveform';

// Class A of IEC 61000-4-30:2015 (from memory): residual voltage and swell voltage within 0.2 % of U_din, duration within
// half a cycle at each end. The distortion is that of testing state 2 of IEC 62586-2 (from memory): 10 % third, 5 % fifth,
// 5 % twenty-ninth.
const STATE_2: HarmonicTruth[] = [
	{ order: 3, magnitude_pctOfFundamental: 10, phase_deg: 0 },
	{ order: 5, magnitude_pctOfFundamental: 5, phase_deg: 0 },
	{ order: 29, magnitude_pctOfFundamental: 5, phase_deg: 0 }
];
const RMS_OF_STATE_2 = Math.sqrt(1 + 0.1 ** 2 + 2 * 0.05 ** 2);
const U_DIN_V = 230;
const PHASES: readonly Phase[] = ['L1', 'L2', 'L3'];

interface Course {
	frequency_Hz: number;
	duration_s: number;
	/** Events by conductor. */
	events: Partial<Record<Phase, AmplitudeEvent[]>>;
	harmonics?: HarmonicTruth[];
	start_ms?: number;
}

/** Three voltages of U_din, the first with a rising crossing of its fundamental at t = 0. */
function analyse({
	frequency_Hz,
	duration_s,
	events,
	harmonics = STATE_2,
	start_ms
}: Course): WaveformAnalysis {
	const recording = synthesiseRecording({
		frequency_Hz,
		samplingRate_Hz: 6400,
		duration_s,
		seed: 5,
		channels: PHASES.map((phase, i) => ({
			name: `U${i + 1}`,
			quantity: 'voltage',
			phase,
			fundamental_rms: U_DIN_V / (harmonics.length > 0 ? RMS_OF_STATE_2 : 1),
			fundamentalPhase_deg: -90 - 120 * i,
			harmonics,
			...(events[phase] ? { events: events[phase] } : {})
		}))
	});
	const outcome = analyseWaveform(
		recording,
		PHASES.map((phase, channelIndex) => ({ channelIndex, quantity: 'voltage', phase, toPrimary: 1 })),
		{
			nominalFrequency_Hz: 50,
			nominalVoltages_V: { L1: U_DIN_V, L2: U_DIN_V, L3: U_DIN_V },
			...(start_ms === undefined ? {} : { start_ms })
		}
	);
	if (!outcome.ok) throw new Error(outcome.problem.sentence);
	return outcome.value;
}

describe('dips, swells and interruptions of class A, through the whole engine', () => {
	// Each conductor from one of its own crossings to another, whole and half cycles later.
	it.each([
		[49, 'dip', 0.85, 30, ['L1']],
		[50, 'dip', 0.4, 10, ['L2']],
		[51, 'dip', 0.7, 2.5, ['L1', 'L2', 'L3']],
		[50, 'dip', 0.1, 5, ['L3', 'L1']],
		[49, 'swell', 1.2, 10, ['L1', 'L2']],
		[51, 'swell', 1.4, 5, ['L3']]
	] as const)('%d Hz: %s to %d for %d cycles on %j', (frequency_Hz, kind, factor, cycles, phases) => {
		const course: Course = { frequency_Hz, duration_s: 1.6, events: {} };
		const firstStart_s = 21 / frequency_Hz;
		for (const phase of phases) {
			const from_s = (21 + PHASES.indexOf(phase) / 3) / frequency_Hz;
			course.events[phase] = [{ from_s, to_s: from_s + cycles / frequency_Hz, factor }];
		}
		const { events } = analyse(course);
		expect(events).toHaveLength(1);
		const [event] = events!;
		expect(event!.kind).toBe(kind);
		expect(event!.phases.map((one) => one.phase)).toEqual(PHASES.filter((p) => phases.includes(p as never)));
		expect(Math.abs(event!.extreme_pct - 100 * factor)).toBeLessThan(0.2);
		// From the first conductor's begin to the last one's end.
		const shifts = phases.map((phase) => PHASES.indexOf(phase) / 3);
		const truth_s = (cycles + Math.max(...shifts) - Math.min(...shifts)) / frequency_Hz;
		expect(Math.abs(event!.duration_s - truth_s)).toBeLessThan(1 / frequency_Hz);
		const begin_s = firstStart_s + Math.min(...shifts) / frequency_Hz;
		expect(Math.abs(event!.start_s - begin_s)).toBeLessThan(1 / frequency_Hz);
	});

	it('an interruption of all conductors is told beside its dip, and flags what it touches', () => {
		const gone = [{ from_s: 0.5, to_s: 0.8, factor: 0 }];
		const { events, flagged, windowStarts_s, windowLengths_s } = analyse({
			frequency_Hz: 50,
			duration_s: 1.6,
			events: { L1: gone, L2: gone, L3: gone }
		});
		expect(events!.map((event) => event.kind).sort()).toEqual(['dip', 'interruption']);
		const interruption = events!.find((event) => event.kind === 'interruption')!;
		expect(interruption.extreme_pct).toBeLessThan(0.2);
		expect(Math.abs(interruption.duration_s - 0.3)).toBeLessThan(0.04);
		flagged.forEach((flag, w) => {
			const start_s = windowStarts_s[w]!;
			const end_s = start_s + windowLengths_s[w]!;
			if (start_s < 0.8 && end_s > 0.5) expect(flag).toBe(1);
			else if (start_s > 0.84 || end_s < 0.46) expect(flag).toBe(0);
		});
		expect(flagged).toContain(0);
	});

	it('steady distortion and a frequency off nominal are no event', () => {
		const { events, flagged } = analyse({ frequency_Hz: 51.3, duration_s: 1, events: {} });
		expect(events).toEqual([]);
		expect(flagged).not.toContain(1);
	});
});

describe('intervals across a tick of ten minutes', () => {
	const TICK = Date.UTC(2024, 2, 5, 10, 0, 0);

	it('windows and three-second values overlap there, and the levels stay what they are', () => {
		const start_ms = TICK - 4321;
		const analysis = analyse({
			frequency_Hz: 49.9,
			duration_s: 10,
			events: {},
			harmonics: [STATE_2[1]!],
			start_ms
		});
		expect(analysis.resync.reduce((sum, one) => sum + one, 0)).toBe(1);
		const at = analysis.resync.indexOf(1);
		expect(Math.abs(start_ms + 1000 * analysis.windowStarts_s[at]! - TICK)).toBeLessThan(0.2);
		const starts_ms: number[] = [];
		const levels: number[] = [];
		const aggregator = createAggregator({
			columns: [{ rule: 'rms', count: ORDER_STRIDE }],
			resynchronised: true,
			onAggregate: ({ interval, start_ms: from_ms, row }) => {
				if (interval !== '3s') return;
				starts_ms.push(from_ms);
				levels.push(row[5]!);
				expect(row).toHaveLength(MAX_ORDER + 1);
			}
		});
		for (let w = 0; w < analysis.windowCount; w++) {
			aggregator.push(
				{
					start_ms: start_ms + 1000 * analysis.windowStarts_s[w]!,
					length_s: analysis.windowLengths_s[w]!,
					frequency_Hz: analysis.frequency_Hz[w]!,
					flagged: analysis.flagged[w] === 1,
					resync: analysis.resync[w] === 1
				},
				analysis.channels[0]!.subgroups.subarray(w * ORDER_STRIDE, (w + 1) * ORDER_STRIDE)
			);
		}
		aggregator.finish();
		// 4.3 s before the tick hold one interval and most of a second, which ends after the tick beside the first new one.
		expect(starts_ms.filter((from_ms) => from_ms < TICK - 1)).toHaveLength(2);
		expect(starts_ms[2]! - TICK).toBeLessThan(0.2);
		expect(starts_ms[2]! - starts_ms[1]!).toBeLessThan(3000);
		const expected_V = (U_DIN_V / RMS_OF_STATE_2) * 0.05;
		for (const level of levels) expect(Math.abs(level / expected_V - 1)).toBeLessThan(1e-4);
	});
});
