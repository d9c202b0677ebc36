import { z } from 'zod';

/**
 * Least and greatest values of a capture at every zoom, in one blob.
 *
 * Level 0 is the samples themselves; one entry of level n stands for 16ⁿ samples and has the least and the greatest
 * of them per channel, in the base unit of the channel, as float32; NaN where every sample is missing. A tile is 4096
 * consecutive entries of one level, all channels, and lies in one piece:
 *
 *     [entries] float64 start of each entry, seconds after sample 0   (only where samples have time stamps of their own)
 *     per channel  [entries] float32 values                           (level 0)
 *                  [entries] float32 least, [entries] float32 greatest  (levels from 1)
 *
 * A tile is written as soon as its last sample has been seen, lower levels first, so that a capture of any length is
 * written in one pass with one tile per level in memory. The blob begins with a head that describes it:
 * "SWPY", uint32 bytes of what follows, this layout as JSON. All little-endian.
 */
export const PYRAMID_VERSION = 1;
/** Entries of one level that make one of the next. */
export const REDUCTION = 16;
/** A power of `REDUCTION`, so that whole tiles make whole entries. */
export const TILE_ENTRIES = 4096;

const rowLayout = z.object({
	format: z.enum(['uint8', 'int16', 'int24', 'int32', 'float32', 'float64']),
	lowestIsValue: z.boolean().optional(),
	rowBytes: z.number().int().positive(),
	offsets: z.array(z.number().int()),
	factors: z.array(z.number()),
	additions: z.array(z.number())
});

const timing = z.discriminatedUnion('kind', [
	z.object({
		kind: z.literal('rates'),
		/** Cover [0, sampleCount); `start_s` is the time of `fromSample` after sample 0, gaps counted. */
		segments: z.array(
			z.object({
				samplingRate_Hz: z.number().positive(),
				fromSample: z.number().int(),
				toSample: z.number().int(),
				start_s: z.number()
			})
		)
	}),
	z.object({
		kind: z.literal('stamps'),
		/** Time of every so many samples, and of the end: enough to know where to look. */
		anchorEvery: z.number().int().positive(),
		anchors_s: z.array(z.number())
	})
]);
export type PyramidTiming = z.infer<typeof timing>;

export const pyramidLayout = z.object({
	version: z.literal(PYRAMID_VERSION),
	sampleCount: z.number().int().positive(),
	channelCount: z.number().int().positive(),
	levelCount: z.number().int().positive(),
	duration_s: z.number(),
	timing,
	/** Where the single samples are: here as well, or as rows of an original that lies in the same storage. */
	levelZero: z.discriminatedUnion('kind', [
		z.object({ kind: z.literal('stored') }),
		z.object({
			kind: z.literal('rows'),
			sha256: z.string(),
			firstByte: z.number().int(),
			layout: rowLayout
		})
	])
});
export type PyramidLayout = z.infer<typeof pyramidLayout>;

/** Kept with the capture: which blob, and what its head says. */
export const storedPyramid = z.object({ layout: pyramidLayout, firstTile_bytes: z.number().int() });
export type StoredPyramid = z.infer<typeof storedPyramid>;

export function samplesPerEntry(level: number): number {
	return REDUCTION ** level;
}

export function entryCount(layout: Pick<PyramidLayout, 'sampleCount'>, level: number): number {
	return Math.ceil(layout.sampleCount / samplesPerEntry(level));
}

export function tileCount(layout: Pick<PyramidLayout, 'sampleCount'>, level: number): number {
	return Math.ceil(entryCount(layout, level) / TILE_ENTRIES);
}

/** Levels until one tile holds the whole capture. */
export function levelCountFor(sampleCount: number): number {
	let level = 0;
	while (entryCount({ sampleCount }, level) > TILE_ENTRIES) level++;
	return level + 1;
}

export function tileEntries(layout: Pick<PyramidLayout, 'sampleCount'>, level: number, tile: number): number {
	return Math.max(0, Math.min(TILE_ENTRIES, entryCount(layout, level) - tile * TILE_ENTRIES));
}

export function entry_bytes(layout: Pick<PyramidLayout, 'channelCount' | 'timing'>, level: number): number {
	return (layout.timing.kind === 'stamps' ? 8 : 0) + layout.channelCount * (level === 0 ? 4 : 8);
}

/** Bytes of the tiles that a blob holds, its head not counted. */
export function tiles_bytes(layout: PyramidLayout): number {
	let sum = 0;
	for (let level = lowestStored(layout); level < layout.levelCount; level++)
		sum += entryCount(layout, level) * entry_bytes(layout, level);
	return sum;
}

export function lowestStored(layout: Pick<PyramidLayout, 'levelZero'>): 0 | 1 {
	return layout.levelZero.kind === 'stored' ? 0 : 1;
}

/**
 * Where a tile lies, counted from the first one. What was written before it follows from the order of writing: below
 * it everything that it stands for, above it whatever was complete by then.
 */
export function tilePlace(
	layout: PyramidLayout,
	level: number,
	tile: number
): { offset_bytes: number; length_bytes: number } {
	let offset_bytes = 0;
	for (let other = lowestStored(layout); other < layout.levelCount; other++) {
		const tilesBefore =
			other < level
				? (tile + 1) * REDUCTION ** (level - other)
				: Math.floor(tile / REDUCTION ** (other - level));
		const entries = Math.min(entryCount(layout, other), tilesBefore * TILE_ENTRIES);
		offset_bytes += entries * entry_bytes(layout, other);
	}
	return { offset_bytes, length_bytes: tileEntries(layout, level, tile) * entry_bytes(layout, level) };
}
