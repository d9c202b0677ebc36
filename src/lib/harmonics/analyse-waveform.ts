import { interpolateEvenly } from '../numerics/resample/interpolator';
import { DEFAULT_PHASE_NAMES, type Phase, type PhaseNames } from '../recording/phase';
import type { Recording } from '../recording/recording';
import { err, ok, type Result } from '../result';
import type { AnalysisProblem } from './analysis-problem';
import { inspectCapture } from './capture-quality';
import { ChannelAccumulator } from './channel-accumulator';
import { ENGINE_VERSION } from './engine-version';
import { flagWindows } from './flag-windows';
import { meanProduct, phasePower } from './powers';
import { chooseReferenceChannel, type ReferenceChannel } from './reference-channel';
import { chooseTimeBase, type TimeBase } from './time-base';
import { highestUsableOrder, planWindowSpectrum, type WindowSpectrumPlan } from './window-spectrum';
import { type TrackedWindow, WindowTracker } from './window-tracker';
import type { ChannelAnalysis, ChannelMapping, PhasePower, WaveformAnalysis } from './waveform-analysis';

export interface AnalysisOptions {
	/** Nominal frequency of the point; null to take it from the measurement. */
	nominalFrequency_Hz: 50 | 60 | null;
	/** Primary volts by conductor (see nominalVoltagesByPhase_V); without them dips and ratios are not checked. */
	nominalVoltages_V?: Partial<Record<Phase, number>>;
	/** Names of the conductors in remarks. */
	phaseNames?: PhaseNames;
	onProgress?: (done: number, total: number) => void;
}

export interface AnalysisStep {
	done: number;
	/** Estimate; may be off by one window. */
	total: number;
}

export type AnalysisOutcome = Result<WaveformAnalysis, AnalysisProblem>;

/** Windows between two steps: about a second of signal. */
const WINDOWS_PER_STEP = 5;

/** Analyses a recording in one go. See analyseWaveformSteps. */
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

/**
 * Analyses a recording in steps of a few windows, so that the caller can report, pause or stop between them.
 *
 * Adjoining windows of N = 10 or 12 cycles of the measured fundamental; each is interpolated onto a power of two points
 * over exactly N cycles and transformed without a taper; lines are joined to subgroups.
 *
 * returns  the analysis, or a problem whose sentence says what is needed
 * error    at 128 samples per cycle and more, each order to 50 within 0.001 % of the fundamental on steady signals
 *          (tests/harmonics measures it)
 * source   IEC 61000-4-7:2002+A1:2008, 4.4 and 5.3 to 5.6; IEC 61000-4-30:2015, 4.4 and 4.7 (clauses from memory)
 */
export function* analyseWaveformSteps(
	recording: Recording,
	mappings: readonly ChannelMapping[],
	options: AnalysisOptions
): Generator<AnalysisStep, AnalysisOutcome, void> {
	const prepared = prepare(recording, mappings, options);
	if (!prepared.ok) return prepared;
	const setup = prepared.value;
	const { accumulators, plan, reference } = setup;
	const gathered: Gathered = { windows: [], referencePhases_deg: [], products: setup.pairs.map(() => []) };
	const total = Math.floor(
		(setup.tracker.remaining * (reference.frequency_Hz / setup.base.samplingRate_Hz)) / setup.cyclesPerWindow
	);
	const samples = accumulators.map((a) => a.samples);
	const outputs = accumulators.map((a) => a.window);
	for (let window = setup.tracker.next(); window; window = setup.tracker.next()) {
		const step = window.length / plan.points;
		interpolateEvenly(plan.interpolator, samples, window.start, step, plan.points, outputs);
		finishWindow(setup, gathered, window);
		const done = gathered.windows.length;
		if (done % WINDOWS_PER_STEP === 0) yield { done, total: Math.max(done, total) };
	}
	if (gathered.windows.length === 0) return err(tooShort(setup, setup.base));
	return ok(assemble(recording, options, setup, gathered));
}

interface Setup {
	base: TimeBase;
	reference: ReferenceChannel;
	nominalFrequency_Hz: 50 | 60;
	cyclesPerWindow: 10 | 12;
	plan: WindowSpectrumPlan;
	tracker: WindowTracker;
	accumulators: ChannelAccumulator[];
	/** Voltage and current accumulators of one phase, by position. */
	pairs: { voltage: number; current: number }[];
}

interface Gathered {
	windows: TrackedWindow[];
	referencePhases_deg: number[];
	/** Mean products u·i, one list per pair. */
	products: number[][];
}

function prepare(
	recording: Recording,
	mappings: readonly ChannelMapping[],
	options: AnalysisOptions
): Result<Setup, AnalysisProblem> {
	if (mappings.length === 0) {
		return err({
			code: 'no-mapped-channels',
			sentence:
				'No channel is mapped to a conductor. Map at least one voltage or current, then analyse again.'
		});
	}
	const based = chooseTimeBase(recording);
	if (!based.ok) return based;
	const base = based.value;
	const referred = chooseReferenceChannel(recording, mappings, base);
	if (!referred.ok) return referred;
	const reference = referred.value;
	const nominalFrequency_Hz = nominalFor(reference.frequency_Hz, options.nominalFrequency_Hz);
	const cyclesPerWindow = nominalFrequency_Hz === 50 ? 10 : 12;
	const { samplingRate_Hz } = base;
	if (highestUsableOrder(samplingRate_Hz, reference.frequency_Hz, cyclesPerWindow) < 1) {
		const need_Hz = Math.ceil(reference.frequency_Hz * 2.5);
		return err({
			code: 'rate-too-low',
			sentence:
				`The sampling rate of ${samplingRate_Hz.toFixed(1)} Hz cannot carry a fundamental of ` +
				`${reference.frequency_Hz.toFixed(2)} Hz; at least ${need_Hz} Hz are needed, and 128 samples per cycle for order 50.`,
			have_Hz: samplingRate_Hz,
			need_Hz
		});
	}
	const plan = planWindowSpectrum(samplingRate_Hz, reference.frequency_Hz, cyclesPerWindow);
	const windowSamples = (cyclesPerWindow * samplingRate_Hz) / reference.frequency_Hz;
	const shape = { base, reference, nominalFrequency_Hz, cyclesPerWindow, plan } as const;
	if (base.toSample - base.fromSample < windowSamples * 0.9 + 2 * plan.interpolator.guard) {
		return err(tooShort(shape, base));
	}
	const capacity = Math.ceil(((base.toSample - base.fromSample) / windowSamples) * 1.15) + 1;
	return ok({
		...shape,
		tracker: new WindowTracker({
			reference: recording.channels[reference.channelIndex]!.samples,
			firstSample: base.fromSample,
			lastSample: base.toSample - 1,
			guard: plan.interpolator.guard,
			cyclesPerWindow,
			frequency: reference.frequency_Hz / samplingRate_Hz
		}),
		accumulators: mappings.map(
			(m) => new ChannelAccumulator(recording.channels[m.channelIndex]!, m, plan, cyclesPerWindow, capacity)
		),
		pairs: pairChannels(mappings)
	});
}

/** The stated nominal frequency where the first estimate is about within 15 % of it, else the nearer of 50 and 60. */
function nominalFor(measured_Hz: number, stated_Hz: 50 | 60 | null): 50 | 60 {
	if (stated_Hz !== null && Math.abs(measured_Hz / stated_Hz - 1) <= 0.16) return stated_Hz;
	return measured_Hz < 55 ? 50 : 60;
}

function tooShort(
	shape: Pick<Setup, 'reference' | 'cyclesPerWindow' | 'plan'>,
	base: TimeBase
): AnalysisProblem {
	const have_s = (base.toSample - base.fromSample) / base.samplingRate_Hz;
	const need_s =
		shape.cyclesPerWindow / shape.reference.frequency_Hz +
		(2 * shape.plan.interpolator.guard + 1) / base.samplingRate_Hz;
	return {
		code: 'record-too-short',
		sentence:
			`The capture holds ${have_s.toFixed(4)} s at one rate; one window of ${shape.cyclesPerWindow} cycles of ` +
			`${shape.reference.frequency_Hz.toFixed(2)} Hz needs ${need_s.toFixed(4)} s, margins for the interpolation ` +
			`included. Record at least half a second; ten seconds or more are better.`,
		have_s,
		need_s
	};
}

function pairChannels(mappings: readonly ChannelMapping[]): Setup['pairs'] {
	const pairs: Setup['pairs'] = [];
	mappings.forEach((mapping, current) => {
		if (mapping.quantity !== 'current' || mapping.phase === 'N') return;
		const voltage = mappings.findIndex((m) => m.quantity === 'voltage' && m.phase === mapping.phase);
		if (voltage >= 0) pairs.push({ voltage, current });
	});
	return pairs;
}

function finishWindow(setup: Setup, gathered: Gathered, window: TrackedWindow): void {
	const { accumulators, plan, reference } = setup;
	const index = gathered.windows.length;
	let referencePhase_deg = NaN;
	const complete = accumulators.map((accumulator) => {
		if (accumulator.isMissing(window)) return false;
		const phase_deg = accumulator.finishWindow(index, window);
		if (accumulator.mapping.channelIndex === reference.channelIndex) referencePhase_deg = phase_deg;
		return true;
	});
	for (const accumulator of accumulators) accumulator.referPhases(index, referencePhase_deg);
	setup.pairs.forEach(({ voltage, current }, p) => {
		const product =
			complete[voltage] && complete[current]
				? meanProduct(accumulators[voltage]!.window, accumulators[current]!.window, plan.points)
				: NaN;
		gathered.products[p]!.push(product);
	});
	gathered.windows.push(window);
	gathered.referencePhases_deg.push(referencePhase_deg);
}

function assemble(
	recording: Recording,
	options: AnalysisOptions,
	setup: Setup,
	gathered: Gathered
): WaveformAnalysis {
	const { base, plan, reference } = setup;
	const { windows } = gathered;
	const channels = setup.accumulators.map((a) => a.toAnalysis(windows.length));
	const flagging = flagWindows(recording, channels, options.nominalVoltages_V ?? {}, setup, gathered);
	const analysis: WaveformAnalysis = {
		engineVersion: ENGINE_VERSION,
		nominalFrequency_Hz: setup.nominalFrequency_Hz,
		cyclesPerWindow: setup.cyclesPerWindow,
		referenceChannelIndex: reference.channelIndex,
		highestOrder: plan.highestOrder,
		windowCount: windows.length,
		windowStarts_s: Float64Array.from(
			windows,
			(w) => base.offset_s + (w.start - base.fromSample) / base.samplingRate_Hz
		),
		windowLengths_s: Float64Array.from(windows, (w) => w.length / base.samplingRate_Hz),
		frequency_Hz: Float64Array.from(windows, (w) => (w.measured ? w.frequency * base.samplingRate_Hz : NaN)),
		flagged: flagging.flagged,
		channels,
		powers: buildPowers(channels, setup, gathered),
		quality: []
	};
	analysis.quality = [
		...base.remarks,
		...inspectCapture(recording, analysis, base, {
			pointNominal_Hz: options.nominalFrequency_Hz,
			measured_Hz: reference.frequency_Hz,
			nominalVoltages_V: options.nominalVoltages_V ?? {},
			names: options.phaseNames ?? DEFAULT_PHASE_NAMES,
			events: flagging.events
		})
	];
	return analysis;
}

function buildPowers(channels: ChannelAnalysis[], setup: Setup, gathered: Gathered): PhasePower[] {
	return setup.pairs.map(({ voltage, current }, p) =>
		phasePower(channels[voltage]!, channels[current]!, Float64Array.from(gathered.products[p]!))
	);
}
