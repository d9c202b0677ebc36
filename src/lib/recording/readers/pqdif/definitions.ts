import type { Body, Collection } from './elements';
import { childOf, childrenOf, guidOf, numberOf, textOf } from './elements';
import { STORAGE, TAG, UNIT } from './pqdif-ids';

/** One series of a channel as its definition states it. */
export interface SeriesDefinition {
	valueType: string;
	units: number;
	characteristic: string;
	storage: number;
}

export interface ChannelDefinition {
	/** Place among the definitions of its data source. */
	index: number;
	name: string;
	phase: number;
	measured: number;
	quantityType: string;
	series: (SeriesDefinition | null)[];
}

/** Who recorded, and what its channels mean. */
export interface DataSource {
	/** From 1, in the order of the file. */
	number: number;
	name: string;
	location: string;
	instrument: string;
	/** Null where a definition is damaged: the others keep their places. */
	channels: (ChannelDefinition | null)[];
}

export interface ChannelSetting {
	/** Full scale of the channel, in its unit; null where none is stated. */
	fullScale: number | null;
	/** Transformer ratio; null where none is stated. */
	ratio: { system: number; monitor: number } | null;
	calibration: { ratio: number; offset: number };
}

/** How the recorder was set. */
export interface MonitorSettings {
	nominalFrequency_Hz: number | null;
	/** Values still have to be multiplied by the transformer ratio. */
	useTransducer: boolean;
	useCalibration: boolean;
	/** By index of the channel definition. */
	channels: Map<number, ChannelSetting>;
}

export function readDataSource(body: Body, top: Collection, number: number): DataSource {
	const definitions = childOf(body, top, TAG.channelDefinitions) ?? [];
	return {
		number,
		name: textOf(body, top, TAG.nameOfSource),
		location: textOf(body, top, TAG.locationOfSource),
		instrument: textOf(body, top, TAG.instrumentModelName),
		channels: childrenOf(body, definitions, TAG.oneChannelDefinition).map((one, index) =>
			one === null ? null : channelDefinition(body, one, index)
		)
	};
}

function channelDefinition(body: Body, one: Collection, index: number): ChannelDefinition {
	const series = childOf(body, one, TAG.seriesDefinitions) ?? [];
	return {
		index,
		name: textOf(body, one, TAG.channelName) || `Channel ${index + 1}`,
		phase: numberOf(body, one, TAG.phase) ?? 0,
		measured: numberOf(body, one, TAG.quantityMeasured) ?? 0,
		quantityType: guidOf(body, one, TAG.quantityType) ?? '',
		series: childrenOf(body, series, TAG.oneSeriesDefinition).map((definition) =>
			definition === null
				? null
				: {
						valueType: guidOf(body, definition, TAG.valueType) ?? '',
						units: numberOf(body, definition, TAG.quantityUnits) ?? UNIT.none,
						characteristic: guidOf(body, definition, TAG.quantityCharacteristic) ?? '',
						storage: numberOf(body, definition, TAG.storageMethod) ?? STORAGE.values
					}
		)
	};
}

export const NO_SETTINGS: MonitorSettings = {
	nominalFrequency_Hz: null,
	useTransducer: false,
	useCalibration: false,
	channels: new Map()
};

export function readMonitorSettings(body: Body, top: Collection): MonitorSettings {
	const array = childOf(body, top, TAG.channelSettings) ?? [];
	const channels = new Map<number, ChannelSetting>();
	for (const one of childrenOf(body, array, TAG.oneChannelSetting)) {
		const index = one === null ? null : numberOf(body, one, TAG.channelDefinitionIndex);
		if (one === null || index === null) continue;
		const system = numberOf(body, one, TAG.systemSideRatio);
		const monitor = numberOf(body, one, TAG.monitorSideRatio);
		const isRatio = isPositive(system) && isPositive(monitor);
		const fullScale = numberOf(body, one, TAG.fullScale);
		channels.set(index, {
			fullScale: isPositive(fullScale) ? fullScale : null,
			ratio: isRatio ? { system, monitor } : null,
			calibration: {
				ratio: finiteOr(numberOf(body, one, TAG.calibrationRatio), 1),
				offset: finiteOr(numberOf(body, one, TAG.calibrationOffset), 0)
			}
		});
	}
	const nominal = numberOf(body, top, TAG.nominalFrequency);
	return {
		nominalFrequency_Hz: isPositive(nominal) && nominal < 1000 ? nominal : null,
		useTransducer: numberOf(body, top, TAG.useTransducer) === 1,
		useCalibration: numberOf(body, top, TAG.useCalibration) === 1,
		channels
	};
}

function isPositive(value: number | null): value is number {
	return value !== null && value > 0 && Number.isFinite(value);
}

function finiteOr(value: number | null, otherwise: number): number {
	return value !== null && Number.isFinite(value) && value !== 0 ? value : otherwise;
}
