import { REDUCTION, samplesPerEntry, TILE_ENTRIES } from '$lib/recording/pyramid/pyramid-layout';
import type { Tile } from '$lib/recording/pyramid/tile-codec';
import type { TimeAxis } from '$lib/recording/pyramid/time-axis';
import type { TileKey } from './tile-store';
import type { ViewRange } from './view-range';

export interface PyramidShape {
	sampleCount: number;
	levelCount: number;
}

/** Finest level that has no more than `REDUCTION` entries in a pixel: what is drawn is then never coarser than one. */
export function levelFor(samplesPerPixel: number, levelCount: number): number {
	let level = 0;
	while (level < levelCount - 1 && samplesPerPixel >= samplesPerEntry(level + 1)) level++;
	return level;
}

export interface ViewPlan {
	level: number;
	/** Sample numbers that the view begins and ends with. */
	fromSample: number;
	toSample: number;
	needed: TileKey[];
	/** Neighbours on either side, and what stands over them while a finer level is on its way. */
	ahead: TileKey[];
}

/** Which tiles a view of so many pixels needs, and which it is likely to need next. */
export function planView(
	range: ViewRange,
	width_px: number,
	axis: TimeAxis,
	{ sampleCount, levelCount }: PyramidShape
): ViewPlan {
	const fromSample = Math.max(0, Math.floor(axis.indexAt(range.from_s)) - 1);
	const toSample = Math.min(sampleCount, Math.ceil(axis.indexAt(range.to_s)) + 2);
	const level = levelFor((toSample - fromSample) / Math.max(1, width_px), levelCount);
	const each = samplesPerEntry(level) * TILE_ENTRIES;
	const last = Math.floor((sampleCount - 1) / each);
	const first = Math.floor(fromSample / each);
	const end = Math.min(last, Math.floor(Math.max(fromSample, toSample - 1) / each));
	const needed: TileKey[] = [];
	for (let tile = first; tile <= end; tile++) needed.push({ level, tile });
	const ahead: TileKey[] = [];
	if (end < last) ahead.push({ level, tile: end + 1 });
	if (first > 0) ahead.push({ level, tile: first - 1 });
	if (level + 1 < levelCount) {
		const middle = Math.floor((first + end) / 2 / REDUCTION);
		ahead.push({ level: level + 1, tile: middle });
	}
	if (level > 0) {
		const middle = (fromSample + toSample) / 2;
		ahead.push({ level: level - 1, tile: Math.floor((middle * REDUCTION) / each) });
	}
	return { level, fromSample, toSample, needed, ahead };
}

/** Entries behind each pixel; where the level wanted has not come yet, those of a coarser one that has. */
export interface PixelEntries {
	width_px: number;
	/** [width] −1 where there is nothing to draw: a gap, or nothing has come. */
	level: Int8Array;
	from: Float64Array;
	to: Float64Array;
	/** Whether every pixel has the level that was planned. */
	isComplete: boolean;
}

export function pixelEntries(
	range: ViewRange,
	width_px: number,
	axis: TimeAxis,
	shape: PyramidShape,
	level: number,
	hasTile: (level: number, tile: number) => boolean
): PixelEntries {
	const out: PixelEntries = {
		width_px,
		level: new Int8Array(width_px).fill(-1),
		from: new Float64Array(width_px),
		to: new Float64Array(width_px),
		isComplete: true
	};
	const step_s = (range.to_s - range.from_s) / width_px;
	let begin = axis.indexAt(range.from_s);
	for (let x = 0; x < width_px; x++) {
		const end = axis.indexAt(range.from_s + (x + 1) * step_s);
		const first = begin;
		begin = end;
		if (!(end > first)) continue;
		for (let at = level; at < shape.levelCount; at++) {
			const per = samplesPerEntry(at);
			const from = Math.floor(first / per);
			const to = Math.min(Math.ceil(shape.sampleCount / per), Math.max(from + 1, Math.ceil(end / per)));
			const isThere =
				hasTile(at, Math.floor(from / TILE_ENTRIES)) && hasTile(at, Math.floor((to - 1) / TILE_ENTRIES));
			if (!isThere) {
				out.isComplete = false;
				continue;
			}
			out.level[x] = at;
			out.from[x] = from;
			out.to[x] = to;
			break;
		}
	}
	return out;
}

/** Least and greatest of one channel behind each pixel; NaN where nothing was recorded. */
export interface Columns {
	least: Float32Array;
	greatest: Float32Array;
}

/** place  of the channel among the channels of the tiles */
export function columnsOf(
	pixels: PixelEntries,
	place: number,
	tileAt: (level: number, tile: number) => Tile | null
): Columns {
	const { width_px } = pixels;
	const least = new Float32Array(width_px).fill(NaN);
	const greatest = new Float32Array(width_px).fill(NaN);
	let heldLevel = -1;
	let heldTile = -1;
	let lows: Float32Array | undefined;
	let highs: Float32Array | undefined;
	for (let x = 0; x < width_px; x++) {
		const level = pixels.level[x]!;
		if (level < 0) continue;
		let low = NaN;
		let high = NaN;
		const to = pixels.to[x]!;
		for (let entry = pixels.from[x]!; entry < to;) {
			const tile = Math.floor(entry / TILE_ENTRIES);
			if (tile !== heldTile || level !== heldLevel) {
				const channel = tileAt(level, tile)?.channels[place];
				lows = channel?.least;
				highs = channel?.greatest;
				heldLevel = level;
				heldTile = tile;
			}
			const base = tile * TILE_ENTRIES;
			const end = Math.min(to, base + TILE_ENTRIES);
			if (lows && highs)
				for (let i = entry - base; i < end - base; i++) {
					const below = lows[i]!;
					const above = highs[i]!;
					if (below < low || low !== low) low = below;
					if (above > high || high !== high) high = above;
				}
			entry = end;
		}
		least[x] = low;
		greatest[x] = high;
	}
	return { least, greatest };
}

/** Single samples of a stretch: times and, per channel place, values. NaN breaks a line. */
export interface SampleRun {
	first: number;
	times_s: Float64Array;
	/** [channels][samples] */
	values: Float32Array[];
}

/** Null while a tile of the stretch is missing. */
export function samplesOf(
	fromSample: number,
	toSample: number,
	channelCount: number,
	axis: TimeAxis,
	tileAt: (level: number, tile: number) => Tile | null
): SampleRun | null {
	const count = Math.max(0, toSample - fromSample);
	const run: SampleRun = {
		first: fromSample,
		times_s: new Float64Array(count),
		values: Array.from({ length: channelCount }, () => new Float32Array(count).fill(NaN))
	};
	for (let sample = fromSample; sample < toSample;) {
		const number = Math.floor(sample / TILE_ENTRIES);
		const tile = tileAt(0, number);
		if (!tile) return null;
		const base = number * TILE_ENTRIES;
		const end = Math.min(toSample, base + TILE_ENTRIES);
		for (let c = 0; c < channelCount; c++)
			run.values[c]!.set(
				tile.channels[c]?.least.subarray(sample - base, end - base) ?? [],
				sample - fromSample
			);
		for (let i = sample; i < end; i++)
			run.times_s[i - fromSample] = tile.starts_s ? tile.starts_s[i - base]! : axis.timeOf(i);
		sample = end;
	}
	return run;
}
