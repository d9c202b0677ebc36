import type { CaptureFile } from '../../src/lib/recording/recording';

/** Readings that a search for a smaller input may take. */
const MOST_READINGS = 3000;

/** Leaves pieces of the files out, large ones first, as long as the fault stays. */
export function shrinkInput(
	files: readonly CaptureFile[],
	fails: (files: CaptureFile[]) => boolean
): CaptureFile[] {
	let smallest = files.map((file) => ({ ...file }));
	let readings = 0;
	const attempt = (candidate: CaptureFile[]): boolean => {
		if (++readings > MOST_READINGS || !fails(candidate)) return false;
		smallest = candidate;
		return true;
	};
	for (let at = 0; smallest.length > 1 && at < smallest.length;)
		if (!attempt(smallest.filter((_, i) => i !== at))) at++;
	for (let at = 0; at < smallest.length; at++) {
		const longest = smallest[at]!.bytes.length;
		for (let piece = 2 ** Math.floor(Math.log2(Math.max(1, longest))); piece >= 1; piece /= 2)
			for (let from = 0; from < smallest[at]!.bytes.length && readings < MOST_READINGS;) {
				const { name, bytes } = smallest[at]!;
				const without = Uint8Array.from([...bytes.subarray(0, from), ...bytes.subarray(from + piece)]);
				const candidate = smallest.map((file, i) => (i === at ? { name, bytes: without } : file));
				if (!attempt(candidate)) from += piece;
			}
	}
	return smallest;
}
