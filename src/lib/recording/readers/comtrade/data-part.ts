import type { CaptureHandle } from '../../capture-handle';

/** Where the data of a recording lie: bytes [start, end) of a file, and the number of their first line in it. */
export interface DataPart {
	file: CaptureHandle;
	start: number;
	end: number;
	firstLine: number;
}

/** The first bytes of the data, at most `count`. */
export function headOf({ file, start, end }: DataPart, count: number): Uint8Array {
	const head = new Uint8Array(Math.min(count, end - start));
	file.read(start, head);
	return head;
}
