import { ok, type Result } from '../../../result';
import type { CaptureHandle } from '../../capture-handle';
import type { ReadProblem } from '../../recording';
import type { SampleScratch } from '../../sample-scratch';
import { refuse } from '../read-problem';
import type { RecordHeader } from './record-chain';
import { unpackPieces } from './unpack';

const PIECE_BYTES = 1 << 16;
/** Unpacked size: this many bytes, and so many times the packed size. */
const MOST_BYTES = 256 * 2 ** 20;
const MOST_GROWTH = 100;

/**
 * A file packed as a whole (the standard's older style): everything after the container is one zlib stream. Links count as
 * in the unpacked file, so container and unpacked rest together are what is read.
 */
export function unpackWholeFile(
	file: CaptureHandle,
	container: RecordHeader,
	scratch: SampleScratch
): Result<{ file: CaptureHandle; firstRecordAt: number }, ReadProblem> {
	const begin = container.bodyAt + container.stored_bytes;
	const rest = scratch.create();
	const outcome = unpackPieces(piecesOf(file, begin), MOST_BYTES + MOST_GROWTH * file.size_bytes, (bytes) =>
		rest.append(bytes)
	);
	const unpacked = rest.seal();
	if (outcome === 'too-large')
		return refuse(
			'pqdif-too-large',
			file.name,
			`byte ${begin}`,
			`${file.name} grows beyond ${MOST_BYTES + MOST_GROWTH * file.size_bytes} bytes when it is unpacked (from byte ${begin} on), which no recording does; it was not read.`
		);
	if (unpacked.size_bytes === 0)
		return refuse(
			'pqdif-packing-damaged',
			file.name,
			`byte ${begin}`,
			`${file.name} says that it is packed as a whole, but a zlib stream was expected from byte ${begin} on and there is none. The file is damaged; export it again.`
		);
	return ok({
		firstRecordAt: begin,
		file: {
			name: file.name,
			size_bytes: begin + unpacked.size_bytes,
			read(offset_bytes, into) {
				const inFile = Math.max(0, Math.min(into.length, begin - offset_bytes));
				if (inFile > 0) file.read(offset_bytes, into.subarray(0, inFile));
				if (inFile < into.length) unpacked.read(Math.max(0, offset_bytes - begin), into.subarray(inFile));
			}
		}
	});
}

function* piecesOf(file: CaptureHandle, from: number): Generator<Uint8Array> {
	for (let at = from; at < file.size_bytes; at += PIECE_BYTES) {
		const piece = new Uint8Array(Math.min(PIECE_BYTES, file.size_bytes - at));
		file.read(at, piece);
		yield piece;
	}
}
