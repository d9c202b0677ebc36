import { supraharmonicsOf } from '../../../harmonics/supraharmonics';
import { readWholeBand } from '../../../harmonics/whole-band';
import type { Phase } from '../../../recording/phase';
import { ordersOver } from '../../analysis/window-values';
import type { AnalysisSeriesRow } from '../../db/rows';
import { figure, type Figure } from './reading-figure';
import type { WindowRows } from './window-rows';
import type { WindowSamples } from './window-samples';

interface PhaseLevels {
	phase: Phase;
	label: string;
	fundamental: Figure;
	/** Index = order. */
	subgroups: Figure[];
	groups: Figure[];
	/** Index h lies between order h and h + 1. */
	interharmonicSubgroups: Figure[];
	interharmonicGroups: Figure[];
}

export interface InterharmonicReadings {
	kind: 'interharmonics';
	quantity: 'voltage' | 'current';
	unit: 'V' | 'A';
	highestOrder: number;
	lineSpacing_Hz: number;
	/** Empty where the analysis is older than these figures. */
	phases: PhaseLevels[];
	/** Null where the samples are not at hand or end at order 50. */
	above: {
		window: number;
		highestOrder: number;
		orders: { phase: Phase; label: string; rms: Figure[] }[];
		bands: { centres_Hz: number[]; phases: { phase: Phase; label: string; rms: Figure[] }[] };
	} | null;
}

/** Orders above this are looked at in one window only. */
const LAST_STORED_ORDER = 50;

/** Interharmonic levels over the chosen windows, and one window beyond order 50. */
export function interharmonicReadings(
	chosen: WindowRows,
	samples: WindowSamples | null,
	context: {
		quantity: 'voltage' | 'current';
		highestOrder: number;
		cyclesPerWindow: number;
		nominalFrequency_Hz: number;
		label: (phase: Phase) => string;
	}
): InterharmonicReadings {
	const { quantity, highestOrder, label } = context;
	const own = chosen.rows.filter((row) => row.quantity === quantity);
	return {
		kind: 'interharmonics',
		quantity,
		unit: quantity === 'voltage' ? 'V' : 'A',
		highestOrder,
		lineSpacing_Hz: context.nominalFrequency_Hz / context.cyclesPerWindow,
		phases: own.flatMap((row) => {
			const levels = levelsOf(row, chosen.windows, highestOrder);
			return levels ? [{ phase: row.phase, label: label(row.phase), ...levels }] : [];
		}),
		above: samples && aboveStored(own, samples, context)
	};
}

function levelsOf(row: AnalysisSeriesRow, windows: readonly number[], highestOrder: number) {
	const { subgroups, harmonic_groups, interharmonic_subgroups, interharmonic_groups } = row;
	if (!harmonic_groups || !interharmonic_subgroups || !interharmonic_groups) return null;
	const over = (levels: Buffer): Figure[] =>
		Array.from(ordersOver(row, levels, windows).subarray(0, highestOrder + 1), figure);
	const harmonic = over(subgroups);
	return {
		fundamental: harmonic[1] ?? null,
		subgroups: harmonic,
		groups: over(harmonic_groups),
		interharmonicSubgroups: over(interharmonic_subgroups),
		interharmonicGroups: over(interharmonic_groups)
	};
}

function aboveStored(
	own: readonly AnalysisSeriesRow[],
	samples: WindowSamples,
	{ cyclesPerWindow, label }: { cyclesPerWindow: number; label: (phase: Phase) => string }
): InterharmonicReadings['above'] {
	const windows = own.flatMap((row) => {
		const values = samples.byChannel.get(row.channel_index ?? -1);
		return values ? [{ row, values }] : [];
	});
	const read = windows.map(({ row, values }) => ({
		phase: row.phase,
		label: label(row.phase),
		window: readWholeBand(values, samples.start, samples.length, cyclesPerWindow),
		bands: supraharmonicsOf(values.subarray(Math.floor(samples.start)), samples.samplingRate_Hz)
	}));
	const first = read[0];
	if (!first || first.window.highestOrder <= LAST_STORED_ORDER) return null;
	return {
		window: samples.window,
		highestOrder: first.window.highestOrder,
		orders: read.map(({ phase, label: name, window }) => ({
			phase,
			label: name,
			rms: Array.from(window.components.subarray(LAST_STORED_ORDER + 1), figure)
		})),
		bands: {
			centres_Hz: Array.from(first.bands?.centres_Hz ?? []),
			phases: read.map(({ phase, label: name, bands }) => ({
				phase,
				label: name,
				rms: Array.from(bands?.rms ?? [], figure)
			}))
		}
	};
}
