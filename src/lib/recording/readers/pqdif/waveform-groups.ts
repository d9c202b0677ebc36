import { designKaiserKernel } from '../../../numerics/resample/kaiser-kernel';
import { interpolateEvenly, planInterpolator } from '../../../numerics/resample/interpolator';
import type { RateSegment, ReadRemark } from '../../recording';
import type { SampleScratch, ScratchFile } from '../../sample-scratch';
import { rowsInFile, type SampleSource, type SourceChannel } from '../../sample-source';
import { counted, note, warning } from '../read-problem';
import { phaseOf, quantityOf, scaleOf } from './channel-meaning';
import type { DataSource } from './definitions';
import type { Moment } from './elements';
import { secondsOf, timesFromStart, type ChannelInstance, type Observation } from './observation';
import { PHYSICAL_TYPE, QUANTITY_TYPE, UNIT, VALUE_TYPE } from './pqdif-ids';
import { seriesValues, type SeriesTimes } from './series-values';

/** Samples at one rate, one after the other. */
interface Run {
	samplingRate_Hz: number;
	count: number;
}

interface WaveformInstance {
	channel: ChannelInstance;
	runs: Run[];
	/** Seconds from the start of the observation to the first sample. */
	first_s: number;
}

/** One observation's rows in the scratch file. */
interface Stretch {
	start: Moment;
	/** Seconds since 1970 of the first row. */
	start_s: number;
	fromRow: number;
	runs: Run[];
}

interface Group {
	key: string;
	source: DataSource;
	nominalFrequency_Hz: number | null;
	samplingRate_Hz: number;
	channels: SourceChannel[];
	rows: ScratchFile;
	rowCount: number;
	stretches: Stretch[];
	missingCounts: number[];
}

/** Observations of one set of channels at one rate, joined. */
export interface WaveformGroup {
	key: string;
	source: DataSource;
	nominalFrequency_Hz: number | null;
	samplingRate_Hz: number;
	start: Moment;
	channels: SourceChannel[];
	sampleCount: number;
	segments: RateSegment[];
	samples: SampleSource;
	observationCount: number;
	remarks: ReadRemark[];
}

/** Rows interleaved and handed on at a time. */
const ROWS_AT_ONCE = 1 << 13;
/** Steps kept as 32-bit floats come back rounded by 6e-8 at most. */
const SINGLE_ROUNDING = 1.2e-7;
const UNEVEN_SHARE = 0.05;

/** Share of the slower rate up to which interpolation is true to the signal. */
const PASSBAND = 0.45;
/**
 * Passes up to 0.45 of the slower rate and stops from 0.55 on, 100 dB; its zeros lie on the samples, so that a sample is
 * itself where the instants coincide.
 */
const KERNEL = designKaiserKernel(PASSBAND, 1 - PASSBAND, 100);

/** Puts the samples of waveform observations into scratch rows, one set of channels at one rate beside the other. */
export class WaveformGroups {
	private readonly groups = new Map<string, Group>();
	/** Names of channels that were brought to a higher rate, with the two rates. */
	private readonly raised = new Map<string, Set<string>>();

	constructor(
		private readonly file: string,
		private readonly scratch: SampleScratch
	) {}

	/** Takes the waveforms of an observation in; returns words for what could not be. */
	add(observation: Observation): string[] {
		const faults: string[] = [];
		const instances: WaveformInstance[] = [];
		for (const channel of observation.channels) {
			if (channel.definition.quantityType !== QUANTITY_TYPE.waveform) continue;
			const instance = waveformOf(observation, channel);
			if ('fault' in instance) faults.push(`${channel.definition.name} (${instance.fault})`);
			else if (instances.some((one) => one.channel.definition === channel.definition))
				faults.push(`${channel.definition.name} (twice in one observation)`);
			else instances.push(instance);
		}
		const reference = instances.reduce<WaveformInstance | null>(
			(best, one) => (best === null || topRate(one) > topRate(best) ? one : best),
			null
		);
		if (reference === null) return faults;
		const together = instances.filter((one) => {
			if (isOnGrid(one, reference) || isSingleRun(one, reference)) return true;
			faults.push(`${one.channel.definition.name} (rates that change on the way)`);
			return false;
		});
		this.store(observation, reference, together);
		return faults;
	}

	private store(observation: Observation, reference: WaveformInstance, instances: WaveformInstance[]): void {
		const group = this.groupOf(observation, reference, instances);
		const count = rowCountOf(reference.runs);
		const columns = instances.map((instance, index) => {
			const values = physicalValues(observation, instance.channel);
			const column = isOnGrid(instance, reference)
				? values
				: this.raise(values, instance, reference, group.key, count);
			let missing = Math.max(0, count - column.length);
			for (let at = 0; at < column.length; at++) if (Number.isNaN(column[at]!)) missing++;
			group.missingCounts[index] = group.missingCounts[index]! + missing;
			return column;
		});
		appendRows(group.rows, columns, count);
		group.stretches.push({
			start: shifted(observation.start, reference.first_s),
			start_s: secondsOf(observation.start) + reference.first_s,
			fromRow: group.rowCount,
			runs: reference.runs
		});
		group.rowCount += count;
	}

	private groupOf(
		{ source, settings }: Observation,
		reference: WaveformInstance,
		instances: WaveformInstance[]
	): Group {
		const rate = topRate(reference);
		const channels = instances.map(({ channel }, index) => sourceChannel(channel, index, settings));
		const indices = instances.map(({ channel }) => channel.definition.index).join('.');
		const sides = channels.map(({ valuesAre, ratio }) => `${valuesAre}${ratio?.primary}/${ratio?.secondary}`);
		const known = `${source.number} ${rate} ${indices} ${sides.join()}`;
		let group = this.groups.get(known);
		if (group === undefined) {
			const number = [...this.groups.values()].filter(
				(one) => one.source === source && one.samplingRate_Hz === rate
			).length;
			group = {
				key: `source ${source.number}, waveforms ${rate} Hz, set ${number + 1}`,
				source,
				nominalFrequency_Hz: settings.nominalFrequency_Hz,
				samplingRate_Hz: rate,
				channels,
				rows: this.scratch.create(),
				rowCount: 0,
				stretches: [],
				missingCounts: channels.map(() => 0)
			};
			this.groups.set(known, group);
		}
		return group;
	}

	/** A channel at the reference's instants; NaN where its own samples do not reach far enough to either side. */
	private raise(
		values: Float64Array,
		instance: WaveformInstance,
		reference: WaveformInstance,
		key: string,
		count: number
	): Float64Array {
		const rate = topRate(instance);
		const step = rate / topRate(reference);
		const first = (reference.first_s - instance.first_s) * rate;
		const column = new Float64Array(count).fill(NaN);
		const plan = planInterpolator(KERNEL);
		const from = Math.max(0, Math.ceil((plan.guard - first) / step));
		const to = Math.min(count, Math.floor((values.length - 1 - plan.guard - first) / step) + 1);
		if (to > from)
			interpolateEvenly(plan, [values], first + from * step, step, to - from, [column.subarray(from, to)]);
		for (let row = 0; row < count; row++) {
			const position = first + row * step;
			const whole = Math.round(position);
			if (Math.abs(position - whole) < 1e-6 && whole >= 0 && whole < values.length)
				column[row] = values[whole]!;
		}
		const names = this.raised.get(key) ?? new Set<string>();
		names.add(`${instance.channel.definition.name} from ${rate} Hz`);
		this.raised.set(key, names);
		return column;
	}

	/** All groups, each in order of time. */
	finish(): WaveformGroup[] {
		return [...this.groups.values()]
			.filter(({ rowCount }) => rowCount > 0)
			.map((group) => this.joined(group));
	}

	private joined(group: Group): WaveformGroup {
		const remarks: ReadRemark[] = [];
		const rowBytes = 8 * group.channels.length;
		const ordered = group.stretches.toSorted(
			(a, b) => a.start_s - b.start_s || rowCountOf(b.runs) - rowCountOf(a.runs)
		);
		const { kept, segments, cutRows } = joinStretches(ordered);
		if (cutRows > 0)
			remarks.push(
				warning(
					'pqdif-overlap',
					`${this.file}: observations of the same channels overlap by their own start times; ${counted(cutRows, 'sample')} a channel that fall into an earlier one were left out.`
				)
			);
		const handle = group.rows.seal();
		const isInOrder = kept.every(
			({ fromRow }, index) =>
				fromRow === (index === 0 ? 0 : kept[index - 1]!.fromRow + kept[index - 1]!.count)
		);
		const sampleCount = kept.reduce((sum, { count }) => sum + count, 0);
		let rows = handle;
		if (!isInOrder || sampleCount !== group.rowCount) {
			const copy = this.scratch.create();
			for (const { fromRow, count } of kept)
				for (let row = 0; row < count; row += ROWS_AT_ONCE) {
					const piece = new Uint8Array(Math.min(ROWS_AT_ONCE, count - row) * rowBytes);
					handle.read((fromRow + row) * rowBytes, piece);
					copy.append(piece);
				}
			rows = copy.seal();
		}
		const gaps = segments.filter(({ gapBefore_s }) => gapBefore_s !== undefined).length;
		if (gaps > 0)
			remarks.push(
				note(
					'time-gap',
					`${this.file}: ${group.stretches.length} observations with these channels; there are no samples in ${gaps === 1 ? 'one place' : `${gaps} places`} between them, and the stretches are kept apart.`
				)
			);
		const raised = this.raised.get(group.key);
		if (raised)
			remarks.push(
				note(
					'pqdif-rate-raised',
					`${this.file}: ${[...raised].slice(0, 6).join(', ')}${raised.size > 6 ? ', …' : ''} sampled slower than the others, brought to ${group.samplingRate_Hz} Hz by band-limited interpolation; true up to ${PASSBAND} of the slower rate; between samples, the ${KERNEL.halfWidth} intervals at either end of each observation have no value.`
				)
			);
		const missing = group.channels
			.map(({ name }, index) => ({ name, count: group.missingCounts[index]! }))
			.filter(({ count }) => count > 0);
		if (missing.length > 0)
			remarks.push(
				note(
					'missing-samples',
					`${this.file}: samples are missing (of ${sampleCount}: ${missing
						.slice(0, 6)
						.map(({ name, count }) => `${name} ${count}`)
						.join(', ')}${missing.length > 6 ? ', …' : ''}); windows that contain them give no figures.`
				)
			);
		const indices = group.channels.map((_, index) => index);
		return {
			key: group.key,
			source: group.source,
			nominalFrequency_Hz: group.nominalFrequency_Hz,
			samplingRate_Hz: group.samplingRate_Hz,
			start: ordered[0]!.start,
			channels: group.channels.map((channel, index) => ({
				...channel,
				missingCount: group.missingCounts[index]!
			})),
			sampleCount,
			segments,
			samples: rowsInFile(
				{
					format: 'float64',
					rowBytes,
					offsets: indices.map((index) => 8 * index),
					factors: indices.map(() => 1),
					additions: indices.map(() => 0)
				},
				rows,
				0
			),
			observationCount: group.stretches.length,
			remarks
		};
	}
}

function topRate({ runs }: WaveformInstance): number {
	return Math.max(...runs.map(({ samplingRate_Hz }) => samplingRate_Hz));
}

function rowCountOf(runs: readonly Run[]): number {
	return runs.reduce((sum, { count }) => sum + count, 0);
}

/** Whether two channels were sampled at the same instants. */
function isOnGrid(one: WaveformInstance, reference: WaveformInstance): boolean {
	return (
		Math.abs(one.first_s - reference.first_s) < 0.5 / topRate(reference) &&
		one.runs.length === reference.runs.length &&
		one.runs.every(
			({ samplingRate_Hz, count }, index) =>
				samplingRate_Hz === reference.runs[index]!.samplingRate_Hz &&
				(count === reference.runs[index]!.count || one.runs.length === 1)
		)
	);
}

function isSingleRun(one: WaveformInstance, reference: WaveformInstance): boolean {
	return one.runs.length === 1 && reference.runs.length === 1;
}

function valueSeriesOf(channel: ChannelInstance) {
	return (
		channel.series.find((series) => series?.definition.valueType === VALUE_TYPE.value) ??
		channel.series.find((series) => series?.definition.valueType === VALUE_TYPE.instantaneous) ??
		null
	);
}

function waveformOf(
	observation: Observation,
	channel: ChannelInstance
): WaveformInstance | { fault: string } {
	const values = valueSeriesOf(channel);
	if (values === null) return { fault: 'no series of samples' };
	const read = timesFromStart(observation, channel);
	if ('fault' in read) return read;
	const { times, type } = read;
	const even = runsOf(times, type === PHYSICAL_TYPE.real4);
	if (even === null) return { fault: 'samples that are not evenly spaced' };
	// Only straight values are as many as their vector holds; incremented samples are no waveform.
	if (rowCountOf(even.runs) !== values.vector.count || values.storage & 4)
		return { fault: `${values.vector.count} samples, but ${rowCountOf(even.runs)} times` };
	return { channel, ...even };
}

/** Times as runs at one rate each; null where they are uneven. */
function runsOf(times: SeriesTimes, isSingle: boolean): { runs: Run[]; first_s: number } | null {
	if (times.count < 2) return null;
	if (times.kind === 'listed') {
		const { values } = times;
		const first_s = values[0]!;
		const step = (values[values.length - 1]! - first_s) / (values.length - 1);
		if (!(step > 0)) return null;
		for (let at = 1; at < values.length; at++)
			if (!(Math.abs(values[at]! - first_s - at * step) < UNEVEN_SHARE * step)) return null;
		return { runs: [{ samplingRate_Hz: rateOf(step, isSingle), count: values.length }], first_s };
	}
	const runs: Run[] = [];
	for (const { count, step } of times.runs) {
		if (count === 0) continue;
		if (!(step > 0)) return null;
		const samplingRate_Hz = rateOf(step, isSingle);
		const last = runs.at(-1);
		if (last?.samplingRate_Hz === samplingRate_Hz) last.count += count;
		else runs.push({ samplingRate_Hz, count });
	}
	return runs.length === 0 ? null : { runs, first_s: 0 };
}

/** The rate of a step; a whole one where the rounding of the step hides it. */
function rateOf(step: number, isSingle: boolean): number {
	const rate = 1 / step;
	const tolerance = isSingle ? SINGLE_ROUNDING : 1e-12;
	const rounded = [1, 1000].map((scale) => Math.round(rate * scale) / scale);
	return rounded.find((whole) => whole > 0 && Math.abs(rate / whole - 1) <= tolerance) ?? rate;
}

function physicalValues(observation: Observation, channel: ChannelInstance): Float64Array {
	const series = valueSeriesOf(channel)!;
	const values = seriesValues(observation.body, series) ?? new Float64Array(0);
	const { factor, offset } = scaleOf(observation.settings, channel.definition.index);
	if (factor !== 1 || offset !== 0)
		for (let at = 0; at < values.length; at++) values[at] = values[at]! * factor + offset;
	return values;
}

function sourceChannel(
	channel: ChannelInstance,
	index: number,
	settings: Observation['settings']
): SourceChannel {
	const { definition } = channel;
	const units = valueSeriesOf(channel)!.definition.units;
	const { valuesAre, ratio } = scaleOf(settings, definition.index);
	const unit = units === UNIT.volts ? 'V' : units === UNIT.amperes ? 'A' : units === UNIT.percent ? '%' : '';
	return {
		index,
		name: definition.name,
		phaseHint: phaseOf(definition),
		unitAsWritten: unit,
		baseUnit: unit,
		quantity: unit === '%' || units === UNIT.perUnit ? 'other' : quantityOf(definition.measured, units),
		valuesAre,
		ratio,
		range: null
	};
}

function appendRows(rows: ScratchFile, columns: readonly Float64Array[], count: number): void {
	for (let from = 0; from < count; from += ROWS_AT_ONCE) {
		const here = Math.min(ROWS_AT_ONCE, count - from);
		const block = new Float64Array(here * columns.length);
		columns.forEach((column, index) => {
			for (let row = 0; row < here; row++) block[row * columns.length + index] = column[from + row] ?? NaN;
		});
		rows.append(new Uint8Array(block.buffer));
	}
}

function shifted({ whole_s, fraction_s }: Moment, by_s: number): Moment {
	const whole = Math.floor(fraction_s + by_s);
	return { whole_s: whole_s + whole, fraction_s: fraction_s + by_s - whole };
}

/** Stretches in order of time as segments; what an earlier stretch covers already is cut from a later one. */
function joinStretches(ordered: readonly Stretch[]) {
	const kept: { fromRow: number; count: number }[] = [];
	const segments: RateSegment[] = [];
	let cutRows = 0;
	let row = 0;
	let end_s = -Infinity;
	for (const stretch of ordered) {
		let at_s = stretch.start_s;
		let { fromRow } = stretch;
		for (const { samplingRate_Hz, count } of stretch.runs) {
			const overlap = Math.round((end_s - at_s) * samplingRate_Hz);
			const cut = Math.min(count, Math.max(0, overlap));
			const left = count - cut;
			cutRows += cut;
			if (left > 0) {
				const starts_s = at_s + cut / samplingRate_Hz;
				const gap_s = starts_s - end_s;
				const last = segments.at(-1);
				const joins = gap_s < 0.5 / samplingRate_Hz;
				if (last && joins && last.samplingRate_Hz === samplingRate_Hz) last.toSample += left;
				else
					segments.push({
						samplingRate_Hz,
						fromSample: row,
						toSample: row + left,
						...(last && !joins ? { gapBefore_s: gap_s } : {})
					});
				kept.push({ fromRow: fromRow + cut, count: left });
				row += left;
				end_s = starts_s + left / samplingRate_Hz;
			}
			fromRow += count;
			at_s += count / samplingRate_Hz;
		}
	}
	return { kept, segments, cutRows };
}
