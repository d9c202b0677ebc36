import { ok, type Result } from '../../../result';
import type { ReadProblem, ReadRemark, RecordingStart, Trend, TrendSeries } from '../../recording';
import { refuse, note, warning } from '../read-problem';
import { normalisedHeading } from './layout-likeness';

/** What is known of a delimited file of a lot before it is read. */
export interface TableOfLot {
	name: string;
	/** [columns] as written; all empty without headings. */
	headings: readonly string[];
	/** Clock time of the first row, ISO form, where the rows tell it; later than another's in the order of the text. */
	firstLocal: string | null;
}

/**
 * Which tables of a lot make one log: those whose headings are the same, letter case and signs aside, and whose rows carry
 * a clock, so that the order in time is certain. In the order of their first rows; every other file stands alone.
 * returns  groups of indexes into `tables`
 */
export function tablesThatBelongTogether(tables: readonly TableOfLot[]): number[][] {
	const groups = new Map<string, number[]>();
	for (const [index, { headings, firstLocal }] of tables.entries()) {
		const isNamed = headings.some((heading) => heading !== '');
		const key =
			isNamed && firstLocal !== null ? headings.map(normalisedHeading).join('\u0000') : `alone ${index}`;
		groups.set(key, [...(groups.get(key) ?? []), index]);
	}
	return [...groups.values()].map((group) =>
		group.sort((one, other) => {
			const [a, b] = [tables[one]?.firstLocal ?? '', tables[other]?.firstLocal ?? ''];
			return a < b ? -1 : a > b ? 1 : one - other;
		})
	);
}

interface NamedTrend {
	file: string;
	trend: Trend;
}

/** Milliseconds on the wall clock, or of UTC where the offset is told; only differences are used. */
function clock_s({ local, utcOffset_min }: RecordingStart): number {
	const [date, fraction = ''] = local.split('.');
	return Date.parse(`${date}Z`) / 1000 + Number(`0.${fraction || '0'}`) - (utcOffset_min ?? 0) * 60;
}

function seriesKey({ quantity, phaseHint, measure, unit, name }: TrendSeries): string {
	return JSON.stringify([
		quantity,
		phaseHint,
		measure,
		unit,
		phaseHint === null ? normalisedHeading(name) : ''
	]);
}

/**
 * One log out of several files: rows that follow in time are laid end to end, columns over the same times side by side.
 * Where files overlap, the one that starts later gives way for what both tell. Times that a file does not tell are no data.
 */
export function joinTrends(parts: readonly NamedTrend[]): Result<Trend, ReadProblem> {
	const ordered = [...parts].sort((one, other) => clock_s(one.trend.start) - clock_s(other.trend.start));
	const first = ordered[0] as NamedTrend;
	if (ordered.length === 1) return ok(first.trend);
	const odd = ordered.find(
		({ trend }) => Math.abs(trend.interval_s - first.trend.interval_s) > 1e-6 * first.trend.interval_s
	);
	if (odd !== undefined)
		return refuse(
			'intervals-differ',
			odd.file,
			null,
			`${odd.file} has a row every ${odd.trend.interval_s} s and ${first.file} one every ${first.trend.interval_s} s; files of one log have one interval. Upload them one by one.`
		);
	const zone = (trend: Trend) => trend.start.utcOffset_min === null;
	const mixed = ordered.find(({ trend }) => zone(trend) !== zone(first.trend));
	if (mixed !== undefined)
		return refuse(
			'zones-differ',
			mixed.file,
			null,
			`${mixed.file} and ${first.file} do not both state their offset from UTC, so their order is not certain. Upload them one by one.`
		);
	const axis = jointAxis(ordered);
	return ok({
		...first.trend,
		intervalStarts_s: axis.starts_s,
		flagged: jointFlags(ordered, axis),
		series: jointSeries(ordered, axis),
		remarks: [...describeJoint(ordered, axis), ...ordered.flatMap(({ trend }) => trend.remarks)],
		...jointExtremes(ordered, axis)
	});
}

interface JointAxis {
	starts_s: Float64Array;
	/** [parts][rows of the part] place on the joint axis. */
	places: Int32Array[];
}

/** All interval starts in order; those of two files within a hundredth of an interval are one. */
function jointAxis(parts: readonly NamedTrend[]): JointAxis {
	const { trend } = parts[0] as NamedTrend;
	const origin_s = clock_s(trend.start);
	const all: { time_s: number; part: number; row: number }[] = [];
	for (const [part, { trend: own }] of parts.entries()) {
		const shift_s = clock_s(own.start) - origin_s;
		own.intervalStarts_s.forEach((time_s, row) => all.push({ time_s: time_s + shift_s, part, row }));
	}
	all.sort((one, other) => one.time_s - other.time_s || one.part - other.part);
	const places = parts.map(({ trend: own }) => new Int32Array(own.intervalStarts_s.length));
	const starts: number[] = [];
	for (const { time_s, part, row } of all) {
		const before_s = starts[starts.length - 1];
		if (before_s === undefined || time_s - before_s > 0.01 * trend.interval_s) starts.push(time_s);
		(places[part] as Int32Array)[row] = starts.length - 1;
	}
	return { starts_s: Float64Array.from(starts), places };
}

function jointFlags(parts: readonly NamedTrend[], { starts_s, places }: JointAxis): Uint8Array | null {
	if (parts.every(({ trend }) => trend.flagged === null)) return null;
	const flags = new Uint8Array(starts_s.length);
	for (const [part, { trend }] of parts.entries())
		trend.flagged?.forEach((flag, row) => {
			if (flag === 1) flags[(places[part] as Int32Array)[row] as number] = 1;
		});
	return flags;
}

/** One column over the joint axis, fetched from its files when it is asked for. */
function jointColumn<S extends TrendSeries>(
	columns: readonly { part: number; series: S }[],
	axis: JointAxis
): S {
	const first = (columns[0] as { series: S }).series;
	const { values: _values, ...facts } = Object.getOwnPropertyDescriptors(first);
	return Object.defineProperties({} as S, {
		...facts,
		values: {
			enumerable: true,
			get() {
				const values = new Float64Array(axis.starts_s.length).fill(NaN);
				for (const { part, series } of columns) {
					const places = axis.places[part] as Int32Array;
					const own = series.values;
					for (let row = 0; row < own.length; row++) {
						const place = places[row] as number;
						if (Number.isNaN(values[place] as number)) values[place] = own[row] as number;
					}
				}
				return values;
			}
		}
	});
}

function grouped<S extends TrendSeries>(
	parts: readonly NamedTrend[],
	of: (trend: Trend) => readonly S[],
	keyOf: (series: S) => string,
	axis: JointAxis
): S[] {
	const groups = new Map<string, { part: number; series: S }[]>();
	for (const [part, { trend }] of parts.entries())
		for (const series of of(trend)) {
			const key = keyOf(series);
			groups.set(key, [...(groups.get(key) ?? []), { part, series }]);
		}
	return [...groups.values()].map((columns) => jointColumn(columns, axis));
}

function jointSeries(parts: readonly NamedTrend[], axis: JointAxis): TrendSeries[] {
	return grouped(parts, (trend) => trend.series, seriesKey, axis);
}

function jointExtremes(parts: readonly NamedTrend[], axis: JointAxis): Pick<Trend, 'extremes'> {
	const extremes = grouped(
		parts,
		(trend) => trend.extremes ?? [],
		(series) => `${series.extreme} ${seriesKey(series)}`,
		axis
	);
	return extremes.length > 0 ? { extremes } : {};
}

function describeJoint(parts: readonly NamedTrend[], axis: JointAxis): ReadRemark[] {
	const names = parts.map(({ file }) => file);
	const remarks: ReadRemark[] = [
		note('files-joined', `${names.join(', ')} were read as one log of ${axis.starts_s.length} intervals.`)
	];
	const keys = (trend: Trend) => new Set(trend.series.map(seriesKey));
	let twice = 0;
	for (const [part, { trend }] of parts.entries()) {
		if (part === 0) continue;
		const before = parts[part - 1] as NamedTrend;
		const shared = [...keys(trend)].some((key) => keys(before.trend).has(key));
		if (!shared) continue;
		const taken = new Set(axis.places[part - 1]);
		for (const place of axis.places[part] as Int32Array) if (taken.has(place)) twice++;
	}
	if (twice > 0)
		remarks.push(
			warning(
				'files-overlap',
				`${names.join(', ')} overlap: ${twice} intervals are told twice; the file that starts earlier was taken there. Check the recorder’s clock if that was not meant.`
			)
		);
	const { interval_s } = (parts[0] as NamedTrend).trend;
	let missing = 0;
	for (let row = 1; row < axis.starts_s.length; row++)
		missing += Math.max(
			0,
			Math.round(((axis.starts_s[row] as number) - (axis.starts_s[row - 1] as number)) / interval_s) - 1
		);
	if (missing > 0)
		remarks.push(
			warning(
				'files-gap',
				`Between and within ${names.join(', ')}, ${missing} intervals of ${interval_s} s are missing; they count as no data.`
			)
		);
	return remarks;
}
