import type { Recording } from '../../recording/recording';
import { sourceOf, type CaptureSource } from '../../recording/sample-source';
import { err, ok, type Result } from '../../result';
import type { AnalysisProblem } from '../analysis-problem';
import { CaptureAssembly, type AssemblyOptions } from '../engine/capture-assembly';
import { joinSpans } from '../engine/join-spans';
import { stretchDuration_s } from '../engine/stretches';
import { expectedWindowCount, windowTasks } from '../engine/window-tasks';
import type {
	CaptureFindings,
	ChannelMapping,
	WaveformAnalysis,
	WaveformWindows
} from '../waveform-analysis';
import { followUneven } from './follow-uneven';
import { prepareUneven, unevenTooShort } from './prepare-uneven';
import { UnevenAnalyst } from './uneven-analyst';

export interface UnevenOptions extends AssemblyOptions {
	/** Instant of sample 0, milliseconds since 1970-01-01 UTC; without it windows are not aligned to ten-minute ticks. */
	start_ms?: number;
}

/** Windows in one step: the integrals cost more than transforms, so fewer than of an even capture. */
const WINDOWS_PER_STEP = 15;
/** Remarks on what an even rate can carry; uneven-sampling takes their place. */
const EVEN_RATE_REMARKS = ['rate-too-low', 'little-filter-margin'];

/**
 * Analyses a capture that has time stamps and no even rate, in steps; the counterpart of `analyseCapture`, with the same
 * windows, figures and remarks (see isUnevenlySampled for when).
 *
 * The wave is taken to be what straight lines between its samples make of it: nothing is resampled. The fundamental is
 * followed through a Hann taper, and every figure of a window is the exact integral of that wave over exactly N cycles:
 * lines X(k) = (1/T)∫x·exp(−j2πkt/T)dt in closed form by parts, dc, square, product of voltage and current. Joining
 * samples by lines lowers order h to Σ Δ·sinc²(h·f·Δ)/T over the steps Δ; that is not corrected but bounded: orders that
 * could lose more than 5 % of the reading are not given, and a remark says what the highest one loses. A step of more
 * than five median steps is a gap, which no window spans.
 *
 * onSpan   receives about two minutes of windows at a time, in order of time
 * returns  what holds for the whole capture, or a problem whose sentence says what is needed
 * error    beside the stated attenuation: leakage as that of even captures
 * source   Fourier integral by parts; IEC 61000-4-7:2002+A1:2008, 4.4 and 5.3 to 5.6 (clauses from memory) for windows,
 *          groups and the 5 % of class I
 */
export function* analyseUnevenCapture(
	source: CaptureSource,
	mappings: readonly ChannelMapping[],
	options: UnevenOptions,
	onSpan: (span: WaveformWindows) => void
): Generator<{ done: number; total: number }, Result<CaptureFindings, AnalysisProblem>, void> {
	const stamps_s = source.timeStamps_s ?? new Float64Array(0);
	const preparation = prepareUneven(source, stamps_s, mappings, options.nominalFrequency_Hz);
	if (!preparation.ok) return preparation;
	const prepared = preparation.value;
	const { plans, reference, referencePosition, pairs } = prepared;
	const total = expectedWindowCount(prepared);
	const assembly = new CaptureAssembly(source, prepared, options);
	const analystOf = (at: number) =>
		new UnevenAnalyst(source, stamps_s, { plan: plans[at]!, mappings, reference: referencePosition, pairs });
	let at = 0;
	let analyst = analystOf(at);
	const tasks = windowTasks(source, prepared, options.start_ms ?? null, WINDOWS_PER_STEP, (plan) =>
		followUneven(source, stamps_s, reference.channelIndex, plan)
	);
	for (const { planIndex, windows } of tasks) {
		if (planIndex !== at) analyst = analystOf((at = planIndex));
		const span = assembly.accept(planIndex, analyst.analyse(windows));
		if (span) onSpan(span);
		yield { done: assembly.windowCount, total: Math.max(assembly.windowCount, total) };
	}
	const rest = assembly.takeSpan();
	if (rest) onSpan(rest);
	if (assembly.windowCount === 0) {
		const longest_s = Math.max(...plans.map((plan) => stretchDuration_s(plan.stretch)));
		return err(unevenTooShort(longest_s, reference, prepared.cyclesPerWindow));
	}
	const findings = assembly.findings();
	return ok({
		...findings,
		quality: findings.quality.filter((remark) => !EVEN_RATE_REMARKS.includes(remark.code))
	});
}

/** The same in one go, every window kept. */
export function analyseUneven(
	recording: Recording,
	mappings: readonly ChannelMapping[],
	options: UnevenOptions
): Result<WaveformAnalysis, AnalysisProblem> {
	const spans: WaveformWindows[] = [];
	const steps = analyseUnevenCapture(sourceOf(recording), mappings, options, (span) => spans.push(span));
	for (;;) {
		const step = steps.next();
		if (!step.done) continue;
		return step.value.ok ? ok({ ...step.value.value, ...joinSpans(spans) }) : step.value;
	}
}
