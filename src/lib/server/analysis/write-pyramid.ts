import { Readable } from 'node:stream';
import { viewChannels } from '../../harmonics/engine/channel-view';
import { layOutPyramid, pyramidHead, pyramidTiles } from '../../recording/pyramid/make-pyramid';
import { TILE_ENTRIES, type PyramidLayout, type StoredPyramid } from '../../recording/pyramid/pyramid-layout';
import type { CaptureSource } from '../../recording/sample-source';
import type { BlobStore, StoredBlob } from '../storage/blob-store';

/** Samples decoded at a time; whole tiles. */
const BLOCK = 4 * TILE_ENTRIES;

/**
 * Goes once through a capture and stores its pyramid.
 * onProgress  told the samples gone through; may throw to stop, and nothing is stored then
 */
export async function writePyramid(
	blobs: Pick<BlobStore, 'putStream'>,
	source: CaptureSource,
	levelZero: PyramidLayout['levelZero'],
	onProgress: (done: number) => Promise<void>
): Promise<{ blob: StoredBlob; stored: StoredPyramid }> {
	const layout = layOutPyramid(source, levelZero);
	const head = pyramidHead(layout);
	const view = viewChannels(
		source,
		source.channels.map((channel) => channel.index),
		BLOCK
	);
	async function* bytes(): AsyncGenerator<Uint8Array> {
		yield head;
		let told = 0;
		for (const piece of pyramidTiles(layout, view, source.timeStamps_s)) {
			yield piece.bytes;
			if (piece.done - told < BLOCK) continue;
			told = piece.done;
			await onProgress(told);
		}
	}
	const blob = await blobs.putStream(Readable.from(bytes(), { objectMode: true }), Number.MAX_SAFE_INTEGER);
	return { blob, stored: { layout, firstTile_bytes: head.byteLength } };
}
