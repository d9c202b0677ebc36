import { ok, type Result } from '../../../result';
import { phaseHints } from '../../phase-hint';
import type { ReadProblem, ReadRemark, Recording, RecordingChannel } from '../../recording';
import type { Phase } from '../../phase';
import { parseUnit, toBaseUnit, type ParsedUnit } from '../../unit-text';
import { counted, note, warning } from '../read-problem';
import type { AnalogueLine, ComtradeData, ComtradeHeader, ComtradeTiming } from './comtrade-header';
import type { RecordingFrame, SourceChannel } from '../../sample-source';
import { timeBaseOf } from './time-base';

/** Limits that only restate what a 32-bit float can hold say nothing about the recorder's range. */
const WIDEST_LIMIT = 1e30;

/** Header and data to the one shape of a recording: scaled to volts and amperes, ratios left alone. */
export function buildRecording(
	dataFile: string,
	header: ComtradeHeader,
	data: ComtradeData,
	fileRemarks: ReadRemark[]
): Result<Recording, ReadProblem> {
	const frame = buildFrame(dataFile, header, data, fileRemarks);
	if (!frame.ok) return frame;
	const channels = header.analogues.map((analogue, index): RecordingChannel => {
		const unit = parseUnit(analogue.unit);
		const samples = data.raw[index] as Float64Array;
		// value = a·x + b in the unit as written, then to V or A: two steps, so that each rounds as the standard's own formula does.
		for (let sample = 0; sample < samples.length; sample++)
			samples[sample] = toBaseUnit(analogue.a * (samples[sample] as number) + analogue.b, unit);
		return { ...frame.value.channels[index]!, samples };
	});
	describeMissing(dataFile, channels, data.sampleCount, frame.value.remarks);
	return ok({ ...frame.value, channels });
}

/** Everything of a recording but its samples. */
export function buildFrame(
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
		statusChannelNames: header.statusNames,
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
	channels: RecordingChannel[],
	sampleCount: number,
	remarks: ReadRemark[]
): void {
	const gaps = channels
		.map(({ name, samples }) => ({ name, missing: countMissing(samples) }))
		.filter(({ missing }) => missing > 0);
	if (gaps.length === 0) return;
	const list = gaps.slice(0, 6).map(({ name, missing }) => `${name} ${missing}`);
	const rest = gaps.length > 6 ? ` and ${gaps.length - 6} more channels` : '';
	remarks.push(
		warning(
			'missing-samples',
			`${dataFile}: samples are missing (of ${sampleCount}: ${list.join(', ')}${rest}); windows that contain them give no figures.`
		)
	);
}

function countMissing(samples: Float64Array): number {
	let missing = 0;
	for (let sample = 0; sample < samples.length; sample++)
		if (Number.isNaN(samples[sample] as number)) missing++;
	return missing;
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
