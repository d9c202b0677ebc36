import { isoLocal } from '../../calendar';
import { ok, type Result } from '../../../result';
import type { CaptureHandle } from '../../capture-handle';
import type { CapturePart, ReadProblem, ReadRemark, RecordingStart, Trend } from '../../recording';
import type { SampleScratch } from '../../sample-scratch';
import type { CaptureSource } from '../../sample-source';
import { counted, refuse, warning } from '../read-problem';
import {
	NO_SETTINGS,
	readDataSource,
	readMonitorSettings,
	type DataSource,
	type MonitorSettings
} from './definitions';
import { collectionAt, numberOf, vectorOf, type Body, type Collection } from './elements';
import { readObservation, type Observation } from './observation';
import { COMPRESSION_ALGORITHM, COMPRESSION_STYLE, RECORD, TAG } from './pqdif-ids';
import { looksLikePqdif, RecordChain, type RecordHeader } from './record-chain';
import { plainValues } from './series-values';
import { TrendGroups, type TrendGroup } from './trend-groups';
import { WaveformGroups, type WaveformGroup } from './waveform-groups';
import { unpackWholeFile } from './whole-file';

type PqdifPart = CapturePart<CaptureSource | Trend>;

/** What the records gave, before it becomes parts. */
interface Gathered {
	file: string;
	variant: string;
	waveforms: WaveformGroups;
	trends: TrendGroups;
	remarks: ReadRemark[];
	observationCount: number;
	sourceCount: number;
}

/**
 * Opens a PQDIF file (IEEE Std 1159.3): every set of waveform channels at one rate is one recording, and all value logs at
 * one spacing are one trend. Records are read and decoded one by one; samples go to the scratch rows.
 * wanted   key of the only part that is needed; what it cannot come from is not decoded
 * returns  null where the file is no PQDIF file
 */
export function openPqdif(
	file: CaptureHandle,
	scratch: SampleScratch,
	wanted?: string
): Result<PqdifPart[], ReadProblem> | null {
	if (!looksLikePqdif(file)) return null;
	const remarks: ReadRemark[] = [];
	const opened = openChain(file, scratch, remarks);
	if (!opened.ok) return opened;
	const gathered: Gathered = {
		file: file.name,
		variant: opened.value.variant,
		waveforms: new WaveformGroups(file.name, scratch),
		trends: new TrendGroups(file.name),
		remarks,
		observationCount: 0,
		sourceCount: 0
	};
	const kinds = {
		waveforms: wanted === undefined || wanted === '' || wanted.includes('waveforms'),
		trends: wanted === undefined || wanted === '' || wanted.includes('values every')
	};
	readRecords(gathered, opened.value, kinds);
	return partsOf(gathered, wanted === undefined || wanted === '');
}

interface OpenedChain {
	chain: RecordChain;
	headers: Iterable<RecordHeader>;
	isPacked: boolean;
	variant: string;
}

/** The container comes first and says how the rest is packed. */
function openChain(
	file: CaptureHandle,
	scratch: SampleScratch,
	remarks: ReadRemark[]
): Result<OpenedChain, ReadProblem> {
	const chain = new RecordChain(file, remarks);
	const headers = chain.headers();
	const first = headers.next();
	const body = first.done ? null : chain.body(first.value, false);
	const top = body === null ? null : collectionAt(body, 0);
	if (first.done || body === null || top === null || first.value.type !== RECORD.container)
		return refuse(
			'pqdif-no-container',
			file.name,
			'byte 0',
			`${file.name} begins (byte 0) like a PQDIF file, but its first record is no readable container, which was expected there. The file is damaged or cut; export it again.`
		);
	const style = numberOf(body, top, TAG.compressionStyle) ?? COMPRESSION_STYLE.none;
	const algorithm = numberOf(body, top, TAG.compressionAlgorithm) ?? COMPRESSION_ALGORITHM.none;
	if (style !== COMPRESSION_STYLE.none && algorithm > COMPRESSION_ALGORITHM.zlib)
		return refuse(
			'pqdif-packing-not-read',
			file.name,
			`byte ${first.value.bodyAt}`,
			`${file.name}: the container (byte ${first.value.bodyAt}) says that the records are packed by method ${algorithm}; zlib (1) or none (0) was expected. Export the file again without compression.`
		);
	const version = versionOf(body, top);
	if (style !== COMPRESSION_STYLE.wholeFile) {
		const isPacked = style === COMPRESSION_STYLE.perRecord && algorithm === COMPRESSION_ALGORITHM.zlib;
		return ok({ chain, headers, isPacked, variant: `${version}${isPacked ? 'packed records' : 'plain'}` });
	}
	const whole = unpackWholeFile(file, first.value, scratch);
	if (!whole.ok) return whole;
	const inner = new RecordChain(whole.value.file, remarks);
	return ok({
		chain: inner,
		headers: inner.headers(whole.value.firstRecordAt),
		isPacked: false,
		variant: `${version}packed as a whole`
	});
}

/** "1.5, " by the first two numbers of the version; nothing where there is none. */
function versionOf(body: Body, top: Collection): string {
	const vector = vectorOf(body, top, TAG.versionInfo);
	const numbers = vector === null ? null : plainValues(body, vector);
	return numbers !== null && numbers.length >= 2 && numbers[0]! < 100 ? `${numbers[0]}.${numbers[1]}, ` : '';
}

function readRecords(
	gathered: Gathered,
	{ chain, headers, isPacked }: OpenedChain,
	kinds: { waveforms: boolean; trends: boolean }
): void {
	const { file, remarks } = gathered;
	let source: DataSource | null = null;
	let settings: MonitorSettings = NO_SETTINGS;
	const faults = new Map<string, number>();
	let damaged = 0;
	for (const header of headers) {
		const { type } = header;
		if (type !== RECORD.dataSource && type !== RECORD.monitorSettings && type !== RECORD.observation)
			continue;
		const body = chain.body(header, isPacked);
		const top = body === null ? null : collectionAt(body, 0);
		if (body === null || top === null) {
			damaged++;
			continue;
		}
		if (type === RECORD.dataSource) {
			source = readDataSource(body, top, ++gathered.sourceCount);
			settings = NO_SETTINGS;
		} else if (type === RECORD.monitorSettings) settings = readMonitorSettings(body, top);
		else if (source !== null) {
			const observation = readObservation(body, top, source, settings);
			gathered.observationCount++;
			if (observation === null) addFault(faults, 'an observation without a moment');
			else for (const fault of takeIn(gathered, observation, kinds)) addFault(faults, fault);
		} else addFault(faults, 'an observation before any definitions');
	}
	chain.describeChecksums();
	if (damaged > 0)
		remarks.push(
			warning(
				'pqdif-records-left-out',
				`${file}: ${counted(damaged, 'record')} could not be read and were left out.`
			)
		);
	if (faults.size > 0) {
		const list = [...faults]
			.slice(0, 8)
			.map(([words, count]) => (count > 1 ? `${words}, ${count} times` : words));
		remarks.push(
			warning(
				'pqdif-parts-left-out',
				`${file}: left out because the file is not consistent there: ${list.join('; ')}${faults.size > 8 ? '; …' : ''}.`
			)
		);
	}
}

function addFault(faults: Map<string, number>, words: string): void {
	if (faults.size < 1000 || faults.has(words)) faults.set(words, (faults.get(words) ?? 0) + 1);
}

function takeIn(
	{ waveforms, trends }: Gathered,
	observation: Observation,
	kinds: { waveforms: boolean; trends: boolean }
): string[] {
	return [
		...observation.faults,
		...(kinds.waveforms ? waveforms.add(observation) : []),
		...(kinds.trends ? trends.add(observation) : [])
	];
}

/** @param isWhole whether everything was decoded: a part that stands alone needs no key then */
function partsOf(gathered: Gathered, isWhole: boolean): Result<PqdifPart[], ReadProblem> {
	const { file, waveforms, trends, remarks, observationCount } = gathered;
	const recordings = waveforms.finish();
	const logs = trends.finish();
	const common = [...remarks, ...trends.describe()];
	if (recordings.length + logs.length === 0)
		return refuse(
			'pqdif-nothing-to-read',
			file,
			null,
			`${file} is a PQDIF file with ${counted(observationCount, 'observation')}, but none holds waveforms or logged rms values, orders, THD or frequency, which were expected.${common
				.slice(0, 3)
				.map(({ sentence }) => ` ${sentence}`)
				.join('')}`
		);
	const titles = titlesOf(recordings, logs);
	const parts: PqdifPart[] = [
		...recordings.map((group, index) => ({
			key: group.key,
			title: titles[index]!,
			content: recordingOf(gathered, group, common)
		})),
		...logs.map((group, index) => ({
			key: group.key,
			title: titles[recordings.length + index]!,
			content: trendOf(gathered, group, common)
		}))
	];
	return ok(isWhole && parts.length === 1 ? [{ ...parts[0]!, key: '', title: '' }] : parts);
}

function recordingOf({ variant }: Gathered, group: WaveformGroup, common: ReadRemark[]): CaptureSource {
	return {
		kind: 'waveform',
		format: 'PQDIF',
		variant,
		...namesOf(group.source),
		nominalFrequency_Hz: group.nominalFrequency_Hz,
		start: startOf(group.start.whole_s, group.start.fraction_s, 6),
		sampleCount: group.sampleCount,
		segments: group.segments,
		timeStamps_s: null,
		channels: group.channels,
		statusChannelNames: [],
		remarks: [...group.remarks, ...common],
		samples: group.samples
	};
}

function trendOf({ variant }: Gathered, group: TrendGroup, common: ReadRemark[]): Trend {
	const { nominalFrequency_Hz, interval_s, intervalStarts_s, flagged, series, extremes } = group;
	const whole = Math.floor(group.start_s);
	return {
		kind: 'trend',
		format: 'PQDIF',
		variant,
		...namesOf(group.source),
		nominalFrequency_Hz,
		start: startOf(whole, group.start_s - whole, 3),
		interval_s,
		intervalStarts_s,
		flagged,
		series,
		...(extremes.length > 0 ? { extremes } : {}),
		remarks: [...group.remarks, ...common]
	};
}

function namesOf({ name, location, instrument }: DataSource): { stationName: string; recorderName: string } {
	return { stationName: location || name, recorderName: instrument || name };
}

/** The standard counts in UTC. */
function startOf(whole_s: number, fraction_s: number, digits: number): RecordingStart {
	const scale = 10 ** digits;
	const units = Math.round(fraction_s * scale);
	const date = new Date((whole_s + Math.floor(units / scale)) * 1000);
	return {
		local: isoLocal({
			year: date.getUTCFullYear(),
			month: date.getUTCMonth() + 1,
			day: date.getUTCDate(),
			hour: date.getUTCHours(),
			minute: date.getUTCMinutes(),
			second: date.getUTCSeconds(),
			fraction: String(units % scale).padStart(digits, '0')
		}),
		utcOffset_min: 0
	};
}

/** "Waveforms, 15.36 kHz", "10-minute values"; numbered where two would be called the same. */
function titlesOf(recordings: readonly WaveformGroup[], logs: readonly TrendGroup[]): string[] {
	const plain = [
		...recordings.map(
			({ samplingRate_Hz }) => `Waveforms, ${Number((samplingRate_Hz / 1000).toPrecision(5))} kHz`
		),
		...logs.map(({ interval_s }) =>
			interval_s >= 60 && interval_s % 60 === 0
				? `${interval_s / 60}-minute values`
				: `${interval_s}-second values`
		)
	];
	return plain.map((title, index) => {
		const same = plain.filter((other) => other === title).length;
		const before = plain.slice(0, index).filter((other) => other === title).length;
		return same === 1 ? title : `${title} (${before + 1})`;
	});
}
