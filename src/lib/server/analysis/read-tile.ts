import { decodeChannel } from '../../numerics/kernels/raw-value';
import {
	tileEntries,
	tilePlace,
	TILE_ENTRIES,
	type StoredPyramid
} from '../../recording/pyramid/pyramid-layout';
import type { Tile, TileChannel } from '../../recording/pyramid/tile-codec';
import type { BlobStore } from '../storage/blob-store';
import { bufferToFloat32, bufferToFloat64 } from './series-codec';

/**
 * One tile of a stored pyramid, read in one piece.
 * channelIndexes  all of them among the channels of the capture
 * returns         null where the pyramid has no such tile
 */
export async function readTile(
	blobs: Pick<BlobStore, 'readSlice'>,
	sha256: string,
	{ layout, firstTile_bytes }: StoredPyramid,
	level: number,
	tile: number,
	channelIndexes: readonly number[]
): Promise<Tile | null> {
	if (level >= layout.levelCount) return null;
	const entries = tileEntries(layout, level, tile);
	if (entries === 0) return null;
	const common = { level, firstEntry: tile * TILE_ENTRIES, entries };
	if (level === 0 && layout.levelZero.kind === 'rows') {
		const { sha256: original, firstByte, layout: rows } = layout.levelZero;
		const bytes = await blobs.readSlice(
			original,
			firstByte + common.firstEntry * rows.rowBytes,
			entries * rows.rowBytes
		);
		const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
		const decoded = new Float64Array(entries);
		const channels = channelIndexes.map((channelIndex): TileChannel => {
			decodeChannel(view, rows, channelIndex, entries, decoded, 0);
			const values = Float32Array.from(decoded);
			return { channelIndex, least: values, greatest: values };
		});
		return { ...common, starts_s: null, channels };
	}
	const { offset_bytes, length_bytes } = tilePlace(layout, level, tile);
	const bytes = await blobs.readSlice(sha256, firstTile_bytes + offset_bytes, length_bytes);
	if (bytes.byteLength !== length_bytes) throw new Error(`pyramid ${sha256} is shorter than its head states`);
	const isStamped = layout.timing.kind === 'stamps';
	const first = isStamped ? 8 * entries : 0;
	const each = 4 * entries;
	const part = (at: number) => bufferToFloat32(bytes.subarray(at, at + each));
	const channels = channelIndexes.map((channelIndex): TileChannel => {
		const at = first + channelIndex * each * (level === 0 ? 1 : 2);
		const least = part(at);
		return { channelIndex, least, greatest: level === 0 ? least : part(at + each) };
	});
	return { ...common, starts_s: isStamped ? bufferToFloat64(bytes.subarray(0, first)) : null, channels };
}
