/** A seeded source of random numbers: the same seed gives the same sequence on every machine. */
export interface RandomSource {
	/** Evenly spread over [0, 1). */
	uniform(): number;
	/** Normal distribution, mean 0, standard deviation 1. */
	normal(): number;
}

/**
 * 32-bit counter generator with multiplicative mixing; good enough for noise, not for secrets.
 * seed  any whole number; its lowest 32 bits count
 */
export function seededRandom(seed: number): RandomSource {
	let state = seed >>> 0;
	function uniform(): number {
		state = (state + 0x6d2b79f5) >>> 0;
		let mixed = Math.imul(state ^ (state >>> 15), state | 1);
		mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
		return ((mixed ^ (mixed >>> 14)) >>> 0) / 4294967296;
	}
	function normal(): number {
		// Box and Muller; 1 − u keeps the logarithm finite.
		return Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());
	}
	return { uniform, normal };
}
