import { ORDER_STRIDE } from '../harmonics/intervals';
import { pointSequences } from '../harmonics/sequence/point-sequences';
import type { WaveformAnalysis } from '../harmonics/waveform-analysis';
import { rootMeanSquare } from '../numerics/stats/root-mean-square';
import { analyseExact } from './analyse-exact';
import type { ExactChannel, ExactSignal } from './exact-signal';
import { idealWindow } from './ideal-window';
import { tenthOfClassI } from './class-limits';

/** Promises: a tenth of what class A of IEC 61000-4-30:2015 allows (from memory). */
export const STATE_LIMITS = { frequency_Hz: 0.001, voltage_pct: 0.01, unbalance_pct: 0.015 };

/** One of the states in which instruments are tested, as far as public sources give it; flicker is left out. */
export interface TestingState {
	title: string;
	/** Off nominal. */
	frequencyOffset_Hz: number;
	/** L1, L2, L3, percent of the declared voltage; 120° apart. */
	levels_pct: readonly [number, number, number];
	/** Percent of the declared voltage, on every conductor. */
	harmonics: readonly { order: number; level_pct: number; phase_deg: number }[];
	/** Percent of the declared voltage at so many times the nominal frequency. */
	interharmonic: { timesNominal: number; level_pct: number } | null;
}

/** IEC 62586-2, testing states 1 to 3 (IEC 61000-4-30 before it); from memory. */
export const TESTING_STATES: readonly TestingState[] = [
	{
		title: 'state 1',
		frequencyOffset_Hz: 0,
		levels_pct: [100, 100, 100],
		harmonics: [3, 5, 7, 11, 13].map((order) => ({ order, level_pct: 1.5, phase_deg: 0 })),
		interharmonic: { timesNominal: 7.5, level_pct: 0.5 }
	},
	{
		title: 'state 2',
		frequencyOffset_Hz: -1,
		levels_pct: [73, 80, 87],
		harmonics: [
			{ order: 3, level_pct: 10, phase_deg: 0 },
			{ order: 5, level_pct: 5, phase_deg: 0 },
			{ order: 29, level_pct: 5, phase_deg: 0 }
		],
		interharmonic: { timesNominal: 7.5, level_pct: 1 }
	},
	{
		title: 'state 3',
		frequencyOffset_Hz: 1,
		levels_pct: [152, 140, 128],
		harmonics: [
			{ order: 7, level_pct: 10, phase_deg: 180 },
			{ order: 13, level_pct: 5, phase_deg: 0 },
			{ order: 25, level_pct: 5, phase_deg: 0 }
		],
		interharmonic: { timesNominal: 3.5, level_pct: 1 }
	}
];

export interface StateErrors {
	/** Mean over ten seconds. */
	frequency_Hz: number;
	/** Greatest error of rms over ten seconds, percent of the declared voltage. */
	voltage_pct: number;
	/** Percentage points. */
	u2_pct: number;
	u0_pct: number;
	/**
	 * Greatest share of a tenth of class I that any order to 50 uses, against the ideal window: the interharmonic reaches
	 * the lines of orders that were not put in, in any window of ten or twelve cycles.
	 */
	harmonicUse: number;
	harmonicOrder: number;
	/** The same for the orders that were put in, against what was put in. */
	putInUse: number;
}

const DECLARED_V = 230;
const SAMPLING_RATE_HZ = 12_800;
const DURATION_S = 10.5;

/**
 * Unbalance of three phasors of these sizes 120° apart, by their symmetrical components; percent.
 * source  C. L. Fortescue, 1918; 73/80/87 gives 5.05 % and 152/140/128 gives 4.95 %, as the standard's table says (from memory)
 */
export function unbalanceOf([a, b, c]: readonly [number, number, number]): number {
	const spread = Math.sqrt(a * a + b * b + c * c - a * b - b * c - c * a);
	return (100 * spread) / (a + b + c);
}

function stateSignal(state: TestingState, nominalFrequency_Hz: 50 | 60): ExactSignal {
	const frequency_Hz = nominalFrequency_Hz + state.frequencyOffset_Hz;
	const channels = state.levels_pct.map((level_pct, i): ExactChannel => ({
		quantity: 'voltage',
		phase: (['L1', 'L2', 'L3'] as const)[i]!,
		orders: [
			{ order: 1, rms: (DECLARED_V * level_pct) / 100, phase_deg: -120 * i },
			...state.harmonics.map(({ order, level_pct: harmonic_pct, phase_deg }) => ({
				order,
				rms: (DECLARED_V * harmonic_pct) / 100,
				phase_deg: phase_deg - 120 * i * order
			}))
		],
		others: state.interharmonic
			? [
					{
						frequency_Hz: state.interharmonic.timesNominal * nominalFrequency_Hz,
						rms: (DECLARED_V * state.interharmonic.level_pct) / 100,
						phase_deg: 0
					}
				]
			: []
	}));
	return { frequency_Hz, channels };
}

/** Analyses ten and a half seconds of a state and compares what comes out over ten seconds with what was put in. */
export function measureState(state: TestingState, nominalFrequency_Hz: 50 | 60): StateErrors {
	const signal = stateSignal(state, nominalFrequency_Hz);
	const analysis = analyseExact(
		signal,
		{ samplingRate_Hz: SAMPLING_RATE_HZ, duration_s: DURATION_S },
		{ nominalFrequency_Hz }
	);
	const windows = Array.from(analysis.windowStarts_s.keys()).filter((w) => analysis.windowStarts_s[w]! < 10);
	const meanFrequency_Hz = windows.reduce((sum, w) => sum + analysis.frequency_Hz[w]!, 0) / windows.length;
	const sequences = pointSequences(
		{
			system: 'four-wire',
			highestOrder: analysis.highestOrder,
			voltages: Object.fromEntries(analysis.channels.map((channel) => [channel.mapping.phase, channel])),
			currents: {}
		},
		windows
	)!;
	const unbalance_pct = unbalanceOf(state.levels_pct);
	return {
		frequency_Hz: Math.abs(meanFrequency_Hz - signal.frequency_Hz),
		voltage_pct: Math.max(
			...analysis.channels.map((channel, c) => {
				const rms = rootMeanSquare(channel.rms.subarray(0, windows.length));
				return (100 * Math.abs(rms - trueRms(signal.channels[c]!))) / DECLARED_V;
			})
		),
		u2_pct: Math.abs(sequences.voltage!.u2_pct - unbalance_pct),
		u0_pct: Math.abs(sequences.voltage!.u0_pct - unbalance_pct),
		...worstHarmonic(signal, analysis, windows.length)
	};
}

function trueRms({ orders, others = [] }: ExactChannel): number {
	return Math.sqrt([...orders, ...others].reduce((sum, { rms }) => sum + rms * rms, 0));
}

/** Lines as root mean square over the windows, beside the ideal ones of the same windows. */
function worstHarmonic(
	signal: ExactSignal,
	analysis: WaveformAnalysis,
	windowCount: number
): Pick<StateErrors, 'harmonicUse' | 'harmonicOrder' | 'putInUse'> {
	const { channels, highestOrder, windowStarts_s, cyclesPerWindow } = analysis;
	const worst = { harmonicUse: 0, harmonicOrder: 0, putInUse: 0 };
	channels.forEach((channel, c) => {
		const exact = signal.channels[c]!;
		const measured = new Float64Array(ORDER_STRIDE);
		const ideal = new Float64Array(ORDER_STRIDE);
		for (let w = 0; w < windowCount; w++) {
			const { components } = idealWindow(signal, exact, windowStarts_s[w]!, cyclesPerWindow);
			for (let order = 1; order <= highestOrder; order++) {
				measured[order]! += channel.components[w * ORDER_STRIDE + order]! ** 2 / windowCount;
				ideal[order]! += components[order]! ** 2 / windowCount;
			}
		}
		for (let order = 1; order <= highestOrder; order++) {
			const level = Math.sqrt(measured[order]!);
			const useOf = (truth: number) => Math.abs(level - truth) / tenthOfClassI(truth, DECLARED_V);
			const use = useOf(Math.sqrt(ideal[order]!));
			if (use > worst.harmonicUse) Object.assign(worst, { harmonicUse: use, harmonicOrder: order });
			const putIn = exact.orders.find((tone) => tone.order === order);
			if (putIn) worst.putInUse = Math.max(worst.putInUse, useOf(putIn.rms));
		}
	});
	return worst;
}
