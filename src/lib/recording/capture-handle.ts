import type { CaptureFile } from './recording';

/** A file that can be read piece by piece. Who made it decides where the bytes are; readers only ask. */
export interface CaptureHandle {
	/** File name as uploaded. */
	name: string;
	size_bytes: number;
	/** Fills `into` with the bytes from `offset_bytes` on; throws when they cannot be had. */
	read(offset_bytes: number, into: Uint8Array): void;
}

/** The whole file in memory. */
export function loadFile(handle: CaptureHandle): CaptureFile {
	const bytes = new Uint8Array(handle.size_bytes);
	handle.read(0, bytes);
	return { name: handle.name, bytes };
}

/** A file in memory as a handle. */
export function handleOf({ name, bytes }: CaptureFile): CaptureHandle {
	return {
		name,
		size_bytes: bytes.length,
		read: (offset_bytes, into) => into.set(bytes.subarray(offset_bytes, offset_bytes + into.length))
	};
}
