import type { CaptureHandle } from '../../capture-handle';

/** A chunk of a RIFF file: bytes [start, end), as far as the file reaches. */
export interface RiffChunk {
	/** Four letters. */
	id: string;
	start: number;
	end: number;
	/** Size as its header states it (ds64 taken into account); null where the header leaves it open. */
	stated_bytes: number | null;
}

/** More chunks than this are no recording, but a way to keep a reader busy. */
const MOST_CHUNKS = 4096;
const OPEN_SIZE = 0xffff_ffff;
const HEAD_BYTES = 12;

export type RiffForm = 'RIFF' | 'RF64' | 'BW64';

/** Four letters at a place; empty beyond the end. */
function lettersAt(file: CaptureHandle, at: number): string {
	if (at + 4 > file.size_bytes) return '';
	const bytes = new Uint8Array(4);
	file.read(at, bytes);
	return String.fromCharCode(...bytes);
}

/** The kind of RIFF file, and of what ("WAVE"); null for anything else. */
export function riffForm(file: CaptureHandle): { form: RiffForm | 'RIFX'; of: string } | null {
	const form = lettersAt(file, 0);
	if (form !== 'RIFF' && form !== 'RIFX' && form !== 'RF64' && form !== 'BW64') return null;
	return { form, of: lettersAt(file, 8) };
}

/**
 * The chunks of a RIFF, RF64 (EBU Tech 3306) or BW64 (ITU-R BS.2088) file, in order. Sizes that the 64-bit forms keep in
 * their ds64 chunk are taken from there; an odd size is followed by one byte of padding. A data chunk whose size was left
 * open (0 or 0xFFFFFFFF, as a recorder writes it before it knows) reaches to the end of the file.
 */
export function riffChunks(file: CaptureHandle): RiffChunk[] {
	const chunks: RiffChunk[] = [];
	let longSizes = new Map<string, number>();
	let at = HEAD_BYTES;
	const head = new Uint8Array(8);
	const view = new DataView(head.buffer);
	while (at + 8 <= file.size_bytes && chunks.length < MOST_CHUNKS) {
		file.read(at, head);
		const id = String.fromCharCode(...head.subarray(0, 4));
		const short = view.getUint32(4, true);
		const start = at + 8;
		const present = file.size_bytes - start;
		let stated: number | null = short;
		if (short === OPEN_SIZE) stated = longSizes.get(id) ?? null;
		else if (id === 'data' && short === 0 && present > 0 && !isFollowedByChunks(file, start)) stated = null;
		const end = stated === null ? file.size_bytes : Math.min(file.size_bytes, start + stated);
		chunks.push({ id, start, end, stated_bytes: stated });
		if (id === 'ds64') longSizes = readLongSizes(file, start, end);
		if (stated === null || start + stated > file.size_bytes) break;
		at = start + stated + (stated % 2);
	}
	return chunks;
}

/** Whether chunks that end exactly with the file follow: then a size of 0 means what it says. */
function isFollowedByChunks(file: CaptureHandle, from: number): boolean {
	const head = new Uint8Array(8);
	const view = new DataView(head.buffer);
	let at = from;
	for (let count = 0; count < MOST_CHUNKS && at + 8 <= file.size_bytes; count++) {
		file.read(at, head);
		if (head.subarray(0, 4).some((byte) => byte < 0x20 || byte > 0x7e)) return false;
		const size = view.getUint32(4, true);
		at += 8 + size + (size % 2);
		if (at === file.size_bytes || at === file.size_bytes + 1) return true;
	}
	return false;
}

function readLongSizes(file: CaptureHandle, start: number, end: number): Map<string, number> {
	const sizes = new Map<string, number>();
	const bytes = new Uint8Array(Math.min(end - start, 28 + 12 * 256));
	if (bytes.length < 16) return sizes;
	file.read(start, bytes);
	const view = new DataView(bytes.buffer);
	sizes.set('data', Number(view.getBigUint64(8, true)));
	const count = bytes.length >= 28 ? view.getUint32(24, true) : 0;
	for (let entry = 0; entry < count && 28 + 12 * (entry + 1) <= bytes.length; entry++) {
		const place = 28 + 12 * entry;
		const id = String.fromCharCode(...bytes.subarray(place, place + 4));
		sizes.set(id, Number(view.getBigUint64(place + 4, true)));
	}
	return sizes;
}
