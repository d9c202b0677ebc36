import type { Phase } from '../../../recording/phase';
import type { WaveformSummary } from '../../analysis/analysis-summary';
import { bufferToFloat64 } from '../../analysis/series-codec';
import type { Db } from '../../db/database';
import type { AnalysisRow, AnalysisSeriesRow } from '../../db/rows';
import { analysesRepository } from '../../repositories/analyses.repository';
import type { Scope } from '../../repositories/scope';

export type Quantity = 'voltage' | 'current';

/** Which windows of a capture are shown. */
export interface WindowChoice {
	cyclesPerWindow: number;
	windowCount: number;
	/** Counted from 1; null = all windows taken together. */
	window: number | null;
	/** Place of the window in the capture; null for all together. */
	place: { from_s: number; to_s: number; start_ms: number; flagged: boolean } | null;
}

/** The windows that a view of a waveform rests on. */
export interface WindowRows {
	/** One per channel, every column read; voltages before currents, each in the order of its conductors. */
	rows: AnalysisSeriesRow[];
	/** Indexes asked for: one, or all that are not flagged (all, when every one is). */
	windows: number[];
	choice: WindowChoice;
}

const PHASE_ORDER: readonly Phase[] = ['L1', 'L2', 'L3', 'L1L2', 'L2L3', 'L3L1', 'N'];

export const byPhase = (a: { phase: Phase }, b: { phase: Phase }) =>
	PHASE_ORDER.indexOf(a.phase) - PHASE_ORDER.indexOf(b.phase);

const byQuantityAndPhase = (
	a: { quantity: Quantity; phase: Phase },
	b: { quantity: Quantity; phase: Phase }
) => (a.quantity === b.quantity ? byPhase(a, b) : a.quantity === 'voltage' ? -1 : 1);

/**
 * Reads the windows of an analysis and chooses those asked for.
 * window  counted from 1; null, or one that the capture does not have, = all together
 */
export async function windowRows(
	db: Db,
	scope: Scope,
	analysis: AnalysisRow,
	summary: WaveformSummary,
	askedWindow: number | null
): Promise<WindowRows> {
	const rows = (await analysesRepository(db, scope).wholeSeriesOf(analysis.id, 'window')).sort(
		byQuantityAndPhase
	);
	const first = rows[0];
	if (!first) throw new Error(`analysis ${analysis.id} has no windows`);
	const window =
		askedWindow !== null && askedWindow >= 1 && askedWindow <= summary.windowCount ? askedWindow : null;
	return {
		rows,
		windows: selectedWindows(first, window),
		choice: {
			cyclesPerWindow: summary.cyclesPerWindow,
			windowCount: summary.windowCount,
			window,
			place: window === null ? null : placeOf(first, window - 1, captureStart_ms(analysis))
		}
	};
}

function selectedWindows(row: AnalysisSeriesRow, window: number | null): number[] {
	if (window !== null) return [window - 1];
	const all = Array.from({ length: row.interval_count }, (_, i) => i);
	const valid = all.filter((i) => row.flagged[i] !== 1);
	return valid.length > 0 ? valid : all;
}

function captureStart_ms(analysis: AnalysisRow): number {
	return (JSON.parse(analysis.parameters_json) as { start_ms: number }).start_ms;
}

function placeOf(row: AnalysisSeriesRow, index: number, start: number): WindowChoice['place'] {
	const start_ms = bufferToFloat64(row.starts_ms)[index]!;
	const from_s = (start_ms - start) / 1000;
	return {
		from_s,
		to_s: from_s + bufferToFloat64(row.lengths_s)[index]!,
		start_ms,
		flagged: row.flagged[index] === 1
	};
}
