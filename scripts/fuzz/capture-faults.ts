import type { CaptureHandle } from '../../src/lib/recording/capture-handle';
import { captureFacts } from '../../src/lib/recording/capture-facts';
import { suggestMappings, type SuggestionPoint } from '../../src/lib/recording/channel-suggestion';
import { loadSamples } from '../../src/lib/recording/load-samples';
import { memoryScratch } from '../../src/lib/recording/memory-scratch';
import { DEFAULT_PHASE_NAMES } from '../../src/lib/recording/phase';
import { openCaptureParts, readCapture, type OpenedCapture } from '../../src/lib/recording/read-capture';
import type {
	CaptureContent,
	CaptureFile,
	ReadProblem,
	Recording,
	Trend
} from '../../src/lib/recording/recording';

const POINT: SuggestionPoint = {
	system: 'four-wire',
	phaseNames: DEFAULT_PHASE_NAMES,
	voltageTransformer: { primary: 10_000, secondary: 100 },
	currentTransformer: null
};

/** A file in memory that refuses to be read beyond its end, as a file on disk does. */
export function strictHandle({ name, bytes }: CaptureFile): CaptureHandle {
	return {
		name,
		size_bytes: bytes.length,
		read(offset_bytes, into) {
			if (
				!Number.isSafeInteger(offset_bytes) ||
				offset_bytes < 0 ||
				offset_bytes + into.length > bytes.length
			)
				throw new Error(`read ${into.length} bytes at ${offset_bytes} of ${name}, which has ${bytes.length}`);
			into.set(bytes.subarray(offset_bytes, offset_bytes + into.length));
		}
	};
}

/**
 * Reads files as a whole and piece by piece, up to the facts and suggestions that a person sees first.
 * returns  what is wrong with the outcome, one sentence each
 */
export function captureFaults(files: CaptureFile[]): string[] {
	const opened = openCaptureParts(files.map(strictHandle), { scratch: memoryScratch() });
	const read = readCapture(files);
	const names = files.map(({ name }) => name);
	const faults: string[] = [];
	if (!opened.ok) faults.push(...refusalFaults(opened.problem, names));
	else
		for (const { content } of opened.value) {
			captureFacts(content);
			suggestMappings(content, POINT);
			faults.push(...contentFaults(inMemory(content)));
		}
	if (!read.ok) faults.push(...refusalFaults(read.problem, names));
	if (opened.ok !== read.ok)
		faults.push(`read as a whole it is ${told(read)}, piece by piece ${told(opened)}`);
	else if (opened.ok && read.ok && opened.value.length === 1)
		faults.push(...differences(inMemory(opened.value[0]!.content), read.value));
	else if (!opened.ok && !read.ok && opened.problem.sentence !== read.problem.sentence)
		faults.push(`two refusals: “${read.problem.sentence}” and “${opened.problem.sentence}”`);
	return faults;
}

function told(result: { ok: boolean; problem?: ReadProblem }): string {
	return result.ok ? 'accepted' : `refused (“${result.problem?.sentence ?? ''}”)`;
}

function inMemory(content: OpenedCapture): CaptureContent {
	return content.kind === 'waveform' ? loadSamples(content) : content;
}

/** A refusal names a file that was given, the place, and what was expected, in a sentence for people. */
export function refusalFaults(
	{ file, place, sentence, code }: ReadProblem,
	names: readonly string[]
): string[] {
	const faults = sentenceFaults(sentence);
	if (code === '') faults.push('the refusal has no code');
	if (names.length > 0 && !names.includes(file))
		faults.push(`the refusal names ${JSON.stringify(file)}, which was not given`);
	if (!sentence.includes(file)) faults.push(`the sentence does not name ${file}: ${sentence}`);
	if (place !== null && !sentence.includes(place))
		faults.push(`the sentence does not name ${place}: ${sentence}`);
	return faults;
}

/** Sentences longer than this are no help to anybody. */
const LONGEST_SENTENCE = 1000;

function sentenceFaults(sentence: string): string[] {
	const faults: string[] = [];
	if (!/[.”]$/.test(sentence)) faults.push(`no full stop: ${sentence.slice(-200)}`);
	if (/\bundefined\b|\[object|\bNaN\b|Infinity/.test(sentence.replace(/“[^”]*”/g, '')))
		faults.push(`a value of the program in the sentence: ${sentence.slice(0, 300)}`);
	// eslint-disable-next-line no-control-regex -- what must not be there
	if (/[\u0000-\u001f\u007f]/.test(sentence))
		faults.push(`control characters in ${JSON.stringify(sentence.slice(0, 300))}`);
	if (sentence.length > LONGEST_SENTENCE) faults.push(`a sentence of ${sentence.length} characters`);
	return faults;
}

function contentFaults(content: CaptureContent): string[] {
	const faults = content.remarks.flatMap(({ sentence }) => sentenceFaults(sentence));
	return [...faults, ...(content.kind === 'waveform' ? recordingFaults(content) : trendFaults(content))];
}

function recordingFaults({ sampleCount, channels, segments, timeStamps_s }: Recording): string[] {
	const faults: string[] = [];
	if (!(sampleCount >= 1)) faults.push(`a recording of ${sampleCount} samples`);
	if (channels.length === 0) faults.push('a recording without channels');
	for (const [index, channel] of channels.entries()) {
		if (channel.index !== index) faults.push(`channel ${index} says that it is ${channel.index}`);
		if (channel.samples.length !== sampleCount)
			faults.push(`${channel.samples.length} samples of ${channel.name} instead of ${sampleCount}`);
		if (channel.samples.some((value) => Math.abs(value) === Infinity))
			faults.push(`an infinite sample of ${channel.name}`);
	}
	if (timeStamps_s && timeStamps_s.length !== sampleCount)
		faults.push(`${timeStamps_s.length} time stamps of ${sampleCount} samples`);
	if (!timeStamps_s && segments.length === 0) faults.push('neither rates nor time stamps');
	let at = 0;
	for (const { samplingRate_Hz, fromSample, toSample, gapBefore_s } of segments) {
		if (!(samplingRate_Hz > 0) || samplingRate_Hz === Infinity)
			faults.push(`a rate of ${samplingRate_Hz} Hz`);
		if (gapBefore_s !== undefined && !Number.isFinite(gapBefore_s)) faults.push(`a gap of ${gapBefore_s} s`);
		if (fromSample !== at || !(toSample > fromSample))
			faults.push(`a segment from ${fromSample} to ${toSample} after ${at}`);
		at = toSample;
	}
	if (segments.length > 0 && at !== sampleCount)
		faults.push(`segments end at ${at} of ${sampleCount} samples`);
	return faults;
}

function trendFaults({ interval_s, intervalStarts_s, series, flagged }: Trend): string[] {
	const faults: string[] = [];
	const count = intervalStarts_s.length;
	if (count === 0) faults.push('a trend without intervals');
	if (series.length === 0) faults.push('a trend without series');
	if (!(interval_s > 0) || interval_s === Infinity) faults.push(`intervals of ${interval_s} s`);
	if (flagged && flagged.length !== count) faults.push(`${flagged.length} flags of ${count} intervals`);
	for (const { name, values } of series) {
		if (values.length !== count) faults.push(`${values.length} values of ${name} in ${count} intervals`);
		if (values.some((value) => Math.abs(value) === Infinity)) faults.push(`an infinite value of ${name}`);
	}
	for (let i = 0; i < count; i++)
		if (
			!Number.isFinite(intervalStarts_s[i]) ||
			(i > 0 && !(intervalStarts_s[i]! > intervalStarts_s[i - 1]!))
		)
			return [
				...faults,
				`interval ${i} starts at ${intervalStarts_s[i]} s after ${intervalStarts_s[i - 1]} s`
			];
	return faults;
}

/** Where two readings of the same files differ; samples are compared digit for digit. */
function differences(one: CaptureContent, other: CaptureContent): string[] {
	const path = firstDifference(one, other, '');
	return path === null ? [] : [`read as a whole and piece by piece it differs at ${path}`];
}

function firstDifference(one: unknown, other: unknown, path: string): string | null {
	if (Object.is(one, other)) return null;
	if (typeof one !== 'object' || typeof other !== 'object' || one === null || other === null)
		return path || 'the top';
	if (ArrayBuffer.isView(one) && ArrayBuffer.isView(other)) {
		const left = one as Float64Array;
		const right = other as Float64Array;
		if (left.length !== right.length) return `${path}.length`;
		for (let i = 0; i < left.length; i++) if (!Object.is(left[i], right[i])) return `${path}[${i}]`;
		return null;
	}
	const keys = new Set([...Object.keys(one), ...Object.keys(other)]);
	for (const key of keys) {
		const found = firstDifference(
			(one as Record<string, unknown>)[key],
			(other as Record<string, unknown>)[key],
			`${path}.${key}`
		);
		if (found !== null) return found;
	}
	return null;
}
