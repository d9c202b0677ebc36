import { WindowAnalyst, type KernelFactory, type WindowBlock } from './engine/window-analyst';
import { CaptureAssembly } from './engine/capture-assembly';
import { joinSpans } from './engine/join-spans';
import { prepareCapture, tooShortProblem, type PreparedCapture } from './engine/prepare-capture';
import { canMeasureFlicker, FlickerFollower, type ChannelFlicker } from './flicker/follow-flicker';
import { isUnevenlySampled } from './engine/stretches';
import { expectedWindowCount, windowTasks, type WindowTask } from './engine/window-tasks';
import type { Phase, PhaseNames } from '../recording/phase';
import type { Recording } from '../recording/recording';
import { sourceOf, type CaptureSource } from '../recording/sample-source';
import { err, ok, type Result } from '../result';
import type { AnalysisProblem } from './analysis-problem';
import { analyseUnevenCapture } from './uneven/analyse-uneven';
import type { CaptureFindings, ChannelMapping, WaveformAnalysis, WaveformWindows } from './waveform-analysis';

export interface AnalysisOptions {
	/** Nominal frequency of the point; null to take it from the measurement. */
	nominalFrequency_Hz: 50 | 60 | null;
	/** Primary volts by conductor (see nominalVoltagesByPhase_V); without them dips and ratios are not checked. */
	nominalVoltages_V?: Partial<Record<Phase, number>>;
	/** Names of the conductors in remarks. */
	phaseNames?: PhaseNames;
	/** Instant of sample 0, milliseconds since 1970-01-01 UTC; without it windows are not aligned to ten-minute ticks. */
	start_ms?: number;
	onProgress?: (done: number, total: number) => void;
	/** Arithmetic of the hot path; the fastest that works here when left out. */
	createKernels?: KernelFactory;
}

export interface AnalysisStep {
	done: number;
	/** Estimate; may be off by one window. */
	total: number;
}

export type AnalysisOutcome = Result<WaveformAnalysis, AnalysisProblem>;

/** Analyses a recording in one go, every window kept. See analyseWaveformSteps. */
export function analyseWaveform(
	recording: Recording,
	mappings: readonly ChannelMapping[],
	options: AnalysisOptions
): AnalysisOutcome {
	const steps = analyseWaveformSteps(recording, mappings, options);
	for (;;) {
		const step = steps.next();
		if (step.done) return step.value;
		options.onProgress?.(step.value.done, step.value.total);
	}
}

/** Analyses a recording in steps, every window kept; so that the caller can report, pause or stop between them. */
export function* analyseWaveformSteps(
	recording: Recording,
	mappings: readonly ChannelMapping[],
	options: AnalysisOptions
): Generator<AnalysisStep, AnalysisOutcome, void> {
	const spans: WaveformWindows[] = [];
	const steps = analyseCapture(sourceOf(recording), mappings, options, (span) => spans.push(span));
	for (;;) {
		const step = steps.next();
		if (!step.done) {
			yield step.value;
			continue;
		}
		if (!step.value.ok) return step.value;
		return ok({ ...step.value.value, ...joinSpans(spans) });
	}
}

/**
 * Analyses a capture of any length in steps; windows are handed on in spans and not kept.
 *
 * Adjoining windows of N = 10 or 12 cycles of the measured fundamental; each is interpolated onto a power of two points
 * over exactly N cycles and transformed without a taper; lines are joined to subgroups and groups. Stretches of one rate
 * are analysed one by one, and the train of windows starts anew at every ten-minute tick of UTC. Captures whose time
 * stamps do not lie on an even grid go the way of analyseUnevenCapture.
 *
 * onSpan   receives about two minutes of windows at a time, in order of time
 * returns  what holds for the whole capture, or a problem whose sentence says what is needed
 * error    docs/accuracy.md
 * source   IEC 61000-4-7:2002+A1:2008, 4.4 and 5.3 to 5.6; IEC 61000-4-30:2015, 4.4, 4.5 and 4.7 (clauses from memory)
 */
export function* analyseCapture(
	source: CaptureSource,
	mappings: readonly ChannelMapping[],
	options: AnalysisOptions,
	onSpan: (span: WaveformWindows) => void
): Generator<AnalysisStep, Result<CaptureFindings, AnalysisProblem>, void> {
	if (isUnevenlySampled(source)) return yield* analyseUnevenCapture(source, mappings, options, onSpan);
	const started = analysisRun(source, mappings, options, onSpan);
	if (!started.ok) return started;
	const run = started.value;
	let at = 0;
	let analyst = new WindowAnalyst(source, analystSetup(run.prepared, at), options.createKernels);
	for (const { planIndex, windows } of run.tasks) {
		if (planIndex !== at) {
			at = planIndex;
			analyst = new WindowAnalyst(source, analystSetup(run.prepared, at), options.createKernels);
		}
		yield run.accept(planIndex, analyst.analyse(windows));
	}
	return run.finish();
}

/** An analysis under way: tasks to be turned into blocks, here or elsewhere, and taken back in their order. */
export interface AnalysisRun {
	prepared: PreparedCapture;
	tasks: Iterable<WindowTask>;
	accept(planIndex: number, block: WindowBlock): AnalysisStep;
	finish(): Result<CaptureFindings, AnalysisProblem>;
}

/** Starts an analysis. See analyseCapture, which does all of it in one thread. */
export function analysisRun(
	source: CaptureSource,
	mappings: readonly ChannelMapping[],
	options: AnalysisOptions,
	onSpan: (span: WaveformWindows) => void
): Result<AnalysisRun, AnalysisProblem> {
	const preparation = prepareCapture(source, mappings, options.nominalFrequency_Hz);
	if (!preparation.ok) return preparation;
	const prepared = preparation.value;
	const total = expectedWindowCount(prepared);
	const assembly = new CaptureAssembly(source, prepared, options);
	const flicker: ChannelFlicker[] = [];
	return ok({
		prepared,
		tasks: withFlicker(source, prepared, options, flicker),
		accept(planIndex, block) {
			const span = assembly.accept(planIndex, block);
			if (span) onSpan(span);
			return { done: assembly.windowCount, total: Math.max(assembly.windowCount, total) };
		},
		finish() {
			const rest = assembly.takeSpan();
			if (rest) onSpan(rest);
			if (assembly.windowCount > 0) return ok(assembly.findings(flicker));
			const { stretch } = prepared.plans[0]!;
			return err(tooShortProblem(stretch, prepared.reference, prepared.cyclesPerWindow));
		}
	});
}

/** The tasks; between them the flicker of what they cover is followed, while others may be working on the windows. */
function* withFlicker(
	source: CaptureSource,
	prepared: PreparedCapture,
	{ start_ms, nominalVoltages_V }: AnalysisOptions,
	found: ChannelFlicker[]
): Generator<WindowTask, void, void> {
	let at = -1;
	let follower: FlickerFollower | null = null;
	for (const task of windowTasks(source, prepared, start_ms ?? null)) {
		if (task.planIndex !== at) {
			found.push(...(follower?.finish() ?? []));
			at = task.planIndex;
			const { stretch } = prepared.plans[at]!;
			follower =
				start_ms !== undefined && canMeasureFlicker(stretch, start_ms)
					? new FlickerFollower(
							source,
							prepared.mappings,
							stretch,
							prepared.nominalFrequency_Hz,
							nominalVoltages_V ?? {},
							start_ms
						)
					: null;
		}
		yield task;
		const last = task.windows.at(-1)!;
		follower?.advance(Math.floor(last.start + last.length));
	}
	found.push(...(follower?.finish() ?? []));
}

/** What an analyst of one stretch needs to know. */
export function analystSetup(prepared: PreparedCapture, planIndex: number) {
	return {
		plan: prepared.plans[planIndex]!,
		mappings: prepared.mappings,
		reference: prepared.referencePosition,
		pairs: prepared.pairs
	};
}
