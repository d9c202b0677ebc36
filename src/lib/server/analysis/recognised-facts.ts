import type { CaptureHandle } from '../../recording/capture-handle';
import { captureFacts } from '../../recording/capture-facts';
import { suggestMappings } from '../../recording/channel-suggestion';
import type { MeasuringInstrument } from '../../recording/measuring-input';
import { guessTable, type OpenedCapture } from '../../recording/read-capture';
import { startToUtc_ms } from '../../recording/recording-start';
import type { CaptureSurvey, StoredFacts } from '../read-models/capture-list';

/** The start instant, where the file alone tells it or the site's zone completes it. */
export function startedAt(content: OpenedCapture, survey: Pick<CaptureSurvey, 'timeZone'>): string | null {
	if (!content.start) return null;
	return new Date(startToUtc_ms(content.start, survey.timeZone).utc_ms).toISOString();
}

/**
 * What was recognised, with a suggestion for every channel or column.
 * instrument  what recorded it, for the ratios of its sensors; null = not known
 */
export function factsOfContent(
	content: OpenedCapture,
	survey: Pick<CaptureSurvey, 'facts'>,
	instrument: MeasuringInstrument | null
): StoredFacts {
	return {
		...captureFacts(content, survey.facts.nominalFrequency_Hz),
		suggestions: suggestMappings(content, survey.facts, instrument)
	};
}

/** Of a table that nobody has told the meaning of: how many columns there are, and nothing more. */
export function factsOfUntoldTable(files: readonly CaptureHandle[]): StoredFacts {
	const columnCount = guessTable(files)?.layout.columns.length ?? 0;
	return {
		kind: 'trend',
		format: 'delimited text',
		variant: 'columns not told yet',
		stationName: '',
		recorderName: '',
		channelCount: columnCount,
		channels: [],
		samplingRate_Hz: null,
		interval_s: null,
		sampleCount: 0,
		duration_s: 0,
		nominalFrequency_Hz: null,
		start: null,
		valuesAre: 'unknown',
		highestOrder: null,
		remarks: [],
		suggestions: []
	};
}
