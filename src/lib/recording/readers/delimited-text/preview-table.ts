import { captureFacts } from '../../capture-facts';
import { handleOf } from '../../capture-handle';
import type { ReadProblem, ReadRemark, RecordingStart, Trend } from '../../recording';
import type { CaptureSource } from '../../sample-source';
import { asciiCompatibleBytes } from '../text-decoding';
import { openDelimitedText, openText } from './read-delimited-text';
import { splitFields } from './table-layout';
import type { ToldLayout } from './table-layout-told';

/** The two ends of a file, which is all that a preview looks at. */
export interface FileEnds {
	name: string;
	size_bytes: number;
	/** From the first byte on; the whole file where it is short. */
	head: Uint8Array;
	/** Up to the last byte. */
	tail: Uint8Array;
}

/** One line of the file, cut into the cells that the layout makes of it. */
export interface PreviewLine {
	line: number;
	kind: 'passed' | 'heading' | 'units' | 'values';
	cells: string[];
}

export interface PreviewFacts {
	kind: 'waveform' | 'trend';
	variant: string;
	samplingRate_Hz: number | null;
	interval_s: number | null;
	/** Samples or intervals; an estimate from the size where only the ends were read. */
	count: number;
	isEstimate: boolean;
	start: RecordingStart | null;
	duration_s: number | null;
	highestOrder: number | null;
	seriesCount: number;
	remarks: ReadRemark[];
}

/** A few curves over the first cycles, or over the first intervals. */
export interface PreviewPlot {
	unit: string;
	x_s: number[];
	series: { name: string; values: (number | null)[] }[];
}

export interface TablePreview {
	lines: PreviewLine[];
	problem: Pick<ReadProblem, 'code' | 'place' | 'sentence'> | null;
	facts: PreviewFacts | null;
	plots: PreviewPlot[];
}

const LINES_SHOWN = 24;
const CELLS_SHOWN = 420;
const CURVES = 6;
const PLOT_POINTS = 240;
/** Two cycles of 50 Hz: enough to see the shape. */
const PLOT_TIME_S = 0.04;

/** What a layout makes of a file, told from its two ends. */
export function previewTable(
	ends: FileEnds,
	layout: ToldLayout,
	nominalFrequency_Hz: number | null
): TablePreview {
	const whole = ends.head.length >= ends.size_bytes;
	const head = { name: ends.name, bytes: whole ? ends.head : upToLastLine(ends.head) };
	const opened = openText(handleOf(head), layout);
	const lines = opened.ok ? previewLines(opened.value.head.lines, layout) : [];
	const read = openDelimitedText([handleOf(head)], { layout });
	if (!read.ok) return { lines, problem: read.problem, facts: null, plots: [] };
	const content = read.value;
	const facts = factsOf(content, nominalFrequency_Hz);
	if (!whole) estimate(facts, ends, head.bytes.length, layout, content);
	return { lines, problem: null, facts, plots: plotsOf(content) };
}

/** Cut where a line ends; a two-byte encoding keeps whole characters. */
function upToLastLine(bytes: Uint8Array): Uint8Array {
	let end = bytes.length;
	while (end > 0 && bytes[end - 1] !== 0x0a && bytes[end - 1] !== 0x0d) end--;
	if (end === 0) return bytes;
	return bytes.subarray(
		0,
		bytes[end] === 0 && asciiCompatibleBytes(bytes.subarray(0, 512)).wasUtf16 ? end + 1 : end
	);
}

function previewLines(texts: readonly string[], layout: ToldLayout): PreviewLine[] {
	const first = Math.min(layout.firstDataLine, ...layout.headingLines, layout.unitsLine ?? Infinity);
	// A long preamble is shown from its end: what matters stands around the headings.
	const from = Math.max(1, Math.min(first - 6, layout.firstDataLine - 12));
	return texts.slice(from - 1, from - 1 + LINES_SHOWN).flatMap((text, offset) => {
		const line = from + offset;
		if (text.trim() === '') return [];
		const kind: PreviewLine['kind'] = layout.headingLines.includes(line)
			? 'heading'
			: line === layout.unitsLine
				? 'units'
				: line >= layout.firstDataLine
					? 'values'
					: 'passed';
		const cells =
			kind === 'passed' ? [text.slice(0, 200)] : splitFields(text, layout.separator).slice(0, CELLS_SHOWN);
		return [{ line, kind, cells: cells.map((cell) => cell.trim()) }];
	});
}

function factsOf(content: CaptureSource | Trend, nominalFrequency_Hz: number | null): PreviewFacts {
	const facts = captureFacts(content, nominalFrequency_Hz);
	return {
		kind: facts.kind,
		variant: facts.variant,
		samplingRate_Hz: facts.samplingRate_Hz?.lowest ?? null,
		interval_s: facts.interval_s,
		count: facts.sampleCount,
		isEstimate: false,
		start: facts.start,
		duration_s: facts.duration_s,
		highestOrder: facts.highestOrder,
		seriesCount: facts.channelCount,
		remarks: facts.remarks
	};
}

/** Counts and length from the size of the file, and the last rows read for themselves. */
function estimate(
	facts: PreviewFacts,
	ends: FileEnds,
	read_bytes: number,
	layout: ToldLayout,
	content: CaptureSource | Trend
): void {
	facts.count = Math.round((facts.count * ends.size_bytes) / read_bytes);
	facts.isEstimate = true;
	const spacing_s = facts.interval_s ?? (facts.samplingRate_Hz === null ? null : 1 / facts.samplingRate_Hz);
	facts.duration_s = spacing_s === null ? null : facts.count * spacing_s;
	const tail = openDelimitedText([handleOf({ name: ends.name, bytes: ends.tail })], {
		// The first line of the tail is cut: rows begin after it.
		layout: { ...layout, headingLines: [], unitsLine: null, firstDataLine: 2 }
	});
	if (!tail.ok)
		facts.remarks = [
			...facts.remarks,
			{
				severity: 'warning',
				code: 'end-unlike-beginning',
				sentence: `The end of ${ends.name} does not read like its beginning: ${tail.problem.sentence}`
			}
		];
	else if (content.kind === 'trend' && tail.value.kind === 'trend') {
		const end = tail.value;
		const last_s = end.intervalStarts_s[end.intervalStarts_s.length - 1] ?? 0;
		facts.duration_s = secondsBetween(content.start, end.start) + last_s + content.interval_s;
	}
}

function secondsBetween(one: RecordingStart, other: RecordingStart): number {
	const at = ({ local, utcOffset_min }: RecordingStart) =>
		Date.parse(`${local.slice(0, 23)}Z`) / 1000 - (utcOffset_min ?? 0) * 60;
	return at(other) - at(one);
}

function plotsOf(content: CaptureSource | Trend): PreviewPlot[] {
	return content.kind === 'trend' ? trendPlots(content) : waveformPlots(content);
}

function waveformPlots(source: CaptureSource): PreviewPlot[] {
	const { samples, segments, channels } = source;
	if (samples.kind !== 'memory') return [];
	const rate_Hz = segments[0]?.samplingRate_Hz;
	const stamps = source.timeStamps_s;
	const timeOf = (sample: number) => stamps?.[sample] ?? sample / (rate_Hz ?? 1);
	let count = 0;
	while (count < source.sampleCount && (count < 2 || timeOf(count) <= PLOT_TIME_S)) count++;
	const positions = thinned(count);
	return byUnit(
		channels.map((channel) => ({
			name: channel.name,
			unit: channel.baseUnit,
			values: positions.map((at) => plain(samples.channels[channel.index]![at] as number))
		})),
		positions.map(timeOf)
	);
}

function trendPlots(trend: Trend): PreviewPlot[] {
	const positions = thinned(trend.intervalStarts_s.length);
	const WORDS = { 'percent-of-fundamental': '%', V: 'V', A: 'A', Hz: 'Hz' } as const;
	return byUnit(
		trend.series
			.filter(({ measure }) => measure.kind !== 'order' || measure.order !== 1)
			.slice(0, 40)
			.map((series) => {
				const { values } = series;
				return {
					name: series.name,
					unit: WORDS[series.unit],
					values: positions.map((at) => plain(values[at] as number))
				};
			}),
		positions.map((at) => trend.intervalStarts_s[at] as number)
	);
}

function thinned(count: number): number[] {
	const step = Math.max(1, Math.ceil(count / PLOT_POINTS));
	return Array.from({ length: Math.ceil(count / step) }, (_, index) => index * step);
}

function plain(value: number): number | null {
	return Number.isNaN(value) ? null : Number(value.toPrecision(6));
}

/** At most two pictures of a few curves: quantities of one unit share a scale. */
function byUnit(
	curves: { name: string; unit: string; values: (number | null)[] }[],
	x_s: number[]
): PreviewPlot[] {
	const units = [...new Set(curves.map(({ unit }) => unit))].slice(0, 2);
	return units.map((unit) => ({
		unit,
		x_s,
		series: curves
			.filter((curve) => curve.unit === unit)
			.slice(0, CURVES)
			.map(({ name, values }) => ({ name, values }))
	}));
}
