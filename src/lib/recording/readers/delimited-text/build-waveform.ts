import { ok, type Result } from '../../../result';
import type { ReadProblem, ReadRemark, Recording, RecordingStart } from '../../recording';
import type { CaptureSource, SampleSource, SourceChannel } from '../../sample-source';
import { parseUnit } from '../../unit-text';
import { note, refuse, warning } from '../read-problem';
import type { PreambleFacts } from './preamble';
import type { ToldLayout, SampleColumn } from './table-layout-told';
import { evenSpacing, firstStepBack, localOf, type TimeAxis } from './time-axis';

/** One column of samples as told. */
export interface NamedSample {
	name: string;
	column: SampleColumn;
}

export interface WaveformTable {
	file: string;
	variant: string;
	layout: ToldLayout;
	columns: NamedSample[];
	samples: SampleSource;
	rowCount: number;
	/** [columns] samples without a value. */
	missing: ArrayLike<number>;
	axis: TimeAxis | null;
	preamble: PreambleFacts;
	/** Rate that the person stated, for tables that tell no time at all. */
	statedSamplingRate_Hz: number | null;
	remarks: ReadRemark[];
}

/** Columns of samples to a recording; times, headings and units as the table gives them or as they were told. */
export function buildWaveform(table: WaveformTable): Result<CaptureSource, ReadProblem> {
	const { file, columns, preamble, rowCount } = table;
	const remarks = [...table.remarks];
	const timeBase = timeBaseOf(table, remarks);
	if (!timeBase.ok) return timeBase;
	const channels = columns.map(channelOf);
	describeUnits(file, channels, remarks);
	describeMissing(table, remarks);
	return ok({
		kind: 'waveform',
		format: 'delimited text',
		variant: table.variant,
		stationName: preamble.stationName,
		recorderName: preamble.recorderName,
		nominalFrequency_Hz: preamble.nominalFrequency_Hz,
		start: startOf(table),
		sampleCount: rowCount,
		...timeBase.value,
		channels,
		statusChannelNames: [],
		remarks,
		samples: table.samples
	});
}

type TimeBase = Pick<Recording, 'segments' | 'timeStamps_s'>;

function timeBaseOf(table: WaveformTable, remarks: ReadRemark[]): Result<TimeBase, ReadProblem> {
	const { file, axis, layout, preamble, rowCount } = table;
	if (axis === null) return rateAlone(table, remarks);
	const even = evenSpacing(axis);
	if (even === null) {
		const backwards = firstStepBack(axis.times);
		if (backwards > 0)
			return refuse(
				'time-not-rising',
				file,
				`line ${layout.firstDataLine + backwards}`,
				`${file}, about line ${layout.firstDataLine + backwards}: a time later than in the row before was expected.`
			);
		remarks.push(
			warning(
				'uneven-time-stamps',
				`${file}: the times of the samples are not evenly spaced; the samples were kept with their own times.`
			)
		);
		return ok({ segments: [], timeStamps_s: axis.times.column(0) });
	}
	const stated = preamble.samplingRate;
	if (stated !== null && Math.abs(stated.rate_Hz / even.samplingRate_Hz - 1) > 0.01)
		remarks.push(
			warning(
				'rate-and-stamps-disagree',
				`${file}, line ${stated.line} states ${stated.rate_Hz} Hz, but the time column gives ${Number(even.samplingRate_Hz.toPrecision(6))} Hz; the time column was used. Check it against the recorder’s settings.`
			)
		);
	if (even.isCoarse)
		remarks.push(
			warning(
				'coarse-time-stamps',
				`${file}: the time column is written more coarsely than the samples follow each other; ${Number(even.samplingRate_Hz.toPrecision(6))} Hz is their average rate, and a missing sample would not show.`
			)
		);
	return ok(oneSegment(even.samplingRate_Hz, rowCount));
}

function oneSegment(samplingRate_Hz: number, toSample: number): TimeBase {
	return { segments: [{ samplingRate_Hz, fromSample: 0, toSample }], timeStamps_s: null };
}

/** Never assumed: the rate stands above the table, or a person states it. */
function rateAlone(table: WaveformTable, remarks: ReadRemark[]): Result<TimeBase, ReadProblem> {
	const { file, layout, rowCount, statedSamplingRate_Hz } = table;
	const told_Hz = layout.time.samplingRate_Hz;
	if (told_Hz !== null) return ok(oneSegment(told_Hz, rowCount));
	if (statedSamplingRate_Hz !== null) {
		remarks.push(
			note(
				'rate-stated-by-person',
				`${file} has no time column; the sampling rate of ${statedSamplingRate_Hz} Hz was entered by hand.`
			)
		);
		return ok(oneSegment(statedSamplingRate_Hz, rowCount));
	}
	return refuse(
		'sampling-rate-missing',
		file,
		`line ${layout.firstDataLine}`,
		`${file} has neither a time column nor a sampling rate above the table, which begins on line ${layout.firstDataLine}; add a column “Time (s)” or a line “Sampling rate (Hz)” in front. None is ever assumed.`
	);
}

/** Factor from the written value to the base unit. */
export function sampleFactor({ unit, factor }: SampleColumn): number {
	const { times, over } = parseUnit(unit);
	return (factor * times) / over;
}

function channelOf({ name, column }: NamedSample, index: number): SourceChannel {
	const { quantity, unit, phase } = column;
	return {
		index,
		name,
		phaseHint: phase,
		unitAsWritten: unit,
		baseUnit: quantity === 'other' ? parseUnit(unit).base : quantity === 'voltage' ? 'V' : 'A',
		quantity,
		valuesAre: 'unknown',
		ratio: null,
		range: null
	};
}

function describeUnits(file: string, channels: SourceChannel[], remarks: ReadRemark[]): void {
	const assumed = channels.filter(
		({ unitAsWritten, quantity }) => unitAsWritten === '' && quantity !== 'other'
	);
	if (assumed.length > 0)
		remarks.push(
			note(
				'unit-assumed',
				`${file} gives no unit for ${assumed.map(({ name, baseUnit }) => `${name} (taken as ${baseUnit})`).join(', ')}.`
			)
		);
	const open = channels.filter(({ unitAsWritten, quantity }) => unitAsWritten === '' && quantity === 'other');
	if (open.length > 0)
		remarks.push(
			note(
				'quantity-open',
				`${file} does not say what ${open.map(({ name }) => name).join(', ')} ${open.length === 1 ? 'is' : 'are'}: state it when mapping the channels.`
			)
		);
}

function describeMissing({ file, columns, missing, rowCount }: WaveformTable, remarks: ReadRemark[]): void {
	const gaps = columns.flatMap(({ name }, at) => (missing[at] === 0 ? [] : [`${name} ${missing[at]}`]));
	if (gaps.length === 0) return;
	remarks.push(
		warning(
			'missing-samples',
			`${file}: samples are missing (of ${rowCount}: ${gaps.slice(0, 6).join(', ')}); windows that contain them give no figures.`
		)
	);
}

/** The table's own clock, else a date above it; times counted from a trigger leave the start open. */
function startOf({ axis, preamble, layout }: WaveformTable): RecordingStart | null {
	if (axis?.start) return axis.start;
	const { start } = layout.time;
	if (start !== null) return { local: start, utcOffset_min: null };
	const stamp = preamble.date;
	if (stamp === null || stamp.day === null || stamp.second === null) return null;
	if (axis !== null && axis.first_s !== 0) return null;
	const digits = Number.isInteger(stamp.second) ? 0 : 6;
	return { local: localOf(stamp.day, stamp.second, digits), utcOffset_min: stamp.utcOffset_min };
}
