import type { RecordingFrame } from '../sample-source';
import { recordingDuration_s } from '../capture-facts';
import {
	entry_bytes,
	levelCountFor,
	lowestStored,
	PYRAMID_VERSION,
	REDUCTION,
	TILE_ENTRIES,
	type PyramidLayout,
	type PyramidTiming
} from './pyramid-layout';

/** Anchors that a capture with time stamps gets at most, beside its end. */
const MOST_ANCHORS = 4096;

function timingOf(recording: RecordingFrame): PyramidTiming {
	const { timeStamps_s, sampleCount } = recording;
	if (timeStamps_s) {
		const anchorEvery = Math.ceil(sampleCount / MOST_ANCHORS);
		const anchors_s: number[] = [];
		for (let i = 0; i < sampleCount; i += anchorEvery) anchors_s.push(timeStamps_s[i]!);
		return { kind: 'stamps', anchorEvery, anchors_s: [...anchors_s, recordingDuration_s(recording)] };
	}
	let start_s = 0;
	const segments = recording.segments.map(({ samplingRate_Hz, fromSample, toSample, gapBefore_s }) => {
		start_s += gapBefore_s ?? 0;
		const timed = { samplingRate_Hz, fromSample, toSample, start_s };
		start_s += (toSample - fromSample) / samplingRate_Hz;
		return timed;
	});
	return { kind: 'rates', segments };
}

/** levelZero  where single samples will be read from */
export function layOutPyramid(
	recording: RecordingFrame,
	levelZero: PyramidLayout['levelZero']
): PyramidLayout {
	return {
		version: PYRAMID_VERSION,
		sampleCount: recording.sampleCount,
		channelCount: recording.channels.length,
		levelCount: levelCountFor(recording.sampleCount),
		duration_s: recordingDuration_s(recording),
		timing: timingOf(recording),
		// Stamps need their times beside the samples.
		levelZero: recording.timeStamps_s ? { kind: 'stored' } : levelZero
	};
}

const MAGIC = [0x53, 0x57, 0x50, 0x59];

/** "SWPY", length, layout as JSON, padded with blanks to eight bytes. */
export function pyramidHead(layout: PyramidLayout): Uint8Array {
	const plain = new TextEncoder().encode(JSON.stringify(layout));
	const length = Math.ceil(plain.length / 8) * 8;
	const head = new Uint8Array(8 + length).fill(0x20);
	head.set(MAGIC);
	new DataView(head.buffer).setUint32(4, length, true);
	head.set(plain, 8);
	return head;
}

/** Samples of all channels, a moving part of them at a time; position `i` is `samples[c][i − base]` after `cover`. */
export interface SampleBlocks {
	readonly samples: readonly Float64Array[];
	readonly base: number;
	cover(from: number, to: number): void;
}

/** The tile of one level that is being filled: per channel least and greatest; at level 0 both are the samples. */
interface OpenTile {
	least: Float32Array[];
	greatest: Float32Array[];
	starts_s: Float64Array | null;
	filled: number;
}

export interface PyramidPiece {
	bytes: Uint8Array;
	/** Samples that have been gone through. */
	done: number;
}

/**
 * The tiles of a capture in the order in which they lie in the blob. At most one tile per level is held.
 * blocks        gives at least TILE_ENTRIES samples at a time
 * timeStamps_s  [sampleCount] where samples have stamps of their own
 */
export function* pyramidTiles(
	layout: PyramidLayout,
	blocks: SampleBlocks,
	timeStamps_s: Float64Array | null
): Generator<PyramidPiece> {
	const channels = Array.from({ length: layout.channelCount }, (_, c) => c);
	const open: OpenTile[] = Array.from({ length: layout.levelCount }, (_, level) => {
		const least = channels.map(() => new Float32Array(TILE_ENTRIES));
		return {
			least,
			greatest: level === 0 ? least : channels.map(() => new Float32Array(TILE_ENTRIES)),
			starts_s: layout.timing.kind === 'stamps' ? new Float64Array(TILE_ENTRIES) : null,
			filled: 0
		};
	});

	/** Hands a tile up: its entries reduced into the next level, its bytes when they are to be stored. */
	function* close(level: number, done: number): Generator<PyramidPiece> {
		const tile = open[level]!;
		const next = open[level + 1];
		if (level >= lowestStored(layout)) yield { bytes: tileBytes(layout, level, tile), done };
		if (next) reduceInto(next, tile);
		tile.filled = 0;
		if (next?.filled === TILE_ENTRIES) yield* close(level + 1, done);
	}

	for (let from = 0; from < layout.sampleCount; from += TILE_ENTRIES) {
		const to = Math.min(layout.sampleCount, from + TILE_ENTRIES);
		blocks.cover(from, to);
		const tile = open[0]!;
		for (const c of channels)
			tile.least[c]!.set(blocks.samples[c]!.subarray(from - blocks.base, to - blocks.base));
		if (timeStamps_s) tile.starts_s?.set(timeStamps_s.subarray(from, to));
		tile.filled = to - from;
		yield* close(0, to);
	}
	for (let level = 1; level < layout.levelCount; level++)
		if (open[level]!.filled > 0) yield* close(level, layout.sampleCount);
}

/** Least and greatest of every REDUCTION entries, behind what `into` already holds. */
function reduceInto(into: OpenTile, from: OpenTile): void {
	const count = Math.ceil(from.filled / REDUCTION);
	for (let c = 0; c < from.least.length; c++) {
		const least = from.least[c]!;
		const greatest = from.greatest[c]!;
		for (let k = 0; k < count; k++) {
			const end = Math.min(from.filled, (k + 1) * REDUCTION);
			let low = NaN;
			let high = NaN;
			for (let i = k * REDUCTION; i < end; i++) {
				const below = least[i]!;
				const above = greatest[i]!;
				if (below < low || low !== low) low = below;
				if (above > high || high !== high) high = above;
			}
			into.least[c]![into.filled + k] = low;
			into.greatest[c]![into.filled + k] = high;
		}
	}
	if (from.starts_s && into.starts_s)
		for (let k = 0; k < count; k++) into.starts_s[into.filled + k] = from.starts_s[k * REDUCTION]!;
	into.filled += count;
}

function tileBytes(layout: PyramidLayout, level: number, tile: OpenTile): Uint8Array {
	const bytes = new Uint8Array(tile.filled * entry_bytes(layout, level));
	let at = 0;
	const put = (values: Float32Array | Float64Array) => {
		const part = values.subarray(0, tile.filled);
		bytes.set(new Uint8Array(part.buffer, part.byteOffset, part.byteLength), at);
		at += part.byteLength;
	};
	if (tile.starts_s) put(tile.starts_s);
	for (let c = 0; c < layout.channelCount; c++) {
		put(tile.least[c]!);
		if (level > 0) put(tile.greatest[c]!);
	}
	return bytes;
}
