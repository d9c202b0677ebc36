import { analyseWaveform } from '../../src/lib/harmonics/analyse-waveform';
import { ORDER_STRIDE } from '../../src/lib/harmonics/intervals';
import type { ChannelMapping } from '../../src/lib/harmonics/waveform-analysis';
import type { Recording } from '../../src/lib/recording/recording';
import { seededRandom, type RandomSource } from '../../src/lib/synthesis/waveform-random';
import { coverageOf } from '../../src/lib/uncertainty/budget';
import { figureBudget, type Figure } from '../../src/lib/uncertainty/figure-budget';
import { certificateBand, classLimit } from '../../src/lib/uncertainty/instrument-limits';
import { transducersOf, type MeasuringChain, type Quantity } from '../../src/lib/uncertainty/measuring-chain';
import { spreadOfMean } from '../../src/lib/uncertainty/spread';
import { ratioError_pct, responseError_pct } from '../../src/lib/uncertainty/transducer-limits';

/** Captures with known truth and errors drawn from a stated budget, measured by the engine, held against their own ±U. */
export interface SimulationPlan {
	chain: MeasuringChain;
	captures: number;
	seed: number;
}

export interface OrderCoverage {
	order: number;
	figures: number;
	/** Share of figures whose true value lay inside ±U. */
	inside: number;
	/** Mean over the figures of what their budgets promise. */
	promised: number;
	/** Mean U, percent of the true level. */
	U_pctOfLevel: number;
}

const FREQUENCY_HZ = 50.02;
const RATE_HZ = 7680;
const WINDOWS = 3;
const SAMPLES = 4900;
const HIGHEST_ORDER = 50;
/** White noise of the signal itself, percent of full scale. */
const NOISE_PCT = 0.03;
const PROMISE_EVERY = 200;

type Quintuple = [number, number, number, number, number];

interface SimulatedChannel {
	quantity: Quantity;
	phase: ChannelMapping['phase'];
	/** 100 %: nominal voltage or demand current. */
	fullScale: number;
	/** Fundamental, percent of full scale. */
	fundamental_pct: number;
	turn_deg: number;
}

const CHANNELS: SimulatedChannel[] = (['L1', 'L2', 'L3', 'N'] as const).flatMap((phase, i) => [
	{ quantity: 'voltage' as const, phase, fullScale: 230, fundamental_pct: 100, turn_deg: -120 * i },
	{ quantity: 'current' as const, phase, fullScale: 400, fundamental_pct: 80, turn_deg: -120 * i - 25 }
]);

/** True level of an order, percent of full scale; falls with the order as rectifiers' currents do, only slower. */
function trueLevel_pct(channel: SimulatedChannel, order: number): number {
	return order === 1 ? channel.fundamental_pct : 8 / Math.sqrt(order);
}

/** [order][sample] of 1 % of full scale, rms. */
function tonesOf(channel: SimulatedChannel): Float64Array[] {
	return Array.from({ length: HIGHEST_ORDER + 1 }, (_, order) => {
		const amplitude = (Math.SQRT2 * channel.fullScale) / 100;
		const phase = ((order * channel.turn_deg + 37 * order * order) * Math.PI) / 180;
		const step = (2 * Math.PI * order * FREQUENCY_HZ) / RATE_HZ;
		return Float64Array.from({ length: SAMPLES }, (__, n) => amplitude * Math.cos(step * n + phase));
	});
}

function trueRms_A(channel: SimulatedChannel): number {
	let squares = 0;
	for (let order = 1; order <= HIGHEST_ORDER; order++) squares += trueLevel_pct(channel, order) ** 2;
	return (channel.fullScale / 100) * Math.sqrt(squares);
}

/** Level that the chain makes of a true one, by an error drawn from each line of the budget but noise and rounding. */
function drawLevels_pct(
	chain: MeasuringChain,
	channel: SimulatedChannel,
	random: RandomSource
): Float64Array {
	const within = (bound: number) => bound * (2 * random.uniform() - 1);
	const load_A = channel.quantity === 'current' ? trueRms_A(channel) : null;
	const transducers = transducersOf(chain, channel.quantity).map((transducer) => ({
		transducer,
		ratio_pct: within(ratioError_pct(transducer, load_A) ?? 0),
		// One bend of the response for the whole channel.
		bend: within(1)
	}));
	const onePercent =
		channel.quantity === 'voltage' ? 1 : (chain.currentRange_A ?? channel.fullScale) / channel.fullScale;
	const levels = new Float64Array(HIGHEST_ORDER + 1);
	for (let order = 1; order <= HIGHEST_ORDER; order++) {
		const level = trueLevel_pct(channel, order);
		const band = certificateBand(chain, channel.quantity, order);
		let error =
			band === null
				? within(classLimit(chain.instrumentClass, channel.quantity, level, onePercent))
				: ((level * band.expanded_pctOfReading) / 100 / band.coverageFactor) * random.normal();
		for (const { transducer, ratio_pct, bend } of transducers) {
			const response_pct = responseError_pct(transducer, order, chain.nominalFrequency_Hz) ?? 0;
			error += (level * (ratio_pct + bend * response_pct)) / 100;
		}
		levels[order] = level + error;
	}
	return levels;
}

function sampleChannel(
	chain: MeasuringChain,
	channel: SimulatedChannel,
	tones: readonly Float64Array[],
	random: RandomSource
): Float64Array {
	const levels = drawLevels_pct(chain, channel, random);
	const samples = new Float64Array(SAMPLES);
	const noise = (NOISE_PCT / 100) * channel.fullScale;
	for (let n = 0; n < SAMPLES; n++) samples[n] = noise * random.normal();
	// Five orders at a time: the sums are what takes the time here.
	for (let order = 1; order <= HIGHEST_ORDER; order += 5) {
		const a = tones[order]!;
		const b = tones[order + 1]!;
		const c = tones[order + 2]!;
		const d = tones[order + 3]!;
		const e = tones[order + 4]!;
		const [la, lb, lc, ld, le] = levels.subarray(order, order + 5) as unknown as Quintuple;
		for (let n = 0; n < SAMPLES; n++)
			samples[n]! += la * a[n]! + lb * b[n]! + lc * c[n]! + ld * d[n]! + le * e[n]!;
	}
	const step = (channel.quantity === 'voltage' ? chain.resolution?.step_V : chain.resolution?.step_A) ?? null;
	if (step !== null) for (let n = 0; n < SAMPLES; n++) samples[n] = step * Math.round(samples[n]! / step);
	return samples;
}

function recordingOf(samples: readonly Float64Array[]): Recording {
	return {
		kind: 'waveform',
		format: 'COMTRADE',
		variant: 'synthesised',
		stationName: '',
		recorderName: '',
		nominalFrequency_Hz: 50,
		start: null,
		sampleCount: SAMPLES,
		segments: [{ samplingRate_Hz: RATE_HZ, fromSample: 0, toSample: SAMPLES }],
		timeStamps_s: null,
		channels: CHANNELS.map((channel, index) => ({
			index,
			name: `${channel.quantity} ${channel.phase}`,
			phaseHint: channel.phase,
			unitAsWritten: channel.quantity === 'voltage' ? 'V' : 'A',
			baseUnit: channel.quantity === 'voltage' ? 'V' : 'A',
			quantity: channel.quantity,
			samples: samples[index]!,
			valuesAre: 'primary',
			ratio: null,
			range: null
		})),
		statusChannelNames: [],
		remarks: []
	};
}

const MAPPINGS: ChannelMapping[] = CHANNELS.map(({ quantity, phase }, channelIndex) => ({
	channelIndex,
	quantity,
	phase,
	toPrimary: 1
}));

/** The figure of one order over the windows of a capture: root mean square, with the spread that the windows show. */
function figureOf(channel: SimulatedChannel, order: number, windows: Float64Array): Figure {
	const levels = Array.from(
		{ length: windows.length / ORDER_STRIDE },
		(_, w) => (100 * windows[w * ORDER_STRIDE + order]!) / channel.fullScale
	);
	return {
		quantity: channel.quantity,
		orders: { from: order, to: order },
		value_pct: Math.sqrt(levels.reduce((sum, level) => sum + level * level, 0) / levels.length),
		basis: 'agreed',
		evidence: {
			fullScale: channel.fullScale,
			load_A: channel.quantity === 'current' ? trueRms_A(channel) : null,
			spread: spreadOfMean(levels),
			composition_pct: null
		}
	};
}

/**
 * Runs the captures and counts.
 * returns  one entry per order 1 … 50, over all channels and captures
 */
export function simulateCoverage({ chain, captures, seed }: SimulationPlan): OrderCoverage[] {
	const random = seededRandom(seed);
	const tones = CHANNELS.map(tonesOf);
	const counts = Array.from({ length: HIGHEST_ORDER + 1 }, () => ({
		figures: 0,
		inside: 0,
		promised: 0,
		U: 0,
		told: 0
	}));
	for (let c = 0; c < captures; c++) {
		const samples = CHANNELS.map((channel, i) => sampleChannel(chain, channel, tones[i]!, random));
		const outcome = analyseWaveform(recordingOf(samples), MAPPINGS, { nominalFrequency_Hz: 50 });
		if (!outcome.ok) throw new Error(outcome.problem.sentence);
		if (outcome.value.windowCount !== WINDOWS) throw new Error(`${outcome.value.windowCount} windows`);
		outcome.value.channels.forEach((analysed, i) => {
			const channel = CHANNELS[i]!;
			for (let order = 1; order <= HIGHEST_ORDER; order++) {
				const figure = figureOf(channel, order, analysed.subgroups);
				const budget = figureBudget(chain, figure);
				if (budget.U === null) throw new Error(`order ${order} has no uncertainty`);
				const truth = trueLevel_pct(channel, order);
				const count = counts[order]!;
				count.figures += 1;
				if (Math.abs(figure.value_pct - truth) <= budget.U) count.inside += 1;
				count.U += (100 * budget.U) / truth;
				// The promise differs little from capture to capture, and costs more than the measurement: a few tell it.
				if (c % PROMISE_EVERY === 0 && i < 2) {
					count.promised += coverageOf(budget);
					count.told += 1;
				}
			}
		});
	}
	return counts.slice(1).map((count, i) => ({
		order: i + 1,
		figures: count.figures,
		inside: count.inside / count.figures,
		promised: count.promised / count.told,
		U_pctOfLevel: count.U / count.figures
	}));
}
