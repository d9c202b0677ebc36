import { DEFAULT_PHASE_NAMES, type Phase, type PhaseNames } from '../../recording/phase';
import type { CaptureSource } from '../../recording/sample-source';
import { inspectCapture } from '../capture-quality';
import { ENGINE_VERSION } from '../engine-version';
import { EventFlagging } from '../flag-windows';
import type { ChannelFlicker } from '../flicker/follow-flicker';
import type { CaptureFindings, WaveformWindows } from '../waveform-analysis';
import { joinChannels } from './channel-figures';
import { joinPowers } from './join-spans';
import { joinFlatTops, noFlatTops } from './flat-tops';
import { OverallFigures } from './overall-figures';
import type { PreparedCapture } from './prepare-capture';
import type { WindowBlock } from './window-analyst';

export interface AssemblyOptions {
	nominalFrequency_Hz: 50 | 60 | null;
	nominalVoltages_V?: Partial<Record<Phase, number>> | undefined;
	phaseNames?: PhaseNames | undefined;
}

/** Windows that one span holds at most: two minutes, and some. Memory does not grow beyond it. */
const MOST_WINDOWS_PER_SPAN = 620;

/** Collects blocks in order of time and hands on spans of windows; what holds for the whole capture stays. */
export class CaptureAssembly {
	windowCount = 0;
	private blocks: (WindowBlock & { planIndex: number; flagged: Uint8Array })[] = [];
	private readonly overall: OverallFigures;
	private readonly flagging: EventFlagging;
	private readonly flatTops;
	private readonly missingSamples: number[];
	private readonly windowsWithoutData: number[];
	private lostWindows = 0;
	private used_s = 0;

	constructor(
		private readonly source: CaptureSource,
		private readonly prepared: PreparedCapture,
		private readonly options: AssemblyOptions
	) {
		const { mappings } = prepared;
		this.overall = new OverallFigures(source, mappings);
		this.flagging = new EventFlagging(mappings, options.nominalVoltages_V ?? {});
		this.flatTops = mappings.map(noFlatTops);
		this.missingSamples = mappings.map(() => 0);
		this.windowsWithoutData = mappings.map(() => 0);
	}

	/** Takes the next block; returns a span when one is full. */
	accept(planIndex: number, block: WindowBlock): WaveformWindows | null {
		const before = this.blocks;
		const full =
			before.length > 0 &&
			(block.windows[0]!.resync || this.held + block.windows.length > MOST_WINDOWS_PER_SPAN);
		const span = full ? this.takeSpan() : null;
		const { stretch } = this.prepared.plans[planIndex]!;
		const flagged = this.flagging.accept(block, stretch);
		this.overall.accept(block, flagged, stretch.samplingRate_Hz);
		block.channels.forEach((channel, m) => {
			this.flatTops[m] = joinFlatTops(this.flatTops[m]!, block.flatTops[m]!);
			this.missingSamples[m]! += block.missingSamples[m]!;
			for (const rms of channel.rms) if (Number.isNaN(rms)) this.windowsWithoutData[m]!++;
		});
		for (const window of block.windows) {
			if (!window.measured) this.lostWindows++;
			this.used_s += window.length / stretch.samplingRate_Hz;
		}
		this.windowCount += block.windows.length;
		this.blocks.push({ ...block, planIndex, flagged });
		return span;
	}

	/** The windows that no span has taken yet; null when there are none. */
	takeSpan(): WaveformWindows | null {
		const { blocks } = this;
		if (blocks.length === 0) return null;
		this.blocks = [];
		const { plans, mappings, pairs } = this.prepared;
		const windows = blocks.flatMap((block) => {
			const { stretch } = plans[block.planIndex]!;
			return block.windows.map((window) => ({ window, stretch }));
		});
		const column = (value: (of: (typeof windows)[number]) => number) => Float64Array.from(windows, value);
		return {
			windowCount: windows.length,
			windowStarts_s: column(
				({ window, stretch }) =>
					stretch.offset_s + (window.start - stretch.fromSample) / stretch.samplingRate_Hz
			),
			windowLengths_s: column(({ window, stretch }) => window.length / stretch.samplingRate_Hz),
			frequency_Hz: column(({ window, stretch }) =>
				window.measured ? window.frequency * stretch.samplingRate_Hz : NaN
			),
			flagged: Uint8Array.from(blocks.flatMap((block) => [...block.flagged])),
			resync: Uint8Array.from(windows, ({ window }) => (window.resync ? 1 : 0)),
			channels: mappings.map((_, m) => joinChannels(blocks.map((block) => block.channels[m]!))),
			powers: pairs.map((_, p) => joinPowers(blocks.map((block) => block.powers[p]!)))
		};
	}

	/** What holds for the capture as a whole, once every block was accepted. */
	findings(flicker: ChannelFlicker[] = []): CaptureFindings {
		const { prepared, options } = this;
		const whole = this.overall.channels();
		const events = this.flagging.finish();
		const meanFrequency_Hz = this.overall.meanFrequency_Hz() ?? prepared.reference.frequency_Hz;
		return {
			engineVersion: ENGINE_VERSION,
			nominalFrequency_Hz: prepared.nominalFrequency_Hz,
			cyclesPerWindow: prepared.cyclesPerWindow,
			referenceChannelIndex: prepared.reference.channelIndex,
			highestOrder: prepared.highestOrder,
			meanFrequency_Hz,
			whole,
			events,
			flicker,
			quality: [
				...prepared.remarks,
				...inspectCapture(this.source, {
					pointNominal_Hz: options.nominalFrequency_Hz,
					usedNominal_Hz: prepared.nominalFrequency_Hz,
					frequency_Hz: meanFrequency_Hz,
					referenceChannelIndex: prepared.reference.channelIndex,
					cyclesPerWindow: prepared.cyclesPerWindow,
					highestOrder: prepared.highestOrder,
					stretches: prepared.plans.map((plan) => plan.stretch),
					channels: whole,
					flatTops: this.flatTops,
					missingSamples: this.missingSamples,
					windowsWithoutData: this.windowsWithoutData,
					windowCount: this.windowCount,
					lostWindows: this.lostWindows,
					used_s: this.used_s,
					nominalVoltages_V: options.nominalVoltages_V ?? {},
					names: options.phaseNames ?? DEFAULT_PHASE_NAMES,
					events
				})
			]
		};
	}

	private get held(): number {
		return this.blocks.reduce((sum, block) => sum + block.windows.length, 0);
	}
}
