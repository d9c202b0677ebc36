import { MAX_ORDER, ORDER_STRIDE } from '../harmonics/intervals';
import { seededRandom } from '../synthesis/waveform-random';
import { analyseExact } from './analyse-exact';
import { tenthOfClassI } from './class-limits';
import type { ExactChannel, ExactSignal } from './exact-signal';
import { idealWindow } from './ideal-window';

export interface MovingCase {
	title: string;
	nominalFrequency_Hz: 50 | 60;
	samplingRate_Hz: number;
	signal: ExactSignal;
}

export interface MovingErrors {
	windowCount: number;
	/** Greatest share of a tenth of the class I limit that any order of any window uses, with the order. */
	subgroupUse: number;
	subgroupOrder: number;
	componentUse: number;
	componentOrder: number;
	/** Greatest error of a window's length against exactly N cycles, percent. */
	length_pct: number;
}

const NOMINAL_V = 230;

/** A voltage with the levels of a badly distorted low-voltage network, orders to 50. */
function network(extra: Partial<ExactChannel>): ExactChannel {
	const random = seededRandom(7);
	const level_pct = (order: number) =>
		order === 1 ? 100 : order % 2 === 0 ? 0.3 : order <= 13 ? 4 : order <= 25 ? 1.5 : 0.6;
	return {
		quantity: 'voltage',
		phase: 'L1',
		orders: Array.from({ length: MAX_ORDER }, (_, i) => ({
			order: i + 1,
			rms: (NOMINAL_V * level_pct(i + 1)) / 100,
			phase_deg: i === 0 ? 40 : 360 * random.uniform() - 180
		})),
		...extra
	};
}

/** Offsets of the interharmonic from the order; below the line spacing of 5 Hz it is a modulation of the order. */
const OFFSETS_HZ = [-22.5, -17, -12, -9, -7.5, -6, -5, 5, 6, 7.5, 9, 12, 17, 22.5];
const BESIDE = [1, 3, 11, 49];

export function movingCases(): MovingCase[] {
	return ([50, 60] as const).flatMap((nominalFrequency_Hz) => {
		const frequency_Hz = nominalFrequency_Hz * 1.0007;
		const make = (
			title: string,
			signal: Partial<ExactSignal>,
			extra: Partial<ExactChannel> = {},
			samplingRate_Hz = 12_800
		): MovingCase => ({
			title,
			nominalFrequency_Hz,
			samplingRate_Hz,
			signal: { frequency_Hz, channels: [network(extra)], ...signal }
		});
		const tone = (order: number, offset_Hz: number) =>
			make(
				`1 % at order ${order} ${offset_Hz < 0 ? '−' : '+'} ${Math.abs(offset_Hz)} Hz`,
				{},
				{
					others: [{ frequency_Hz: order * frequency_Hz + offset_Hz, rms: 0.01 * NOMINAL_V, phase_deg: 77 }]
				}
			);
		const moving = (ramp_HzPerSecond: number, rate_Hz: number) =>
			make(
				`ramp ${ramp_HzPerSecond < 0 ? '−' : '+'} 1 Hz/s, ${rate_Hz / 1000} kS/s`,
				{ frequency_Hz: nominalFrequency_Hz - 1.5 * ramp_HzPerSecond, ramp_HzPerSecond },
				{},
				rate_Hz
			);
		const modulated = (rate_Hz: number) =>
			make(
				`amplitude ± 5 % at 8.3 Hz, ${rate_Hz / 1000} kS/s`,
				{},
				{ modulation: { frequency_Hz: 8.3, depth: 0.05 } },
				rate_Hz
			);
		// The lowest gives order 50 just so; its interpolation has the steepest task.
		const rates_Hz = [131 * nominalFrequency_Hz, 10_000, 12_800, 50_000];
		return [
			...rates_Hz.flatMap((rate_Hz) => [moving(1, rate_Hz), moving(-1, rate_Hz), modulated(rate_Hz)]),
			...BESIDE.flatMap((order) => OFFSETS_HZ.map((offset_Hz) => tone(order, offset_Hz)))
		];
	});
}

/** Analyses three seconds and compares every order of every window with the ideal window that starts at the same instant. */
export function measureMoving({ nominalFrequency_Hz, samplingRate_Hz, signal }: MovingCase): MovingErrors {
	const analysis = analyseExact(signal, { samplingRate_Hz, duration_s: 3 }, { nominalFrequency_Hz });
	const measured = analysis.channels[0]!;
	const worst: MovingErrors = {
		windowCount: analysis.windowCount,
		subgroupUse: 0,
		subgroupOrder: 0,
		componentUse: 0,
		componentOrder: 0,
		length_pct: 0
	};
	for (let w = 0; w < analysis.windowCount; w++) {
		const ideal = idealWindow(
			signal,
			signal.channels[0]!,
			analysis.windowStarts_s[w]!,
			analysis.cyclesPerWindow
		);
		worst.length_pct = Math.max(
			worst.length_pct,
			100 * Math.abs(analysis.windowLengths_s[w]! / ideal.length_s - 1)
		);
		for (let order = 1; order <= MAX_ORDER; order++) {
			for (const level of ['subgroup', 'component'] as const) {
				const truth = ideal[`${level}s`][order]!;
				const error = Math.abs(measured[`${level}s`][w * ORDER_STRIDE + order]! - truth);
				const use = error / tenthOfClassI(truth, NOMINAL_V);
				if (use <= worst[`${level}Use`]) continue;
				worst[`${level}Use`] = use;
				worst[`${level}Order`] = order;
			}
		}
	}
	return worst;
}
