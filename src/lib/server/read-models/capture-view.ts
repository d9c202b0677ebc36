import { z } from 'zod';
import { formatPhase, type Phase } from '../../recording/phase';
import {
	storedPyramid,
	type PyramidTiming,
	type StoredPyramid
} from '../../recording/pyramid/pyramid-layout';
import { parseSettings } from '../analysis/capture-settings';
import { parseSummary, type SummaryEvent } from '../analysis/analysis-summary';
import { bufferToFloat64 } from '../analysis/series-codec';
import type { Db } from '../db/database';
import type { AnalysisRow, CaptureRow } from '../db/rows';
import { analysesRepository } from '../repositories/analyses.repository';
import type { Scope } from '../repositories/scope';
import type { CaptureSurvey, StoredFacts } from './capture-list';
import { captureStart_ms } from './readings/window-rows';

/** One analogue channel as the viewer draws it: recorded value × toPrimary, in `unit`. */
export interface ViewChannel {
	index: number;
	name: string;
	quantity: 'voltage' | 'current' | 'other';
	phase: Phase | null;
	/** "A", "A–B"; the channel's name where its conductor is not known. */
	label: string;
	unit: string;
	toPrimary: number;
	/** Where quantity, conductor and factor come from. */
	from: 'confirmed' | 'suggested' | 'recorded';
}

export interface ViewEvent extends Omit<SummaryEvent, 'phases'> {
	phases: string[];
}

/** What the viewer has to know before it fetches the first tile. */
export interface CaptureView {
	captureId: string;
	name: string;
	/** Instant of sample 0; null when nobody has told it. */
	start_ms: number | null;
	timeZone: string;
	nominalFrequency_Hz: number;
	sampleCount: number;
	duration_s: number;
	/** Null while least and greatest values have not been made. */
	pyramid: { key: string; levelCount: number; timing: PyramidTiming } | null;
	channels: ViewChannel[];
	isAnalysed: boolean;
	/** Intervals of the analysis that an event flags, seconds after sample 0, joined where they adjoin. */
	flagged: { from_s: number; to_s: number }[];
	/** Null where the analysis kept none, or there is no analysis. */
	events: ViewEvent[] | null;
}

export function parsePyramid(capture: CaptureRow): { sha256: string; stored: StoredPyramid } | null {
	if (capture.pyramid_sha256 === null || capture.pyramid_json === null) return null;
	return { sha256: capture.pyramid_sha256, stored: storedPyramid.parse(JSON.parse(capture.pyramid_json)) };
}

function viewChannels(capture: CaptureRow, facts: StoredFacts, survey: CaptureSurvey): ViewChannel[] {
	const settings = capture.mappings_json === null ? null : parseSettings(capture.mappings_json);
	const confirmed = settings?.kind === 'waveform' ? settings.channels : [];
	return facts.channels.map((channel, index) => {
		const own = confirmed.find((mapping) => mapping.channelIndex === index);
		const suggested = facts.suggestions.find((one) => one.channelIndex === index)?.mapping ?? null;
		const mapping = own ?? suggested;
		const quantity = mapping?.quantity ?? channel.quantity;
		return {
			index,
			name: channel.name,
			quantity,
			phase: mapping?.phase ?? null,
			label: mapping ? formatPhase(mapping.phase, survey.facts.phaseNames) : channel.name,
			unit: quantity === 'voltage' ? 'V' : quantity === 'current' ? 'A' : channel.unitAsWritten,
			toPrimary: mapping?.toPrimary ?? 1,
			from: own ? 'confirmed' : suggested ? 'suggested' : 'recorded'
		};
	});
}

/** More stretches than this are joined across what lies between them: they could not be told apart. */
const MOST_STRETCHES = 5000;

async function flaggedStretches(db: Db, scope: Scope, analysis: AnalysisRow, reference: number) {
	const rows = await db('analysis_series')
		.where({
			practice_id: scope.practiceId,
			analysis_id: analysis.id,
			interval: 'window',
			channel_index: reference
		})
		.orderBy('part')
		.select('starts_ms', 'lengths_s', 'flagged');
	const start_ms = captureStart_ms(analysis);
	let stretches: { from_s: number; to_s: number }[] = [];
	for (const row of rows) {
		const starts = bufferToFloat64(row.starts_ms);
		const lengths = bufferToFloat64(row.lengths_s);
		for (let i = 0; i < starts.length; i++) {
			if (row.flagged[i] !== 1) continue;
			const from_s = (starts[i]! - start_ms) / 1000;
			const to_s = from_s + lengths[i]!;
			const last = stretches.at(-1);
			if (last && from_s - last.to_s < 1e-3) last.to_s = to_s;
			else stretches.push({ from_s, to_s });
		}
	}
	if (stretches.length > MOST_STRETCHES) {
		const step = Math.ceil(stretches.length / MOST_STRETCHES);
		stretches = stretches.flatMap((stretch, i) =>
			i % step === 0 ? [{ ...stretch, to_s: stretches[Math.min(stretches.length, i + step) - 1]!.to_s }] : []
		);
	}
	return stretches;
}

/** What the viewer of a waveform capture starts from. */
export async function captureView(
	db: Db,
	scope: Scope,
	survey: CaptureSurvey,
	capture: CaptureRow
): Promise<CaptureView> {
	const facts = JSON.parse(capture.facts_json) as StoredFacts;
	const pyramid = parsePyramid(capture);
	const analysis = await analysesRepository(db, scope).currentOf(capture.id);
	const summary = analysis ? parseSummary(analysis.summary_json) : null;
	const isAnalysed = analysis !== null && summary?.kind === 'waveform';
	return {
		captureId: capture.id,
		name: capture.name,
		start_ms: capture.started_at === null ? null : Date.parse(capture.started_at),
		timeZone: survey.timeZone,
		nominalFrequency_Hz: survey.facts.nominalFrequency_Hz,
		sampleCount: facts.sampleCount,
		duration_s: pyramid?.stored.layout.duration_s ?? facts.duration_s,
		pyramid: pyramid && {
			key: pyramid.sha256,
			levelCount: pyramid.stored.layout.levelCount,
			timing: pyramid.stored.layout.timing
		},
		channels: viewChannels(capture, facts, survey),
		isAnalysed,
		flagged:
			isAnalysed && summary.flaggedCount > 0
				? await flaggedStretches(db, scope, analysis, summary.referenceChannelIndex)
				: [],
		events:
			isAnalysed && summary.events
				? summary.events.map((event) => ({
						...event,
						phases: event.phases.map((phase) => formatPhase(phase, survey.facts.phaseNames))
					}))
				: null
	};
}

/** The harmonic window over an instant, one line per mapped channel. */
export interface WindowAt {
	/** Counted from 1, as the readings page counts. */
	window: number;
	from_s: number;
	to_s: number;
	flagged: boolean;
	channels: {
		channelIndex: number;
		quantity: 'voltage' | 'current';
		phase: Phase;
		label: string;
		/** V or A. */
		rms: number | null;
		/** Index = order, 0 to 50: rms of the harmonic subgroup in V or A. */
		subgroups: (number | null)[];
	}[];
}

const partHead = z.array(
	z.object({ part: z.number(), interval_count: z.number(), first: z.instanceof(Uint8Array) })
);
const shown = (value: number) => (Number.isFinite(value) ? Number(value.toPrecision(6)) : null);

/** Null where no window of the analysis covers that time: a gap, or an end of the capture. */
export async function windowAt(
	db: Db,
	scope: Scope,
	survey: CaptureSurvey,
	analysis: AnalysisRow,
	at_s: number
): Promise<WindowAt | null> {
	const summary = parseSummary(analysis.summary_json);
	if (summary.kind !== 'waveform') return null;
	const at_ms = captureStart_ms(analysis) + 1000 * at_s;
	const heads = partHead.parse(
		await db('analysis_series')
			.where({
				practice_id: scope.practiceId,
				analysis_id: analysis.id,
				interval: 'window',
				channel_index: summary.referenceChannelIndex
			})
			.orderBy('part')
			.select('part', 'interval_count', db.raw('substr(starts_ms, 1, 8) as first'))
	);
	const which = heads.findLastIndex(({ first }) => bufferToFloat64(first)[0]! <= at_ms);
	const head = heads[which];
	if (!head) return null;
	const rows = await analysesRepository(db, scope).wholeSeriesOf(analysis.id, 'window', head.part);
	const reference = rows.find((row) => row.channel_index === summary.referenceChannelIndex);
	if (!reference) return null;
	const starts = bufferToFloat64(reference.starts_ms);
	const index = starts.findLastIndex((start) => start <= at_ms);
	const length_s = bufferToFloat64(reference.lengths_s)[index] ?? NaN;
	if (index < 0 || at_ms >= starts[index]! + 1000 * length_s) return null;
	const from_s = (starts[index]! - captureStart_ms(analysis)) / 1000;
	const before = heads.slice(0, which).reduce((sum, { interval_count }) => sum + interval_count, 0);
	return {
		window: before + index + 1,
		from_s,
		to_s: from_s + length_s,
		flagged: reference.flagged[index] === 1,
		channels: rows.flatMap((row) => {
			if (row.channel_index === null) return [];
			const stride = row.subgroups.byteLength / 8 / row.interval_count;
			const bytes = row.subgroups.subarray(8 * index * stride, 8 * (index + 1) * stride);
			return [
				{
					channelIndex: row.channel_index,
					quantity: row.quantity,
					phase: row.phase,
					label: formatPhase(row.phase, survey.facts.phaseNames),
					rms: shown(bufferToFloat64(row.rms)[index]!),
					subgroups: Array.from(bufferToFloat64(bytes), shown)
				}
			];
		})
	};
}
