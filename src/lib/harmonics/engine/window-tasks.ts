import type { CaptureSource } from '../../recording/sample-source';
import { trackerReach, type TrackedWindow, type TrackerSetup, WindowTracker } from '../window-tracker';
import type { PreparedCapture } from './prepare-capture';
import { viewChannel } from './channel-view';
import type { SegmentPlan } from './segment-plan';

/** Consecutive windows of one stretch, placed and still to be analysed. */
export interface WindowTask {
	planIndex: number;
	windows: TrackedWindow[];
}

/** Windows in one task: about ten seconds. */
const WINDOWS_PER_TASK = 50;
const TEN_MINUTES_MS = 600_000;

/**
 * Places the windows of a capture, one task at a time. A task ends where the train starts anew at a ten-minute tick.
 * start_ms  instant of sample 0, milliseconds since 1970-01-01 UTC; null when it is not known: there are no ticks then
 * follow    how the reference channel of a stretch is followed where its samples are not evenly spaced
 */
export function* windowTasks(
	source: CaptureSource,
	prepared: PreparedCapture,
	start_ms: number | null,
	windowsPerTask = WINDOWS_PER_TASK,
	follow?: (plan: SegmentPlan) => Pick<TrackerSetup, 'reference' | 'phasorAt'>
): Generator<WindowTask, void, void> {
	const { reference } = prepared;
	let frequency_Hz = reference.frequency_Hz;
	for (const [planIndex, plan] of prepared.plans.entries()) {
		const { stretch, cyclesPerWindow, spectrum } = plan;
		const frequency = frequency_Hz / stretch.samplingRate_Hz;
		const tracker = new WindowTracker({
			...(follow?.(plan) ?? {
				reference: viewChannel(source, reference.channelIndex, trackerReach(cyclesPerWindow, frequency))
			}),
			firstSample: stretch.fromSample,
			lastSample: stretch.toSample - 1,
			guard: spectrum.kernel.halfWidth,
			cyclesPerWindow,
			frequency,
			ticks: ticksIn(plan, start_ms)
		});
		let windows: TrackedWindow[] = [];
		for (let window = tracker.next(); window; window = tracker.next()) {
			if (windows.length === windowsPerTask || (window.resync && windows.length > 0)) {
				yield { planIndex, windows };
				windows = [];
			}
			windows.push(window);
			if (window.measured) frequency_Hz = window.frequency * stretch.samplingRate_Hz;
		}
		if (windows.length > 0) yield { planIndex, windows };
	}
}

/** Estimate of the number of windows, for showing progress. */
export function expectedWindowCount({ plans, reference, cyclesPerWindow }: PreparedCapture): number {
	return plans.reduce((sum, { stretch }) => {
		const duration_s = (stretch.toSample - stretch.fromSample) / stretch.samplingRate_Hz;
		return sum + Math.floor((duration_s * reference.frequency_Hz) / cyclesPerWindow);
	}, 0);
}

/** Sample numbers of the ten-minute ticks of UTC in a stretch. */
function* ticksIn({ stretch }: SegmentPlan, start_ms: number | null): Generator<number> {
	if (start_ms === null) return;
	const { samplingRate_Hz, fromSample, toSample, offset_s } = stretch;
	const first_ms = start_ms + 1000 * offset_s;
	for (let tick = Math.ceil(first_ms / TEN_MINUTES_MS); ; tick++) {
		const sample = fromSample + ((tick * TEN_MINUTES_MS - first_ms) / 1000) * samplingRate_Hz;
		if (sample >= toSample) return;
		yield sample;
	}
}
