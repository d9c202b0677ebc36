import { captureFacts } from '../recording/capture-facts';
import type { ReadRemark } from '../recording/recording';
import { err, ok, type Result } from '../result';
import { systemOf, type AnalysisRequest } from './analysis-request';
import type { AnalysisDocument, RemarkEntry } from './document-schema';
import { rounded } from './rounded';
import { startInstant } from './start-instant';
import { trendPart } from './trend-part';
import { waveformPart } from './waveform-part';

const ONE_DAY_S = 86_400;

/**
 * Analyses one capture and says everything about it in one document; the same input gives the same document.
 * Reads samples from where they are, window by window; keeps no windows.
 * returns  the document, or a sentence that says what is needed
 */
export function analysisDocument(request: AnalysisRequest): Result<AnalysisDocument, string> {
	const { content, judged } = request;
	const start = startInstant(content.start, request.start, request.timeZone);
	const facts = captureFacts(content);
	if (judged && !start && facts.duration_s >= ONE_DAY_S)
		return err(
			'Limits are judged by days of the calendar, and nothing tells when this capture began; add --start.'
		);
	const part =
		content.kind === 'trend'
			? trendPart(content, request, start!.start_ms)
			: waveformPart(content, request, start?.start_ms ?? null);
	if (!part.ok) return part;
	const { intervals, channels, assessment, ...rest } = part.value;
	const rates = content.kind === 'trend' ? [] : content.segments.map((segment) => segment.samplingRate_Hz);
	const remarks = [...content.remarks, ...(start?.remarks ?? []), ...(start ? [] : [withoutStart])];
	return ok({
		recording: {
			format: content.format,
			startTime: start?.iso ?? null,
			samplingRate_Hz: rounded(rates[0] ?? NaN),
			duration_s: rounded(facts.duration_s) ?? 0,
			files: request.files,
			kind: content.kind,
			variant: content.variant,
			stationName: content.stationName,
			recorderName: content.recorderName,
			startTimeFrom: start?.from ?? null,
			timeZone: request.timeZone,
			sampleCount: facts.sampleCount,
			samplingRates_Hz: facts.samplingRate_Hz && {
				lowest: rounded(facts.samplingRate_Hz.lowest)!,
				highest: rounded(facts.samplingRate_Hz.highest)!
			},
			interval_s: rounded(facts.interval_s)
		},
		intervals,
		channels,
		...(assessment && { assessment }),
		schema: 'analysis/1',
		system: systemOf(request),
		systemFrom: judged?.facts.system ? 'point' : 'channels',
		...rest,
		remarks: [...remarks.map(readerRemark), ...rest.remarks]
	});
}

const withoutStart: ReadRemark = {
	severity: 'note',
	code: 'start-not-known',
	sentence:
		'Nothing tells when the capture began, so no ten-minute values of the clock were formed; state it with --start.'
};

function readerRemark({ severity, code, sentence }: ReadRemark): RemarkEntry {
	return { severity: severity === 'warning' ? 'warns' : 'notes', code, channel: null, sentence };
}
