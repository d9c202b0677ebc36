import { seededRandom } from '../../src/lib/synthesis/waveform-random';

/** Random choices of one input; the same seed, reader and number give the same input on every machine. */
export interface InputRandom {
	/** Evenly spread over [0, 1). */
	uniform(): number;
	/** A whole number in [0, below). */
	whole(below: number): number;
	pick<T>(from: readonly T[]): T;
	chance(probability: number): boolean;
}

/** Mixes the bytes of a text into a whole number of 32 bits (FNV-1a). */
function mixed(text: string): number {
	let hash = 0x811c9dc5;
	for (let i = 0; i < text.length; i++) hash = Math.imul(hash ^ text.charCodeAt(i), 0x01000193);
	return hash >>> 0;
}

export function inputSeed(seed: number, reader: string, input: number): number {
	return mixed(`${seed}/${reader}/${input}`);
}

export function inputRandom(seed: number): InputRandom {
	const { uniform } = seededRandom(seed);
	// The first numbers of neighbouring seeds are alike.
	for (let i = 0; i < 4; i++) uniform();
	const whole = (below: number) => Math.floor(uniform() * below);
	return {
		uniform,
		whole,
		pick: <T>(from: readonly T[]) => from[whole(from.length)]!,
		chance: (probability) => uniform() < probability
	};
}
