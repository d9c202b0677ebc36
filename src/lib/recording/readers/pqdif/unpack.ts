import { Unzlib } from 'fflate';

/** Packed bytes handed to the unpacker at a time: one step can grow them a thousandfold at most. */
const PIECE_BYTES = 1 << 14;

export type Unpacked = { kind: 'whole'; bytes: Uint8Array } | { kind: 'too-large' } | { kind: 'damaged' };

class TooLarge extends Error {}

/**
 * Unpacks a zlib stream (RFC 1950) piece by piece and stops as soon as more than `most_bytes` have come out,
 * so that a small file cannot fill the memory.
 * pieces   the packed bytes, in order
 * accept   takes what comes out, in order
 */
export function unpackPieces(
	pieces: Iterable<Uint8Array>,
	most_bytes: number,
	accept: (bytes: Uint8Array) => void
): 'whole' | 'too-large' | 'damaged' {
	let length = 0;
	let hasEnded = false;
	const stream = new Unzlib((bytes, isLast) => {
		length += bytes.length;
		if (length > most_bytes) throw new TooLarge();
		if (bytes.length > 0) accept(bytes);
		hasEnded ||= isLast;
	});
	try {
		for (const piece of pieces) {
			for (let at = 0; at < piece.length && !hasEnded; at += PIECE_BYTES)
				stream.push(piece.slice(at, at + PIECE_BYTES));
			if (hasEnded) break;
		}
		if (!hasEnded) stream.push(new Uint8Array(0), true);
		return 'whole';
	} catch (cause) {
		// The unpacker throws for damaged streams; everything it can throw means the same here.
		return cause instanceof TooLarge ? 'too-large' : 'damaged';
	}
}

/** One record's body. */
export function unpack(packed: Uint8Array, most_bytes: number): Unpacked {
	if (packed.length < 2 || (packed[0]! & 0x0f) !== 8 || ((packed[0]! << 8) | packed[1]!) % 31 !== 0)
		return { kind: 'damaged' };
	const parts: Uint8Array[] = [];
	const outcome = unpackPieces([packed], most_bytes, (bytes) => parts.push(bytes));
	if (outcome !== 'whole') return { kind: outcome };
	const bytes = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
	let at = 0;
	for (const part of parts) {
		bytes.set(part, at);
		at += part.length;
	}
	return { kind: 'whole', bytes };
}
