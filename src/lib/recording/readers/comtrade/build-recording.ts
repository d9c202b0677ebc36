import { ok, type Result } from '../../../result';
import { phaseHints } from '../../phase-hint';
import type { ReadProblem, ReadRemark, RecordingChannel, StatusActivity } from '../../recording';
import type { Phase } from '../../phase';
import { parseUnit, toBaseUnit, type ParsedUnit } from '../../unit-text';
import { counted, note, warning } from '../read-problem';
import type { AnalogueLine, ComtradeData, ComtradeHeader, ComtradeTiming } from './comtrade-header';
import type { CaptureSource, RecordingFrame, SourceChannel } from '../../sample-source';
import { timeBaseOf } from './time-base';

/** Limits that only restate what a 32-bit float can hold say nothing about the recorder's range. */
const WIDEST_LIMIT = 1e30;

/** Header and data to the one shape of a recording: scaled to volts and amperes, ratios left alone. */
export function buildSource(
	dataFile: string,
	header: ComtradeHeader,
	data: ComtradeData,
	fileRemarks: ReadRemark[]
): Result<CaptureSource, ReadProblem> {
	const frame = buildFrame(dataFile, header, data, fileRemarks);
	if (!frame.ok) return frame;
	const { missingCounts, statusActivity } = data.survey();
	const channels = frame.value.channels.map((channel, index) => ({
		...channel,
		missingCount: missingCounts[index] ?? 0
	}));
	const { remarks } = frame.value;
	describeMissing(dataFile, channels, data.sampleCount, remarks);
	describeStatus(dataFile, statusActivity, frame.value, remarks);
	return ok({ ...frame.value, channels, statusActivity, samples: data.samples });
}

/** Everything of a recording but its samples. */
function buildFrame(
	dataFile: string,
	header: ComtradeHeader,
	data: ComtradeTiming,
	fileRemarks: ReadRemark[]
): Result<RecordingFrame, ReadProblem> {
	const remarks = [...fileRemarks, ...header.remarks, ...data.remarks];
	describeCount(dataFile, header, data, remarks);
	const timeBase = timeBaseOf(dataFile, header, data, remarks);
	if (!timeBase.ok) return timeBase;
	const hints = phaseHints(header.analogues.map(({ phaseField, name }) => ({ field: phaseField, name })));
	describeSkew(header, remarks);
	return ok({
		kind: 'waveform',
		format: 'COMTRADE',
		variant: `${header.revision} ${header.dataFormat}`,
		stationName: header.stationName,
		recorderName: header.recorderName,
		nominalFrequency_Hz: header.nominalFrequency_Hz,
		start: header.start,
		sampleCount: data.sampleCount,
		...timeBase.value,
		channels: header.analogues.map((analogue, index) => channelOf(analogue, index, hints[index] ?? null)),
		statusChannelNames: header.statuses.map(({ name }) => name),
		remarks
	});
}

function channelOf(analogue: AnalogueLine, index: number, phaseHint: Phase | null): SourceChannel {
	const unit = parseUnit(analogue.unit);
	const channel: SourceChannel = {
		index,
		name: analogue.name,
		phaseHint,
		unitAsWritten: analogue.unit,
		baseUnit: unit.base,
		quantity: unit.quantity,
		valuesAre: analogue.valuesAre,
		ratio: analogue.ratio,
		range: rangeOf(analogue, unit)
	};
	return analogue.skew_us === 0 ? channel : { ...channel, skew_s: analogue.skew_us / 1e6 };
}

function rangeOf(analogue: AnalogueLine, unit: ParsedUnit): RecordingChannel['range'] {
	const { minimum, maximum, a, b } = analogue;
	if (minimum === null || maximum === null || minimum >= maximum || a === 0) return null;
	if (Math.abs(minimum) > WIDEST_LIMIT || Math.abs(maximum) > WIDEST_LIMIT) return null;
	const ends = [toBaseUnit(a * minimum + b, unit), toBaseUnit(a * maximum + b, unit)];
	return { min: Math.min(...ends), max: Math.max(...ends) };
}

function describeCount(
	dataFile: string,
	header: ComtradeHeader,
	data: ComtradeTiming,
	remarks: ReadRemark[]
): void {
	if (header.announced === null || header.announced.sampleCount === data.sampleCount) return;
	const { sampleCount, line } = header.announced;
	const difference = sampleCount - data.sampleCount;
	const share = `${Number(((100 * Math.abs(difference)) / sampleCount).toPrecision(3))} %`;
	const outcome =
		difference > 0
			? `${counted(difference, 'sample')} (${share}) are missing at the end`
			: `${counted(-difference, 'sample')} more than announced were read at the last rate`;
	remarks.push(
		warning(
			'sample-count-mismatch',
			`${dataFile} holds ${counted(data.sampleCount, 'sample')}, but ${header.file}, line ${line} announces ${sampleCount}; ${outcome}.`
		)
	);
}

function describeMissing(
	dataFile: string,
	channels: { name: string; missingCount: number }[],
	sampleCount: number,
	remarks: ReadRemark[]
): void {
	const gaps = channels.filter(({ missingCount }) => missingCount > 0);
	if (gaps.length === 0) return;
	const list = gaps.slice(0, 6).map(({ name, missingCount }) => `${name} ${missingCount}`);
	const rest = gaps.length > 6 ? ` and ${gaps.length - 6} more channels` : '';
	remarks.push(
		warning(
			'missing-samples',
			`${dataFile}: samples are missing (of ${sampleCount}: ${list.join(', ')}${rest}); windows that contain them give no figures.`
		)
	);
}

/** Status channels named in one sentence. */
const STATUSES_NAMED = 6;

/** Which status channels changed and when, and which stayed away from their normal state. */
function describeStatus(
	dataFile: string,
	activity: readonly StatusActivity[],
	frame: RecordingFrame,
	remarks: ReadRemark[]
): void {
	const list = (names: string[]) =>
		names.length > STATUSES_NAMED
			? `${names.slice(0, STATUSES_NAMED).join(', ')} and ${names.length - STATUSES_NAMED} more`
			: names.join(', ');
	const nameOf = ({ name }: StatusActivity) => (name === '' ? 'one without a name' : name);
	const changed = activity.filter(({ changeCount }) => changeCount > 0);
	if (changed.length > 0) {
		const changes = changed.map((status) => {
			const sample = status.firstChangeAtSample ?? 0;
			const after_s = Number(timeOfSample_s(frame, sample).toPrecision(4));
			const often = status.changeCount === 1 ? 'once' : `${status.changeCount} times, first`;
			return `${nameOf(status)} ${often} after ${after_s} s (sample ${sample + 1}, to ${1 - (status.startsAs ?? 0)})`;
		});
		remarks.push(
			note(
				'status-changed',
				`${dataFile}: of ${counted(activity.length, 'status channel')} ${changed.length === 1 ? 'one changed' : `${changed.length} changed`}: ${list(changes)}.`
			)
		);
	}
	const abnormal = activity.filter(
		({ normalState, startsAs, changeCount }) =>
			changeCount === 0 && normalState !== null && startsAs !== null && startsAs !== normalState
	);
	if (abnormal.length === 0) return;
	remarks.push(
		note(
			'status-not-normal',
			`${dataFile}: ${abnormal.length === 1 ? 'one status channel is' : `${abnormal.length} status channels are`} away from the normal state throughout: ${list(abnormal.map(nameOf))}.`
		)
	);
}

/** Seconds from sample 0 to another one. */
function timeOfSample_s({ segments, timeStamps_s }: RecordingFrame, sample: number): number {
	if (timeStamps_s) return timeStamps_s[sample] ?? NaN;
	let elapsed_s = 0;
	for (const { samplingRate_Hz, fromSample, toSample, gapBefore_s } of segments) {
		elapsed_s += gapBefore_s ?? 0;
		if (sample < toSample) return elapsed_s + (sample - fromSample) / samplingRate_Hz;
		elapsed_s += (toSample - fromSample) / samplingRate_Hz;
	}
	return elapsed_s;
}

function describeSkew(header: ComtradeHeader, remarks: ReadRemark[]): void {
	const skewed = header.analogues.filter(({ skew_us }) => skew_us !== 0);
	if (skewed.length === 0) return;
	const list = skewed.slice(0, 6).map(({ name, skew_us }) => `${name} ${skew_us} µs`);
	remarks.push(
		note(
			'skew',
			`${header.file} states that ${skewed.length === 1 ? 'one channel was' : `${skewed.length} channels were`} sampled later than the others (${list.join(', ')}${skewed.length > 6 ? ', …' : ''}); angles and powers are computed for one instant.`
		)
	);
}
