import type { FuzzedReader } from '../../scripts/fuzz/fuzzed-reader';

const seeds = () => [[{ name: 'a.csv', bytes: Uint8Array.of(1, 2, 3) }]];
const kept: Uint8Array[] = [];

/** Readers with a fault each, at their second input: the watch has to notice every one of them. */
export const FUZZED_READERS: FuzzedReader[] = [
	planted('throws', () => {
		throw new RangeError('planted');
	}),
	planted('hangs', () => {
		for (;;);
	}),
	planted('eats-memory', () => {
		for (;;) kept.push(new Uint8Array(1 << 20).fill(1));
	}),
	planted('takes-much', () => void new Uint8Array(300 << 20).fill(1)),
	planted('dies', () => process.exit(3))
];

function planted(name: string, fault: () => void): FuzzedReader {
	let read = 0;
	return {
		name,
		seeds,
		faults() {
			if (++read === 2) fault();
			return [];
		}
	};
}
