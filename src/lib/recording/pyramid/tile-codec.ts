/**
 * A tile on its way to the browser: the channels asked for, in the order asked.
 *
 *     0   4 bytes  "SWTL"
 *     4   uint16   version, 1
 *     6   uint16   1: start times follow; 2: least and greatest of each entry, not single samples
 *     8   uint32   level
 *     12  uint32   entries
 *     16  float64  number of the first entry
 *     24  uint32   channels
 *     28  uint32   reserved, 0
 *     32  uint32   index of each channel, padded with one more to a multiple of eight bytes
 *         float64  start of each entry, seconds after sample 0 (where flagged)
 *         float32  per channel its values, or its least and then its greatest
 *
 * Little-endian; values in the base unit of the channel; NaN where nothing was recorded.
 */
export interface Tile {
	level: number;
	firstEntry: number;
	entries: number;
	/** [entries] seconds after sample 0; null where rates tell the time. */
	starts_s: Float64Array | null;
	channels: TileChannel[];
}

export interface TileChannel {
	channelIndex: number;
	/** [entries]; the samples themselves at level 0, where both are the same. */
	least: Float32Array;
	greatest: Float32Array;
}

const MAGIC = 0x4c545753;
const VERSION = 1;
const HEAD_BYTES = 32;
const HAS_STARTS = 1;
const IS_PAIRS = 2;

function head_bytes(channelCount: number): number {
	return HEAD_BYTES + 4 * (channelCount + (channelCount % 2));
}

export function encodeTile(tile: Tile): Uint8Array<ArrayBuffer> {
	const { level, entries, starts_s, channels } = tile;
	const isPairs = level > 0;
	const head = head_bytes(channels.length);
	const bytes = new Uint8Array(
		head + (starts_s ? 8 * entries : 0) + channels.length * entries * (isPairs ? 8 : 4)
	);
	const view = new DataView(bytes.buffer);
	view.setUint32(0, MAGIC, true);
	view.setUint16(4, VERSION, true);
	view.setUint16(6, (starts_s ? HAS_STARTS : 0) | (isPairs ? IS_PAIRS : 0), true);
	view.setUint32(8, level, true);
	view.setUint32(12, entries, true);
	view.setFloat64(16, tile.firstEntry, true);
	view.setUint32(24, channels.length, true);
	channels.forEach(({ channelIndex }, c) => view.setUint32(HEAD_BYTES + 4 * c, channelIndex, true));
	let at = head;
	const put = (values: Float32Array | Float64Array) => {
		bytes.set(new Uint8Array(values.buffer, values.byteOffset, values.byteLength), at);
		at += values.byteLength;
	};
	if (starts_s) put(starts_s);
	for (const { least, greatest } of channels) {
		put(least);
		if (isPairs) put(greatest);
	}
	return bytes;
}

/** Throws when the bytes are no tile: a cut connection, or another version. The arrays are views of `bytes`. */
export function decodeTile(bytes: ArrayBuffer): Tile {
	if (bytes.byteLength < HEAD_BYTES) throw new Error('the tile is cut short');
	const view = new DataView(bytes);
	if (view.getUint32(0, true) !== MAGIC || view.getUint16(4, true) !== VERSION)
		throw new Error('these bytes are no tile of this version');
	const flags = view.getUint16(6, true);
	const entries = view.getUint32(12, true);
	const channelCount = view.getUint32(24, true);
	const isPairs = (flags & IS_PAIRS) !== 0;
	let at = head_bytes(channelCount);
	const expected = at + (flags & HAS_STARTS ? 8 * entries : 0) + channelCount * entries * (isPairs ? 8 : 4);
	if (bytes.byteLength !== expected)
		throw new Error('the tile does not have the length that its head states');
	let starts_s: Float64Array | null = null;
	if (flags & HAS_STARTS) {
		starts_s = new Float64Array(bytes, at, entries);
		at += 8 * entries;
	}
	const take = () => {
		const values = new Float32Array(bytes, at, entries);
		at += 4 * entries;
		return values;
	};
	const channels = Array.from({ length: channelCount }, (_, c): TileChannel => {
		const least = take();
		return {
			channelIndex: view.getUint32(HEAD_BYTES + 4 * c, true),
			least,
			greatest: isPairs ? take() : least
		};
	});
	return {
		level: view.getUint32(8, true),
		firstEntry: view.getFloat64(16, true),
		entries,
		starts_s,
		channels
	};
}
