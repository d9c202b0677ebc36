import { ok, type Result } from '../../../result';
import { isoLocal } from '../../calendar';
import { phaseHints } from '../../phase-hint';
import type { ReadProblem, ReadRemark, Recording, RecordingChannel, RecordingStart } from '../../recording';
import { parseUnit, toBaseUnit } from '../../unit-text';
import { note, refuse, warning } from '../read-problem';
import type { PreambleFacts } from './preamble';
import type { TableBody } from './table-body';
import type { TableColumn } from './table-columns';
import { evenSpacing, type TimeAxis } from './time-axis';

export interface WaveformTable {
	file: string;
	variant: string;
	columns: TableColumn[];
	body: TableBody;
	axis: TimeAxis | null;
	preamble: PreambleFacts;
	/** Rate that the person stated, for tables that tell no time at all. */
	statedSamplingRate_Hz: number | null;
	remarks: ReadRemark[];
}

/** Columns of samples to a recording; times, headings and units as the table gives them. */
export function buildWaveform(table: WaveformTable): Result<Recording, ReadProblem> {
	const { file, columns, body, preamble } = table;
	const remarks = [...table.remarks, ...body.remarks, ...(table.axis?.remarks ?? [])];
	if (columns.length === 0)
		return refuse(
			'no-channels',
			file,
			`line ${body.firstLine}`,
			`${file} has no column of samples beside the time; at least one column of voltages or currents was expected from line ${body.firstLine} on.`
		);
	const timeBase = timeBaseOf(table, remarks);
	if (!timeBase.ok) return timeBase;
	const hints = phaseHints(columns.map(({ name }) => ({ field: '', name })));
	const channels = columns.map((column, index) =>
		channelOf(column, index, hints[index] ?? null, body.values[column.index] as Float64Array)
	);
	describeUnits(file, channels, remarks);
	describeMissing(file, channels, body.rowCount, remarks);
	return ok({
		kind: 'waveform',
		format: 'delimited text',
		variant: table.variant,
		stationName: preamble.stationName,
		recorderName: preamble.recorderName,
		nominalFrequency_Hz: preamble.nominalFrequency_Hz,
		start: startOf(table),
		sampleCount: body.rowCount,
		...timeBase.value,
		channels,
		statusChannelNames: [],
		remarks
	});
}

type TimeBase = Pick<Recording, 'segments' | 'timeStamps_s'>;

function timeBaseOf(table: WaveformTable, remarks: ReadRemark[]): Result<TimeBase, ReadProblem> {
	const { file, axis, body, preamble } = table;
	if (axis === null) return rateAlone(table, remarks);
	const even = evenSpacing(axis);
	if (even === null) {
		const backwards = axis.times_s.findIndex(
			(time, row) => row > 0 && time <= (axis.times_s[row - 1] as number)
		);
		if (backwards > 0)
			return refuse(
				'time-not-rising',
				file,
				`line ${body.firstLine + backwards}`,
				`${file}, about line ${body.firstLine + backwards}: a time later than in the row before was expected.`
			);
		remarks.push(
			warning(
				'uneven-time-stamps',
				`${file}: the times of the samples are not evenly spaced; the samples were kept with their own times.`
			)
		);
		return ok({ segments: [], timeStamps_s: axis.times_s });
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
	return ok(oneSegment(even.samplingRate_Hz, body.rowCount));
}

function oneSegment(samplingRate_Hz: number, toSample: number): TimeBase {
	return { segments: [{ samplingRate_Hz, fromSample: 0, toSample }], timeStamps_s: null };
}

/** Never assumed: the rate stands above the table, or a person states it. */
function rateAlone(table: WaveformTable, remarks: ReadRemark[]): Result<TimeBase, ReadProblem> {
	const { file, body, preamble, statedSamplingRate_Hz } = table;
	if (preamble.samplingRate !== null) {
		const { rate_Hz, line } = preamble.samplingRate;
		remarks.push(
			note('rate-from-preamble', `${file}, line ${line} states the sampling rate: ${rate_Hz} Hz.`)
		);
		return ok(oneSegment(rate_Hz, body.rowCount));
	}
	if (statedSamplingRate_Hz !== null) {
		remarks.push(
			note(
				'rate-stated-by-person',
				`${file} has no time column; the sampling rate of ${statedSamplingRate_Hz} Hz was entered by hand.`
			)
		);
		return ok(oneSegment(statedSamplingRate_Hz, body.rowCount));
	}
	return refuse(
		'sampling-rate-missing',
		file,
		`line ${body.firstLine}`,
		`${file} has neither a time column nor a sampling rate above the table, which begins on line ${body.firstLine}; add a column “Time (s)” or a line “Sampling rate (Hz)” in front. None is ever assumed.`
	);
}

function channelOf(
	column: TableColumn,
	index: number,
	phaseHint: RecordingChannel['phaseHint'],
	samples: Float64Array
): RecordingChannel {
	const unit = parseUnit(column.unit);
	const byName = column.unit === '' ? quantityByName(column.name) : null;
	if (unit.times !== 1 || unit.over !== 1)
		for (let row = 0; row < samples.length; row++) samples[row] = toBaseUnit(samples[row] as number, unit);
	return {
		index,
		name: column.name,
		phaseHint,
		unitAsWritten: column.unit,
		baseUnit: byName === null ? unit.base : byName === 'voltage' ? 'V' : 'A',
		quantity: byName ?? unit.quantity,
		samples,
		valuesAre: 'unknown',
		ratio: null,
		range: null
	};
}

/** "V_ch1", "Ia_I", "Voltage L1", "Spannung", "Strom": a quantity by its symbol or word. */
export function quantityByName(name: string): 'voltage' | 'current' | null {
	if (/^(u|v)(?![a-z]*alue)([^a-z]|rms|l?[1-3]|[abcrstn]{1,2}([^a-z]|$)|$)|volt|spann|tension/i.test(name))
		return 'voltage';
	if (/^i([^a-z]|rms|l?[1-3]|[abcrstn]([^a-z]|$)|$)|current|amp|strom|courant|corrente/i.test(name))
		return 'current';
	return null;
}

function describeUnits(file: string, channels: RecordingChannel[], remarks: ReadRemark[]): void {
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

function describeMissing(
	file: string,
	channels: RecordingChannel[],
	rowCount: number,
	remarks: ReadRemark[]
): void {
	const gaps = channels.flatMap(({ name, samples }) => {
		let missing = 0;
		for (let row = 0; row < samples.length; row++) if (Number.isNaN(samples[row] as number)) missing++;
		return missing === 0 ? [] : [`${name} ${missing}`];
	});
	if (gaps.length === 0) return;
	remarks.push(
		warning(
			'missing-samples',
			`${file}: samples are missing (of ${rowCount}: ${gaps.slice(0, 6).join(', ')}); windows that contain them give no figures.`
		)
	);
}

/** The table's own clock, else a date above it; times counted from a trigger leave the start open. */
function startOf({ axis, preamble }: WaveformTable): RecordingStart | null {
	if (axis?.start) return axis.start;
	const stamp = preamble.date;
	if (stamp === null || stamp.day === null || stamp.second === null) return null;
	if (axis !== null && axis.first_s !== 0) return null;
	const whole = Math.floor(stamp.second);
	const date = new Date(stamp.day * 86_400_000);
	const fraction = stamp.second === whole ? '' : (stamp.second - whole).toFixed(6).slice(2);
	const local = isoLocal({
		year: date.getUTCFullYear(),
		month: date.getUTCMonth() + 1,
		day: date.getUTCDate(),
		hour: Math.floor(whole / 3600),
		minute: Math.floor((whole % 3600) / 60),
		second: whole % 60,
		fraction
	});
	return { local, utcOffset_min: stamp.utcOffset_min };
}
