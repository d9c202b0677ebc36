import type { Arbitrary } from 'fast-check';
import type { CaptureFile } from '../../src/lib/recording/recording';
import type { InputRandom } from './input-random';

/** One way into the readers, with files that it reads and files made up from nothing. */
export interface FuzzedReader {
	name: string;
	/** Sets of files that are read without a fault; what is damaged is a copy of one of them. */
	seeds(): CaptureFile[][];
	/** Files with something of the structure of the format and nothing of its sense. */
	madeUp?: Arbitrary<CaptureFile[]>;
	/**
	 * Reads the files and says what is wrong with the outcome; empty when all is well. A thrown exception, too much time or
	 * too much memory is noticed by the caller.
	 */
	faults(files: CaptureFile[], random: InputRandom): string[];
}
