import fc from 'fast-check';
import type { CaptureFile } from '../../src/lib/recording/recording';
import type { FuzzedReader } from './fuzzed-reader';
import { inputRandom, inputSeed, type InputRandom } from './input-random';
import { mutate } from './mutations';

export interface FuzzInput {
	files: CaptureFile[];
	random: InputRandom;
}

/** Share of inputs that are made up from nothing; the others are damaged copies of files that are read. */
const MADE_UP = 0.2;

/** Makes inputs of one reader, any of them by its number. */
export function inputMaker(reader: FuzzedReader, seed: number): (input: number) => FuzzInput {
	const sets = reader.seeds();
	const corpus = sets.flat();
	return (input) => {
		const ownSeed = inputSeed(seed, reader.name, input);
		const random = inputRandom(ownSeed);
		// The first inputs are the seeds themselves: what is valid has to pass as well.
		if (input < sets.length) return { files: sets[input]!, random };
		if (reader.madeUp && random.chance(MADE_UP))
			return { files: fc.sample(reader.madeUp, { seed: ownSeed | 0, numRuns: 1 })[0]!, random };
		return { files: mutate(random.pick(sets), random, corpus), random };
	};
}

/** What is wrong with the outcome of one input; an exception is a fault as well. */
export function faultsOf(reader: FuzzedReader, { files, random }: FuzzInput): string[] {
	try {
		return reader.faults(files, random);
	} catch (cause) {
		return [`thrown: ${cause instanceof Error ? (cause.stack ?? cause.message) : String(cause)}`];
	}
}
