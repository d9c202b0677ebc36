import type { ChannelDefinition, DataSource, MonitorSettings, SeriesDefinition } from './definitions';
import type { Body, Collection, Moment } from './elements';
import { childOf, childrenOf, momentOf, numberOf, textOf, vectorOf } from './elements';
import { TAG, UNIT, VALUE_TYPE } from './pqdif-ids';
import { seriesTimes, type SeriesTimes, type StoredSeries } from './series-values';

/** A series of one channel in an observation, its values still packed in the body. */
export interface SeriesInstance extends StoredSeries {
	definition: SeriesDefinition;
}

export interface ChannelInstance {
	definition: ChannelDefinition;
	/** Frequency of a spectrum's line; null where none is stated. */
	frequency_Hz: number | null;
	/** Number of a spectrum's group: the order; null where none is stated. */
	group: number | null;
	/** Null where a series is damaged or refers to one that is not there. */
	series: (SeriesInstance | null)[];
}

export interface Observation {
	body: Body;
	source: DataSource;
	settings: MonitorSettings;
	name: string;
	start: Moment;
	channels: ChannelInstance[];
	/** Channels that could not be read, each as words for a sentence. */
	faults: string[];
}

/** Series may refer to each other; a longer way than this is a circle. */
const MOST_REFERENCES = 8;

/** An observation under the definitions and settings before it; null where it states no moment. */
export function readObservation(
	body: Body,
	top: Collection,
	source: DataSource,
	settings: MonitorSettings
): Observation | null {
	const start = momentOf(body, top, TAG.timeStart);
	if (start === null) return null;
	const faults: string[] = [];
	const instances = childrenOf(
		body,
		childOf(body, top, TAG.channelInstances) ?? [],
		TAG.oneChannelInstance
	).map((one) => (one === null ? null : rawChannel(body, one)));
	const channels = instances.flatMap((instance): ChannelInstance[] => {
		const definition = instance === null ? null : source.channels[instance.definitionIndex];
		if (instance === null || !definition) {
			faults.push(
				instance === null
					? 'a damaged channel'
					: `a channel that refers to definition ${instance.definitionIndex}, which does not exist`
			);
			return [];
		}
		// Some recorders leave the last series of a definition out where they have nothing for it.
		if (instance.series.length > definition.series.length) {
			faults.push(
				`${definition.name} (${instance.series.length} series, but its definition has ${definition.series.length})`
			);
			return [];
		}
		const series = instance.series.map((_, index) => resolved(instances, instance, index, definition));
		return [{ definition, frequency_Hz: instance.frequency_Hz, group: instance.group, series }];
	});
	return { body, source, settings, name: textOf(body, top, TAG.observationName), start, channels, faults };
}

interface RawSeries {
	vector: ReturnType<typeof vectorOf>;
	scale: number;
	offset: number;
	/** The series whose values this one takes, by channel and place. */
	shared: { channel: number; series: number } | null;
}

interface RawChannel {
	definitionIndex: number;
	frequency_Hz: number | null;
	group: number | null;
	series: (RawSeries | null)[];
}

function rawChannel(body: Body, one: Collection): RawChannel {
	const list = childOf(body, one, TAG.seriesInstances) ?? [];
	return {
		definitionIndex: numberOf(body, one, TAG.channelDefinitionIndex) ?? -1,
		frequency_Hz: numberOf(body, one, TAG.channelFrequency),
		group: numberOf(body, one, TAG.channelGroup),
		series: childrenOf(body, list, TAG.oneSeriesInstance).map((series) =>
			series === null ? null : rawSeries(body, series)
		)
	};
}

function rawSeries(body: Body, one: Collection): RawSeries {
	const channel = numberOf(body, one, TAG.sharedChannelIndex);
	const series = numberOf(body, one, TAG.sharedSeriesIndex);
	return {
		vector: vectorOf(body, one, TAG.seriesValues),
		scale: numberOf(body, one, TAG.seriesScale) ?? 1,
		offset: numberOf(body, one, TAG.seriesOffset) ?? 0,
		shared: channel === null || series === null ? null : { channel, series }
	};
}

/** A series with the values it has or takes from another; scale and offset are its own. */
function resolved(
	instances: readonly (RawChannel | null)[],
	channel: RawChannel,
	index: number,
	definition: ChannelDefinition
): SeriesInstance | null {
	const own = channel.series[index];
	const ownDefinition = definition.series[index];
	if (!own || !ownDefinition) return null;
	let holder: RawSeries | null | undefined = own;
	for (let step = 0; holder && holder.vector === null && holder.shared !== null; step++) {
		if (step === MOST_REFERENCES) return null;
		holder = instances[holder.shared.channel]?.series[holder.shared.series];
	}
	if (!holder?.vector) return null;
	return {
		vector: holder.vector,
		storage: ownDefinition.storage,
		scale: own.scale,
		offset: own.offset,
		definition: ownDefinition
	};
}

/** Seconds since 1970-01-01 UTC. A double keeps a tenth of a microsecond of it. */
export function secondsOf({ whole_s, fraction_s }: Moment): number {
	return whole_s + fraction_s;
}

export function timeSeriesOf(channel: ChannelInstance): SeriesInstance | null {
	return channel.series.find((series) => series?.definition.valueType === VALUE_TYPE.time) ?? null;
}

/** Times of a channel's values in seconds from the start of the observation; words where they cannot be had. */
export function timesFromStart(
	observation: Observation,
	channel: ChannelInstance
): { times: SeriesTimes; type: number } | { fault: string } {
	const series = timeSeriesOf(channel);
	if (series === null) return { fault: 'no series of times' };
	const times = seriesTimes(observation.body, series);
	if (times === null) return { fault: 'unreadable times' };
	const { type } = series.vector;
	switch (series.definition.units) {
		case UNIT.seconds:
		case UNIT.none:
			return { times, type };
		case UNIT.cycles: {
			const nominal = observation.settings.nominalFrequency_Hz;
			if (nominal === null) return { fault: 'times in cycles, but no nominal frequency' };
			return { times: changed(times, (value) => value / nominal), type };
		}
		case UNIT.timestamp: {
			const start_s = secondsOf(observation.start);
			if (times.kind === 'even') return { fault: 'increments of the date' };
			return { times: changed(times, (value) => value - start_s), type };
		}
		default:
			return { fault: 'times in an unknown unit' };
	}
}

function changed(times: SeriesTimes, change: (value: number) => number): SeriesTimes {
	return times.kind === 'listed'
		? { ...times, values: times.values.map(change) }
		: { ...times, runs: times.runs.map(({ count, step }) => ({ count, step: change(step) })) };
}
