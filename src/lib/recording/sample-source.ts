import type { RowLayout } from '../numerics/kernels/signal-kernels';
import type { CaptureHandle } from './capture-handle';
import type { Recording, RecordingChannel } from './recording';

/** Samples that lie in memory, one array per analogue channel. */
export interface MemorySamples {
	kind: 'memory';
	/** [channels][sampleCount] base unit; NaN marks a missing sample. */
	channels: readonly Float64Array[];
}

/** Samples that are still rows of bytes, most often in a file; decoded block by block while they are analysed. */
export interface RowSamples {
	kind: 'rows';
	/** Place, factor and addition of every analogue channel; value in the base unit. */
	layout: RowLayout;
	/** Fills the start of `into` with rows [fromRow, fromRow + count); throws when the bytes cannot be had. */
	read(fromRow: number, count: number, into: Uint8Array): void;
	/** The file that the rows lie in, where there is one: others may open it as well. */
	file?: CaptureHandle;
	/** Byte of `file` where row 0 begins; 0 where absent. */
	firstByte?: number;
}

export type SampleSource = MemorySamples | RowSamples;

/** What is known of a channel beside its samples. */
export type SourceChannel = Omit<RecordingChannel, 'samples'>;

/** Everything of a recording but its samples. */
export type RecordingFrame = Omit<Recording, 'channels'> & { channels: readonly SourceChannel[] };

/** A recording whose samples are fetched when they are needed, so that its length does not matter. */
export type CaptureSource = RecordingFrame & { samples: SampleSource };

/** Rows that lie in a file from `firstByte` on. */
export function rowsInFile(layout: RowLayout, file: CaptureHandle, firstByte: number): RowSamples {
	return {
		kind: 'rows',
		layout,
		read: (fromRow, count, into) =>
			file.read(firstByte + fromRow * layout.rowBytes, into.subarray(0, count * layout.rowBytes)),
		file,
		firstByte
	};
}

/** A recording in memory as a source of samples; nothing is copied. */
export function sourceOf(recording: Recording): CaptureSource {
	return {
		...recording,
		samples: { kind: 'memory', channels: recording.channels.map((channel) => channel.samples) }
	};
}
