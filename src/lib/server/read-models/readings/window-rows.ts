import type { Phase } from '../../../recording/phase';
import type { WaveformSummary } from '../../analysis/analysis-summary';
import { INTERVAL_COLUMNS, joinParts } from '../../analysis/join-parts';
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
	/** Taken together, every n-th window stands for its neighbours; 1 for all of them. */
	everyNth: number;
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
	const analyses = analysesRepository(db, scope);
	const counts = await analyses.windowCountsOf(analysis.id);
	const window =
		askedWindow !== null && askedWindow >= 1 && askedWindow <= summary.windowCount ? askedWindow : null;
	const at = window === null ? null : placeInParts(counts, window - 1);
	const rows =
		at !== null || counts.length === 1
			? await analyses.wholeSeriesOf(analysis.id, 'window', at?.part ?? 0)
			: await everyNthWindow(analyses, analysis.id, counts);
	const first = rows.sort(byQuantityAndPhase)[0];
	if (!first) throw new Error(`analysis ${analysis.id} has no windows`);
	return {
		rows,
		windows: at === null ? unflaggedWindows(first) : [at.index],
		choice: {
			cyclesPerWindow: summary.cyclesPerWindow,
			windowCount: summary.windowCount,
			window,
			everyNth: at === null && counts.length > 1 ? stepFor(counts) : 1,
			place: at === null ? null : placeOf(first, at.index, captureStart_ms(analysis))
		}
	};
}

/** Windows that are read at most for a view of a whole capture; beyond that every n-th stands for its neighbours. */
const MOST_WINDOWS = 3200;

function stepFor(counts: readonly number[]): number {
	return Math.ceil(counts.reduce((sum, count) => sum + count, 0) / MOST_WINDOWS);
}

function placeInParts(counts: readonly number[], index: number): { part: number; index: number } {
	let before = 0;
	for (const [part, count] of counts.entries()) {
		if (index < before + count) return { part, index: index - before };
		before += count;
	}
	throw new RangeError(`window ${index + 1} of ${before}`);
}

/** The windows of a long capture thinned evenly, part by part, so that only one part is held at a time. */
async function everyNthWindow(
	analyses: ReturnType<typeof analysesRepository>,
	analysisId: string,
	counts: readonly number[]
): Promise<AnalysisSeriesRow[]> {
	const step = stepFor(counts);
	const thinned: AnalysisSeriesRow[][] = [];
	for (const part of counts.keys()) {
		const rows = await analyses.wholeSeriesOf(analysisId, 'window', part);
		thinned.push(rows.map((row) => thinRow(row, step)));
	}
	const parts = thinned.flat();
	const channels = thinned[0] ?? [];
	return channels.map((channel) =>
		joinParts(parts.filter((row) => row.channel_index === channel.channel_index))
	);
}

function thinRow(row: AnalysisSeriesRow, step: number): AnalysisSeriesRow {
	const kept = Math.ceil(row.interval_count / step);
	const thin = (bytes: Buffer) => {
		const each = bytes.byteLength / row.interval_count;
		return Buffer.concat(
			Array.from({ length: kept }, (_, i) => bytes.subarray(i * step * each, (i * step + 1) * each))
		);
	};
	const out = { ...row, interval_count: kept };
	for (const column of INTERVAL_COLUMNS) {
		const bytes = row[column];
		if (bytes !== null) out[column] = thin(bytes);
	}
	return out;
}

function unflaggedWindows(row: AnalysisSeriesRow): number[] {
	const all = Array.from({ length: row.interval_count }, (_, i) => i);
	const valid = all.filter((i) => row.flagged[i] !== 1);
	return valid.length > 0 ? valid : all;
}

/** Instant of sample 0. */
export function captureStart_ms(analysis: AnalysisRow): number {
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
