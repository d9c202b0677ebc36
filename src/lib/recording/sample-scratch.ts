import type { CaptureHandle } from './capture-handle';

/** A file under way: bytes are appended, then it is sealed and read piece by piece. */
export interface ScratchFile {
	append(bytes: Uint8Array): void;
	/** Ends the writing; what was appended can be read from now on. */
	seal(): CaptureHandle;
}

/**
 * Where a reader puts samples that it has to decode (text, packed records), so that a capture of any length fits in
 * memory. Who hands it over decides where the bytes lie and clears them away; readers only append and ask.
 */
export interface SampleScratch {
	create(): ScratchFile;
}
