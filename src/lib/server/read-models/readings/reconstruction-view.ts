import { findNotches } from '../../../harmonics/shape/notches';
import { describeHalfWaveFault, waveSymmetry } from '../../../harmonics/shape/symmetry';
import { drawWave, readWholeBand } from '../../../harmonics/whole-band';
import type { Phase } from '../../../recording/phase';
import type { AnalysisSeriesRow } from '../../db/rows';
import { figure, type Figure } from './reading-figure';
import type { WindowRows } from './window-rows';
import type { WindowSamples } from './window-samples';

/** One channel's wave over a cycle, and the orders it can be built from again. */
export interface WaveReading {
	channelIndex: number;
	name: string;
	phase: Phase;
	label: string;
	quantity: 'voltage' | 'current';
	unit: 'V' | 'A';
	/** [points] measured, two cycles. */
	wave: number[];
	dc: number;
	/** Index = order; rms, and degrees at the first point. */
	components: number[];
	phases_deg: number[];
	symmetry: {
		halfWave_pctOfRms: Figure;
		odd_pctOfRms: Figure;
		even_pctOfRms: Figure;
		evenOrders_pctOfFundamental: Figure;
		dc_pctOfFundamental: Figure;
		/** What differing half-waves may mean; null when they do not differ tellingly. */
		sentence: string | null;
	};
	/** Voltages only; null where the wave has no fundamental. */
	notches: {
		count: number;
		deepest: { depth_V: Figure; depth_pct: Figure; width_us: Figure; area_Vus: Figure } | null;
		caution: string | null;
	} | null;
}

export interface ReconstructionReadings {
	kind: 'reconstruction';
	window: number;
	frequency_Hz: Figure;
	cycle_s: number;
	highestOrder: number;
	waves: WaveReading[];
}

const CYCLES_SHOWN = 2;
const POINTS_SHOWN = 1024;
/** Orders offered for switching on and off. */
const HIGHEST_OFFERED = 50;

/** The waves of one window with the orders that make them up. */
export function reconstructionReadings(
	chosen: WindowRows,
	samples: WindowSamples,
	context: {
		cyclesPerWindow: number;
		label: (phase: Phase) => string;
		nameOf: (channelIndex: number) => string;
	}
): ReconstructionReadings {
	const cycle = samples.length / context.cyclesPerWindow;
	const waves = chosen.rows.flatMap((row) => {
		const values = samples.byChannel.get(row.channel_index ?? -1);
		const wave = values && waveReading(row, values, samples, context);
		return wave ? [wave] : [];
	});
	return {
		kind: 'reconstruction',
		window: samples.window,
		frequency_Hz: figure(samples.samplingRate_Hz / cycle),
		cycle_s: cycle / samples.samplingRate_Hz,
		highestOrder: Math.max(1, ...waves.map((wave) => wave.components.length - 1)),
		waves
	};
}

function waveReading(
	row: AnalysisSeriesRow,
	values: Float64Array,
	samples: WindowSamples,
	{ cyclesPerWindow, label, nameOf }: Parameters<typeof reconstructionReadings>[2]
): WaveReading | null {
	const window = readWholeBand(values, samples.start, samples.length, cyclesPerWindow);
	if (Number.isNaN(window.dc)) return null;
	const offered = Math.min(HIGHEST_OFFERED, window.highestOrder);
	const components = window.components.slice(0, offered + 1);
	const phases_deg = window.phases_deg.slice(0, offered + 1);
	const shown_samples = (samples.length * CYCLES_SHOWN) / cyclesPerWindow;
	const channelIndex = row.channel_index ?? -1;
	const symmetry = waveSymmetry({ dc: window.dc, components, phases_deg });
	const fault = describeHalfWaveFault(symmetry, {
		name: nameOf(channelIndex),
		quantity: row.quantity,
		channelIndex
	});
	return {
		channelIndex,
		name: nameOf(channelIndex),
		phase: row.phase,
		label: label(row.phase),
		quantity: row.quantity,
		unit: row.quantity === 'voltage' ? 'V' : 'A',
		wave: Array.from(drawWave(values, samples.start, shown_samples, POINTS_SHOWN), (value) =>
			Number(value.toPrecision(7))
		),
		dc: window.dc,
		components: Array.from(components, (value) => Number(value.toPrecision(7))),
		phases_deg: Array.from(phases_deg, (value) => Number(value.toPrecision(7))),
		symmetry: {
			halfWave_pctOfRms: figure(symmetry.halfWave_pctOfRms),
			odd_pctOfRms: figure(symmetry.odd_pctOfRms),
			even_pctOfRms: figure(symmetry.even_pctOfRms),
			evenOrders_pctOfFundamental: figure(symmetry.evenOrders_pctOfFundamental),
			dc_pctOfFundamental: figure(symmetry.dc_pctOfFundamental),
			sentence: fault?.sentence ?? null
		},
		notches: row.quantity === 'voltage' ? notchReading(values, samples, cyclesPerWindow) : null
	};
}

function notchReading(
	values: Float64Array,
	samples: WindowSamples,
	cyclesPerWindow: number
): WaveReading['notches'] {
	const from = Math.ceil(samples.start);
	const frequency_Hz = (samples.samplingRate_Hz * cyclesPerWindow) / samples.length;
	const survey = findNotches(
		values.slice(from, from + Math.floor(samples.length)),
		samples.samplingRate_Hz,
		frequency_Hz
	);
	if (!survey) return null;
	const deepest = survey.notches.reduce<(typeof survey.notches)[number] | null>(
		(most, notch) => (most && most.area_Vus >= notch.area_Vus ? most : notch),
		null
	);
	return {
		count: survey.notches.length,
		deepest: deepest && {
			depth_V: figure(deepest.depth_V),
			depth_pct: figure(deepest.depth_pctOfInstantaneous),
			width_us: figure(deepest.width_us),
			area_Vus: figure(deepest.area_Vus)
		},
		caution: survey.notches.length > 0 ? survey.caution : null
	};
}
