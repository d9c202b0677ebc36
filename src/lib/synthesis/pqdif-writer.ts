import { zlibSync } from 'fflate';
import { parseIsoLocal, wallSeconds } from '../recording/calendar';
import type { Phase } from '../recording/phase';
import { adler32, crc32 } from '../recording/readers/pqdif/checksums';
import {
	CHARACTERISTIC,
	COMPRESSION_STYLE,
	DAYS_TO_1970,
	MEASURED,
	PHYSICAL_TYPE,
	QUANTITY_TYPE,
	RECORD,
	SIGNATURE,
	STORAGE,
	TAG,
	UNIT,
	VALUE_TYPE
} from '../recording/readers/pqdif/pqdif-ids';
import type { CaptureFile, RecordingStart, TrendSeries } from '../recording/recording';
import { parseUnit } from '../recording/unit-text';
import type { WaveformToWrite } from './comtrade-writer-header';
import type { TrendToWrite } from './delimited-text-writer';

export interface PqdifWriteOptions {
	/** File name without extension; ".pqd" is added. */
	stem: string;
	compression?: 'none' | 'records' | 'whole';
	/** What stands in the record headers: Adler-32 of the stored body, CRC-32 of it, or zero for none. */
	checksums?: 'adler' | 'crc' | 'none';
	/** Doubles as they are, or 16-bit numbers with a scale; columns with missing values always are doubles. */
	values?: 'plain' | 'scaled';
	/** Every time written out, or increments. */
	times?: 'listed' | 'increment';
	stationName?: string;
	nominalFrequency_Hz?: number | null;
}

type Node =
	| { tag: string; kind: 'collection'; children: Node[] }
	| { tag: string; kind: 'scalar' | 'vector'; type: number; bytes: Uint8Array; count: number };

const SECONDS_PER_DAY = 86_400;
const INTERVALS_PER_OBSERVATION = 144;
const PHASE_NUMBERS: Record<Phase, number> = { L1: 1, L2: 2, L3: 3, N: 4, L1L2: 5, L2L3: 6, L3L1: 7 };

/** One observation for each stretch of a recording that stands apart from the one before. */
export function writePqdifWaveform(waveform: WaveformToWrite, options: PqdifWriteOptions): CaptureFile {
	const start_s = utcSeconds(waveform.start);
	const definitions = waveform.channels.map(({ name, phaseHint, unitAsWritten }) => {
		const isVoltage = parseUnit(unitAsWritten).base === 'V';
		return channelDefinition(name, phaseHint ?? null, isVoltage, QUANTITY_TYPE.waveform, [
			seriesDefinition(VALUE_TYPE.time, UNIT.seconds, CHARACTERISTIC.none, timeStorage(options)),
			seriesDefinition(
				VALUE_TYPE.value,
				isVoltage ? UNIT.volts : UNIT.amperes,
				CHARACTERISTIC.instantaneous,
				valueStorage(options)
			)
		]);
	});
	const settings = waveform.channels.map(({ valuesAre, ratio }, index) =>
		collection(TAG.oneChannelSetting, [
			integer(TAG.channelDefinitionIndex, index),
			...(ratio && valuesAre !== 'unknown'
				? [real(TAG.systemSideRatio, ratio.primary), real(TAG.monitorSideRatio, ratio.secondary)]
				: [])
		])
	);
	const isSecondary = waveform.channels.some(({ valuesAre }) => valuesAre === 'secondary');
	let elapsed_s = 0;
	const observations = waveform.segments.map(({ samplingRate_Hz, fromSample, toSample, gapBefore_s }) => {
		elapsed_s += gapBefore_s ?? 0;
		const count = toSample - fromSample;
		const from_s = start_s + elapsed_s;
		elapsed_s += count / samplingRate_Hz;
		const times =
			options.times === 'listed'
				? doubles(
						TAG.seriesValues,
						Float64Array.from({ length: count }, (_, n) => n / samplingRate_Hz)
					)
				: doubles(TAG.seriesValues, Float64Array.of(1, count, 1 / samplingRate_Hz));
		return observation('Waveforms', from_s, [
			...waveform.channels.map(({ samples }, index) =>
				instance(index, index === 0 ? [times] : shared(0, 0), [
					values(samples.subarray(fromSample, toSample), options)
				])
			)
		]);
	});
	const nominal = options.nominalFrequency_Hz ?? waveform.nominalFrequency_Hz;
	const named = { ...options, stationName: options.stationName ?? waveform.stationName };
	return assemble(named, start_s, definitions, settings, { isSecondary, nominal }, observations);
}

/** Averages of every series as value logs, a day in each observation; orders are harmonic groups of one channel. */
export function writePqdifTrend(trend: TrendToWrite, options: PqdifWriteOptions): CaptureFile {
	const start_s = utcSeconds(trend.start);
	const definitions = trend.series.map((series) => trendDefinition(series, options));
	if (trend.flagged)
		definitions.push(
			channelDefinition('Flagged', null, true, QUANTITY_TYPE.valueLog, [
				seriesDefinition(VALUE_TYPE.time, UNIT.seconds, CHARACTERISTIC.none, timeStorage(options)),
				seriesDefinition(VALUE_TYPE.value, UNIT.none, CHARACTERISTIC.flaggingOf61000_4_30, STORAGE.values)
			])
		);
	const observations: Node[] = [];
	const count = trend.intervalStarts_s.length;
	for (let from = 0; from < count; from += INTERVALS_PER_OBSERVATION) {
		const to = Math.min(count, from + INTERVALS_PER_OBSERVATION);
		const starts = trend.intervalStarts_s.subarray(from, to);
		const times = [trendTimes(starts, options)];
		const channels = trend.series.map((series, index) =>
			instance(
				index,
				index === 0 ? times : shared(0, 0),
				[values(series.values.subarray(from, to), options)],
				series.measure.kind === 'order' ? series.measure.order : null
			)
		);
		if (trend.flagged)
			channels.push(
				instance(trend.series.length, channels.length === 0 ? times : shared(0, 0), [
					[vector(TAG.seriesValues, PHYSICAL_TYPE.uint1, trend.flagged.slice(from, to), to - from)]
				])
			);
		observations.push(observation('Logged values', start_s + starts[0]!, channels));
	}
	const nominal = options.nominalFrequency_Hz ?? null;
	return assemble(options, start_s, definitions, [], { isSecondary: false, nominal }, observations);
}

function trendDefinition(series: TrendSeries, options: PqdifWriteOptions): Node {
	const { measure, unit, quantity, phaseHint } = series;
	const characteristic = {
		rms: CHARACTERISTIC.rms,
		order: CHARACTERISTIC.harmonicGroup,
		thd: CHARACTERISTIC.thd,
		frequency: CHARACTERISTIC.frequency
	}[measure.kind];
	const units = { V: UNIT.volts, A: UNIT.amperes, Hz: UNIT.hertz, 'percent-of-fundamental': UNIT.percent }[
		unit
	];
	const symbol = quantity === 'voltage' ? 'U' : 'I';
	const name = measure.kind === 'frequency' ? 'Frequency' : `${symbol} ${phaseHint ?? ''} ${measure.kind}`;
	return channelDefinition(series.name || name, phaseHint, quantity === 'voltage', QUANTITY_TYPE.valueLog, [
		seriesDefinition(VALUE_TYPE.time, UNIT.seconds, CHARACTERISTIC.none, timeStorage(options)),
		seriesDefinition(VALUE_TYPE.average, units, characteristic, valueStorage(options))
	]);
}

/** Times from the first interval on; increments, one run for each change of the step. */
function trendTimes(starts: Float64Array, { times }: PqdifWriteOptions): Node {
	const first = starts[0]!;
	if (times === 'listed')
		return doubles(
			TAG.seriesValues,
			starts.map((start) => start - first)
		);
	const runs: number[] = [];
	for (let at = 0; at < starts.length; at++) {
		const step = at + 1 < starts.length ? starts[at + 1]! - starts[at]! : (runs.at(-1) ?? 0);
		if (runs.length > 0 && runs.at(-1) === step) runs[runs.length - 2]!++;
		else runs.push(1, step);
	}
	return doubles(TAG.seriesValues, Float64Array.of(runs.length / 2, ...runs));
}

function timeStorage({ times }: PqdifWriteOptions): number {
	return times === 'listed' ? STORAGE.values : STORAGE.increment;
}

function valueStorage({ values }: PqdifWriteOptions): number {
	return values === 'scaled' ? STORAGE.values | STORAGE.scaled : STORAGE.values;
}

/** The values of one series, with the scale where they have one. */
function values(samples: Float64Array, options: PqdifWriteOptions): Node[] {
	if (options.values !== 'scaled') return [doubles(TAG.seriesValues, samples)];
	const largest = samples.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
	if (samples.some(Number.isNaN) || largest < 1e-290)
		return [real(TAG.seriesScale, 1), real(TAG.seriesOffset, 0), doubles(TAG.seriesValues, samples)];
	const scale = largest / 32_767;
	const raw = Int16Array.from(samples, (value) => Math.round(value / scale));
	return [
		real(TAG.seriesScale, scale),
		real(TAG.seriesOffset, 0),
		vector(TAG.seriesValues, PHYSICAL_TYPE.int2, new Uint8Array(raw.buffer), raw.length)
	];
}

function shared(channel: number, series: number): Node[] {
	return [integer(TAG.sharedChannelIndex, channel), integer(TAG.sharedSeriesIndex, series)];
}

function instance(index: number, times: Node[], series: Node[][], group: number | null = null): Node {
	return collection(TAG.oneChannelInstance, [
		integer(TAG.channelDefinitionIndex, index),
		...(group === null ? [] : [scalar(TAG.channelGroup, PHYSICAL_TYPE.int2, Int16Array.of(group))]),
		collection(
			TAG.seriesInstances,
			[times, ...series].map((one) => collection(TAG.oneSeriesInstance, one))
		)
	]);
}

function observation(name: string, start_s: number, channels: Node[]): Node {
	return collection(RECORD.observation, [
		text(TAG.observationName, name),
		timestamp(TAG.timeCreate, start_s),
		timestamp(TAG.timeStart, start_s),
		integer(TAG.triggerMethod, 0),
		collection(TAG.channelInstances, channels)
	]);
}

function channelDefinition(
	name: string,
	phase: Phase | null,
	isVoltage: boolean,
	quantityType: string,
	series: Node[]
): Node {
	return collection(TAG.oneChannelDefinition, [
		text(TAG.channelName, name),
		integer(TAG.phase, phase === null ? 0 : PHASE_NUMBERS[phase]),
		integer(TAG.quantityMeasured, isVoltage ? MEASURED.voltage : MEASURED.current),
		guid(TAG.quantityType, quantityType),
		collection(TAG.seriesDefinitions, series)
	]);
}

function seriesDefinition(valueType: string, units: number, characteristic: string, storage: number): Node {
	return collection(TAG.oneSeriesDefinition, [
		guid(TAG.valueType, valueType),
		integer(TAG.quantityUnits, units),
		guid(TAG.quantityCharacteristic, characteristic),
		integer(TAG.storageMethod, storage)
	]);
}

function collection(tag: string, children: Node[]): Node {
	return { tag, kind: 'collection', children };
}

function scalar(tag: string, type: number, value: ArrayBufferView): Node {
	const bytes = new Uint8Array(value.buffer, value.byteOffset, value.byteLength);
	return { tag, kind: 'scalar', type, bytes, count: 1 };
}

function vector(tag: string, type: number, bytes: Uint8Array, count: number): Node {
	return { tag, kind: 'vector', type, bytes, count };
}

function integer(tag: string, value: number): Node {
	return scalar(tag, PHYSICAL_TYPE.uint4, Uint32Array.of(value));
}

function real(tag: string, value: number): Node {
	return scalar(tag, PHYSICAL_TYPE.real8, Float64Array.of(value));
}

function doubles(tag: string, values: Float64Array): Node {
	return vector(tag, PHYSICAL_TYPE.real8, new Uint8Array(values.slice().buffer), values.length);
}

function text(tag: string, value: string): Node {
	const bytes = new TextEncoder().encode(`${value}\u0000`);
	return vector(tag, PHYSICAL_TYPE.char1, bytes, bytes.length);
}

function guid(tag: string, value: string): Node {
	return scalar(tag, PHYSICAL_TYPE.guid, guidBytes(value));
}

function timestamp(tag: string, seconds: number): Node {
	const bytes = new Uint8Array(12);
	const view = new DataView(bytes.buffer);
	const days = Math.floor(seconds / SECONDS_PER_DAY);
	view.setUint32(0, days + DAYS_TO_1970, true);
	view.setFloat64(4, seconds - days * SECONDS_PER_DAY, true);
	return scalar(tag, PHYSICAL_TYPE.timestamp, bytes);
}

/** The first three fields of an identifier are stored with their lowest byte first. */
const GUID_ORDER = [3, 2, 1, 0, 5, 4, 7, 6, 8, 9, 10, 11, 12, 13, 14, 15];

function guidBytes(value: string): Uint8Array {
	return Uint8Array.from(GUID_ORDER, (at) => parseInt(value.slice(2 * at, 2 * at + 2), 16));
}

function utcSeconds({ local, utcOffset_min }: RecordingStart): number {
	const clock = parseIsoLocal(local);
	if (clock === null) throw new Error(`A start must be a local ISO date and time, not "${local}".`);
	return wallSeconds(clock) - 60 * (utcOffset_min ?? 0);
}

const ENTRY_BYTES = 28;
const KINDS = { collection: 1, scalar: 2, vector: 3 } as const;

function padded(length: number): number {
	return (length + 3) & ~3;
}

/** Bytes that a node takes beside its own entry. */
function sizeOf(node: Node): number {
	if (node.kind === 'collection')
		return 4 + node.children.reduce((sum, child) => sum + ENTRY_BYTES + sizeOf(child), 0);
	if (node.kind === 'vector') return 4 + padded(node.bytes.length);
	return node.bytes.length <= 8 ? 0 : padded(node.bytes.length);
}

/** A record's body: its top collection, and behind it what its entries lead to. */
function bodyBytes(top: Extract<Node, { kind: 'collection' }>): Uint8Array {
	const bytes = new Uint8Array(sizeOf(top));
	const view = new DataView(bytes.buffer);
	let free = 0;
	const take = (length: number) => {
		const at = free;
		free += length;
		return at;
	};
	const write = ({ children }: Extract<Node, { kind: 'collection' }>): number => {
		const at = take(4 + children.length * ENTRY_BYTES);
		view.setInt32(at, children.length, true);
		for (const [index, child] of children.entries()) {
			const entry = at + 4 + index * ENTRY_BYTES;
			bytes.set(guidBytes(child.tag), entry);
			bytes[entry + 16] = KINDS[child.kind];
			bytes[entry + 17] = child.kind === 'collection' ? 0 : child.type;
			if (child.kind === 'scalar' && child.bytes.length <= 8) {
				bytes[entry + 18] = 1;
				bytes.set(child.bytes, entry + 20);
				continue;
			}
			view.setInt32(entry + 24, sizeOf(child), true);
			view.setInt32(entry + 20, child.kind === 'collection' ? write(child) : writeValue(child), true);
		}
		return at;
	};
	const writeValue = (node: Exclude<Node, { kind: 'collection' }>): number => {
		const at = take(sizeOf(node));
		if (node.kind === 'vector') view.setInt32(at, node.count, true);
		bytes.set(node.bytes, node.kind === 'vector' ? at + 4 : at);
		return at;
	};
	write(top);
	return bytes;
}

const HEADER_BYTES = 64;

/** Container, data source, settings and observations, linked by their places in the file. */
function assemble(
	options: PqdifWriteOptions,
	start_s: number,
	definitions: Node[],
	channelSettings: Node[],
	{ isSecondary, nominal }: { isSecondary: boolean; nominal: number | null },
	observations: Node[]
): CaptureFile {
	const { compression = 'none', checksums = 'adler', stem, stationName = '' } = options;
	const style = {
		none: COMPRESSION_STYLE.none,
		records: COMPRESSION_STYLE.perRecord,
		whole: COMPRESSION_STYLE.wholeFile
	}[compression];
	const container = collection(RECORD.container, [
		vector(TAG.versionInfo, PHYSICAL_TYPE.uint4, new Uint8Array(Uint32Array.of(1, 5, 1, 5).buffer), 4),
		integer(TAG.compressionStyle, style),
		integer(TAG.compressionAlgorithm, compression === 'none' ? 0 : 1)
	]);
	const source = collection(RECORD.dataSource, [
		text(TAG.nameOfSource, stationName || stem),
		collection(TAG.channelDefinitions, definitions)
	]);
	const settings = collection(RECORD.monitorSettings, [
		timestamp(TAG.timeCreate, start_s),
		scalar(TAG.useTransducer, PHYSICAL_TYPE.boolean4, Uint32Array.of(isSecondary ? 1 : 0)),
		scalar(TAG.useCalibration, PHYSICAL_TYPE.boolean4, Uint32Array.of(0)),
		...(nominal === null ? [] : [real(TAG.nominalFrequency, nominal)]),
		collection(TAG.channelSettings, channelSettings)
	]);
	const records = [container, source, settings, ...observations].map((record, index) => {
		if (record.kind !== 'collection') throw new Error('A record begins with a collection.');
		const plain = bodyBytes(record);
		return { type: record.tag, body: compression === 'records' && index > 0 ? zlibSync(plain) : plain };
	});
	const bytes = new Uint8Array(records.reduce((sum, { body }) => sum + HEADER_BYTES + body.length, 0));
	const view = new DataView(bytes.buffer);
	let at = 0;
	for (const [index, { type, body }] of records.entries()) {
		const next = at + HEADER_BYTES + body.length;
		bytes.set(guidBytes(SIGNATURE), at);
		bytes.set(guidBytes(type), at + 16);
		view.setInt32(at + 32, HEADER_BYTES, true);
		view.setInt32(at + 36, body.length, true);
		view.setInt32(at + 40, index + 1 < records.length ? next : 0, true);
		view.setUint32(at + 44, { adler: adler32, crc: crc32, none: () => 0 }[checksums](body), true);
		bytes.set(body, at + HEADER_BYTES);
		at = next;
	}
	return {
		name: `${stem}.pqd`,
		bytes: compression === 'whole' ? packedAfter(bytes, records[0]!.body) : bytes
	};
}

function packedAfter(bytes: Uint8Array, container: Uint8Array): Uint8Array {
	const begin = HEADER_BYTES + container.length;
	const rest = zlibSync(bytes.subarray(begin));
	const packed = new Uint8Array(begin + rest.length);
	packed.set(bytes.subarray(0, begin));
	packed.set(rest, begin);
	return packed;
}
