import type { ReadRemark, RecordingChannel, TrendSeries } from '../../recording';
import { counted, note, warning } from '../read-problem';
import { phaseOf, scaleOf } from './channel-meaning';
import type { DataSource } from './definitions';
import {
	secondsOf,
	timeSeriesOf,
	timesFromStart,
	type ChannelInstance,
	type Observation
} from './observation';
import { QUANTITY_TYPE } from './pqdif-ids';
import { seriesValues, type SeriesTimes } from './series-values';
import { extremeOf, judgedSeries, meaningOf, type TrendMeaning } from './trend-meaning';

/** Values of one series from one observation. */
interface Chunk {
	/** [count] seconds since 1970; shared between series that share their times. */
	times: Float64Array;
	values: Float64Array;
	/** Usual spacing inside the chunk, seconds; null for a single value. */
	spacing_s: number | null;
}

interface Column extends Pick<RecordingChannel, 'valuesAre' | 'ratio'> {
	source: DataSource;
	name: string;
	phaseHint: TrendSeries['phaseHint'];
	meaning: Exclude<TrendMeaning, { kind: 'left-out' }>;
	extreme: 'minimum' | 'maximum' | null;
	chunks: Chunk[];
}

/** Values at one spacing, joined over all observations. */
export interface TrendGroup {
	key: string;
	source: DataSource;
	nominalFrequency_Hz: number | null;
	interval_s: number;
	/** Seconds since 1970 of the first interval. */
	start_s: number;
	intervalStarts_s: Float64Array;
	flagged: Uint8Array | null;
	series: TrendSeries[];
	extremes: (TrendSeries & { extreme: 'minimum' | 'maximum' })[];
	remarks: ReadRemark[];
}

/** Below this spacing values follow single cycles or windows of an event: no log. */
const SHORTEST_INTERVAL_S = 0.9;
/** Values held in memory at most; minima and maxima are given up long before. */
const MOST_VALUES = 96_000_000;
const MOST_EXTREME_VALUES = 16_000_000;
/** Times closer than this share of the spacing mean the same interval. */
const SAME_INTERVAL = 0.25;

/** Gathers value logs and spectra series by series; `finish` joins what has one spacing. */
export class TrendGroups {
	private readonly columns = new Map<string, Column>();
	private readonly nominal = new Map<DataSource, number | null>();
	private readonly leftOut = new Map<string, number>();
	private valueCount = 0;
	private extremesDropped = 0;
	private cycleObservations = 0;

	constructor(private readonly file: string) {}

	/** Takes value logs and spectra of an observation in; returns words for what could not be. */
	add(observation: Observation): string[] {
		const faults: string[] = [];
		const times = new Map<number, Float64Array | { fault: string }>();
		const nominal = this.nominalOf(observation);
		let hasCycles = false;
		for (const channel of observation.channels) {
			const { quantityType } = channel.definition;
			if (quantityType !== QUANTITY_TYPE.valueLog && quantityType !== QUANTITY_TYPE.phasor) continue;
			const at = timesOfChannel(observation, channel, times);
			if ('fault' in at) {
				faults.push(`${channel.definition.name} (${at.fault})`);
				continue;
			}
			const spacing_s = usualStep(at);
			if (spacing_s !== null && spacing_s < SHORTEST_INTERVAL_S) {
				hasCycles = true;
				continue;
			}
			this.addChannel(observation, channel, at, spacing_s, nominal, faults);
		}
		if (hasCycles) this.cycleObservations++;
		return faults;
	}

	private addChannel(
		observation: Observation,
		channel: ChannelInstance,
		times: Float64Array,
		spacing_s: number | null,
		nominal: number | null,
		faults: string[]
	): void {
		const { definition } = channel;
		const judged = judgedSeries(definition);
		for (const [index, series] of channel.series.entries()) {
			const seriesDefinition = definition.series[index];
			if (!seriesDefinition) continue;
			const extreme = extremeOf(seriesDefinition);
			if (index !== judged && extreme === null) continue;
			const meaning = meaningOf(definition, seriesDefinition, channel, nominal);
			if (meaning.kind === 'left-out') {
				if (extreme === null) this.leftOut.set(meaning.words, (this.leftOut.get(meaning.words) ?? 0) + 1);
				continue;
			}
			const values = series === null ? null : seriesValues(observation.body, series);
			if (values === null || values.length !== times.length) {
				faults.push(
					`${definition.name} (${values === null ? 'unreadable values' : `${values.length} values, but ${times.length} times`})`
				);
				continue;
			}
			if (extreme !== null && this.valueCount + values.length > MOST_EXTREME_VALUES) {
				this.extremesDropped++;
				continue;
			}
			if (this.valueCount + values.length > MOST_VALUES) {
				faults.push(`${definition.name} (more than ${MOST_VALUES} values in all)`);
				continue;
			}
			this.valueCount += values.length;
			this.columnOf(observation, channel, index, meaning, extreme, values).chunks.push({
				times,
				values,
				spacing_s
			});
		}
	}

	private columnOf(
		{ source, settings }: Observation,
		{ definition }: ChannelInstance,
		index: number,
		meaning: Exclude<TrendMeaning, { kind: 'left-out' }>,
		extreme: Column['extreme'],
		values: Float64Array
	): Column {
		const scale = scaleOf(settings, definition.index);
		const isAbsolute = meaning.kind === 'series' && (meaning.unit === 'V' || meaning.unit === 'A');
		if (isAbsolute && (scale.factor !== 1 || scale.offset !== 0))
			for (let at = 0; at < values.length; at++) values[at] = values[at]! * scale.factor + scale.offset;
		const order = meaning.kind === 'series' && meaning.measure.kind === 'order' ? meaning.measure.order : -1;
		const side = `${scale.valuesAre} ${scale.ratio?.primary}/${scale.ratio?.secondary}`;
		const key = `${source.number} ${definition.index} ${index} ${order} ${side}`;
		let column = this.columns.get(key);
		if (column === undefined) {
			column = {
				source,
				name: nameOf(definition.name, order, extreme),
				phaseHint:
					meaning.kind === 'series' && meaning.measure.kind === 'frequency' ? null : phaseOf(definition),
				meaning,
				extreme,
				valuesAre: isAbsolute ? scale.valuesAre : 'unknown',
				ratio: isAbsolute ? scale.ratio : null,
				chunks: []
			};
			this.columns.set(key, column);
		}
		return column;
	}

	/** Stated by the settings, or else the one whose multiples the lines of the spectra are. */
	private nominalOf(observation: Observation): number | null {
		const { source, settings, channels } = observation;
		const stated = settings.nominalFrequency_Hz;
		if (stated !== null || this.nominal.get(source)) {
			this.nominal.set(source, stated ?? this.nominal.get(source)!);
			return this.nominal.get(source)!;
		}
		const lines = channels.flatMap(({ frequency_Hz }) => (frequency_Hz === null ? [] : [frequency_Hz]));
		const share = (nominal: number) =>
			lines.filter((line) => Math.abs(line / nominal - Math.round(line / nominal)) < 0.02).length;
		const guess = lines.length === 0 ? null : share(50) > share(60) ? 50 : 60;
		const nominal = guess !== null && share(guess) > 0.8 * lines.length ? guess : null;
		this.nominal.set(source, nominal);
		return nominal;
	}

	/** One trend for each spacing of each data source, shortest spacing first. */
	finish(): TrendGroup[] {
		const byKey = new Map<string, { source: DataSource; interval_s: number; columns: Column[] }>();
		for (const column of this.columns.values())
			for (const [interval_s, chunks] of bySpacing(column.chunks)) {
				const key = `source ${column.source.number}, values every ${interval_s} s`;
				const group = byKey.get(key) ?? { source: column.source, interval_s, columns: [] };
				group.columns.push({ ...column, chunks });
				byKey.set(key, group);
			}
		return [...byKey]
			.filter(([, { columns }]) => columns.some(({ meaning }) => meaning.kind === 'series'))
			.sort(([, a], [, b]) => a.source.number - b.source.number || a.interval_s - b.interval_s)
			.map(([key, group]) => this.joined(key, group));
	}

	/** What was left out, over the whole file. */
	describe(): ReadRemark[] {
		const remarks: ReadRemark[] = [];
		if (this.leftOut.size > 0)
			remarks.push(
				note(
					'pqdif-left-out',
					`${this.file} also holds ${[...this.leftOut.keys()].slice(0, 12).join(', ')}; these are not read.`
				)
			);
		if (this.cycleObservations > 0)
			remarks.push(
				note(
					'pqdif-cycle-values',
					`${this.file}: ${counted(this.cycleObservations, 'observation')} with one rms value for each cycle or window of an event; they are no log of harmonics and were left out.`
				)
			);
		if (this.extremesDropped > 0)
			remarks.push(
				note(
					'pqdif-extremes-dropped',
					`${this.file} holds more than ${MOST_EXTREME_VALUES} values; further minima and maxima, which no percentile uses, were left out.`
				)
			);
		return remarks;
	}

	private joined(
		key: string,
		{ source, interval_s, columns }: { source: DataSource; interval_s: number; columns: Column[] }
	): TrendGroup {
		const remarks: ReadRemark[] = [];
		const starts = unionOfTimes(columns, interval_s);
		let doubles = 0;
		const filled = columns.map((column) => {
			const values = new Float64Array(starts.length).fill(NaN);
			for (const chunk of column.chunks) doubles += place(chunk, starts, interval_s, values);
			return values;
		});
		if (doubles > 0)
			remarks.push(
				warning(
					'pqdif-overlap',
					`${this.file}: ${counted(doubles, 'value')} stand for an interval that an earlier observation gave a value already; the earlier one was kept.`
				)
			);
		describeGaps(this.file, interval_s, starts, remarks);
		const series: TrendSeries[] = [];
		const extremes: TrendGroup['extremes'] = [];
		let flagged: Uint8Array | null = null;
		for (const [index, column] of columns.entries()) {
			const values = filled[index]!;
			const { meaning, extreme } = column;
			if (meaning.kind === 'flags') {
				flagged ??= new Uint8Array(starts.length);
				for (let at = 0; at < values.length; at++) if (values[at]! > 0) flagged[at] = 1;
				continue;
			}
			const one: TrendSeries = {
				name: column.name,
				quantity: meaning.quantity,
				phaseHint: column.phaseHint,
				measure: meaning.measure,
				unit: meaning.unit,
				values,
				...(column.valuesAre === 'unknown' ? {} : { valuesAre: column.valuesAre, ratio: column.ratio })
			};
			if (extreme === null) series.push(one);
			else extremes.push({ ...one, extreme });
		}
		const start_s = starts[0]!;
		return {
			key,
			source,
			nominalFrequency_Hz: this.nominal.get(source) ?? null,
			interval_s,
			start_s,
			intervalStarts_s: starts.map((time) => tidy(time - start_s)),
			flagged,
			series,
			extremes,
			remarks
		};
	}
}

/** Dates in a double are exact to a tenth of a microsecond; what lies below a microsecond is its noise. */
function tidy(seconds: number): number {
	return Math.round(seconds * 1e6) / 1e6;
}

function nameOf(name: string, order: number, extreme: Column['extreme']): string {
	const word = extreme === null ? '' : extreme === 'minimum' ? ' min' : ' max';
	return `${name}${order < 0 ? '' : ` h${order}`}${word}`;
}

function timesOfChannel(
	observation: Observation,
	channel: ChannelInstance,
	known: Map<number, Float64Array | { fault: string }>
): Float64Array | { fault: string } {
	const holder = timeSeriesOf(channel);
	const before = holder === null ? undefined : known.get(holder.vector.at);
	if (before !== undefined) return before;
	const read = timesFromStart(observation, channel);
	const longest = Math.max(0, ...channel.series.map((series) => series?.vector.count ?? 0));
	const times =
		'fault' in read
			? read
			: read.times.count > longest
				? { fault: `${read.times.count} times, but ${longest} values` }
				: writtenOut(read.times, secondsOf(observation.start));
	if (holder !== null) known.set(holder.vector.at, times);
	return times;
}

function writtenOut(times: SeriesTimes, start_s: number): Float64Array | { fault: string } {
	const out = new Float64Array(times.count);
	if (times.kind === 'listed') out.set(times.values);
	else {
		let at = 0;
		let sum = 0;
		for (const { count, step } of times.runs)
			for (let i = 0; i < count; i++) {
				out[at++] = sum;
				sum += step;
			}
	}
	for (let at = 0; at < out.length; at++) {
		if (!(at === 0 ? Number.isFinite(out[at]!) : out[at]! > out[at - 1]! - start_s))
			return { fault: 'times that do not rise' };
		out[at] = out[at]! + start_s;
	}
	return out;
}

/** The middle one of the steps, the shorter one of two; null for fewer than two times. */
function usualStep(times: Float64Array): number | null {
	if (times.length < 2) return null;
	const steps = times.subarray(1, 1001).map((time, index) => time - times[index]!);
	steps.sort();
	return steps[(steps.length - 1) >> 1]!;
}

/** Whole seconds where rounding hides them. */
function roundedSpacing(spacing_s: number): number {
	if (Math.abs(spacing_s - 3) < 0.2) return 3;
	const whole = Math.round(spacing_s);
	return Math.abs(spacing_s - whole) < 0.01 * whole ? whole : Math.round(spacing_s * 1000) / 1000;
}

/** Chunks by the spacing they belong to; short ones with gaps, and single values, join the usual one. */
function bySpacing(chunks: readonly Chunk[]): Map<number, Chunk[]> {
	const weights = new Map<number, number>();
	for (const { spacing_s, values } of chunks)
		if (spacing_s !== null) {
			const spacing = roundedSpacing(spacing_s);
			weights.set(spacing, (weights.get(spacing) ?? 0) + values.length);
		}
	const singles = chunks.filter(({ spacing_s }) => spacing_s === null);
	if (singles.length > 1) {
		const times = Float64Array.from(singles, ({ times }) => times[0]!).sort();
		const spacing = usualStep(times);
		if (spacing !== null && spacing >= SHORTEST_INTERVAL_S) {
			const rounded = roundedSpacing(spacing);
			weights.set(rounded, (weights.get(rounded) ?? 0) + singles.length);
		}
	}
	const usual = [...weights].sort(([, a], [, b]) => b - a)[0]?.[0];
	const groups = new Map<number, Chunk[]>();
	if (usual === undefined) return groups;
	for (const chunk of chunks) {
		const own = chunk.spacing_s === null ? usual : roundedSpacing(chunk.spacing_s);
		const isUsualWithGaps =
			own > usual && chunk.values.length < 6 && Math.abs(own / usual - Math.round(own / usual)) < 0.02;
		const spacing = isUsualWithGaps ? usual : own;
		// Appended in place: a log with one value in each observation has as many chunks as intervals.
		const group = groups.get(spacing);
		if (group === undefined) groups.set(spacing, [chunk]);
		else group.push(chunk);
	}
	return groups;
}

/** All times of the columns, in order; times of the same interval count once. */
function unionOfTimes(columns: readonly Column[], interval_s: number): Float64Array {
	const sources = new Set(columns.flatMap(({ chunks }) => chunks.map(({ times }) => times)));
	const all = new Float64Array([...sources].reduce((sum, times) => sum + times.length, 0));
	let at = 0;
	for (const times of sources) {
		all.set(times, at);
		at += times.length;
	}
	all.sort();
	let kept = 0;
	for (const time of all)
		if (kept === 0 || time - all[kept - 1]! > SAME_INTERVAL * interval_s) all[kept++] = time;
	return all.slice(0, kept);
}

/** Puts a chunk's values to their intervals; returns how many found theirs taken. */
function place(
	{ times, values }: Chunk,
	starts: Float64Array,
	interval_s: number,
	into: Float64Array
): number {
	let doubles = 0;
	let row = lowerBound(starts, times[0]! - SAME_INTERVAL * interval_s);
	for (let at = 0; at < times.length; at++) {
		while (row + 1 < starts.length && starts[row + 1]! <= times[at]! + 1e-6) row++;
		if (Number.isNaN(into[row]!)) into[row] = values[at]!;
		else if (!Number.isNaN(values[at]!)) doubles++;
	}
	return doubles;
}

function lowerBound(values: Float64Array, least: number): number {
	let low = 0;
	let high = values.length - 1;
	while (low < high) {
		const middle = (low + high) >> 1;
		if (values[middle]! < least) low = middle + 1;
		else high = middle;
	}
	return low;
}

function describeGaps(file: string, interval_s: number, starts: Float64Array, remarks: ReadRemark[]): void {
	if (interval_s !== 3 && interval_s !== 600)
		remarks.push(
			warning(
				'unusual-interval',
				`${file} has a value every ${interval_s} s; limits are stated for values over 3 s and 10 min.`
			)
		);
	let gaps = 0;
	let missing = 0;
	for (let row = 1; row < starts.length; row++) {
		const steps = Math.round((starts[row]! - starts[row - 1]!) / interval_s);
		if (steps > 1) {
			gaps++;
			missing += steps - 1;
		}
	}
	if (gaps > 0)
		remarks.push(
			warning(
				'trend-gaps',
				`${file}: ${missing} intervals of ${interval_s} s are missing in ${gaps === 1 ? 'one place' : `${gaps} places`}; they count as no data.`
			)
		);
}
