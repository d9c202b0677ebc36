/** Blocks of up to this many complex values are transformed without twiddle factors. */
const LAST_PASS = 8;

/** What the transform of assembly/transform.ts looks up; computed once per window length. */
export interface TransformTables {
	/** Per pass of size > 8 and butterfly six numbers: re, im of w, w², w³ with w = exp(−j2πk/size); largest size first. */
	twiddles: Float64Array;
	/** Per line two byte offsets: complex lines k and M−k among values of 32 bytes in digit-reversed order. */
	places: Uint32Array;
	/** Per line re, im of −j/2·exp(−j2πk/points). */
	turns: Float64Array;
}

/**
 * points     window length 2M, a power of two ≥ 64
 * lineCount  lines 0 … lineCount−1 are wanted; ≤ M + 1
 */
export function transformTables(points: number, lineCount: number): TransformTables {
	const size = points / 2;
	return { twiddles: twiddles(size), places: places(size, lineCount), turns: turns(points, lineCount) };
}

function twiddles(largest: number): Float64Array {
	const numbers: number[] = [];
	for (let size = largest; size > LAST_PASS; size /= 4) {
		for (let k = 0; k < size / 4; k++) {
			for (let power = 1; power <= 3; power++) {
				const angle = (-2 * Math.PI * power * k) / size;
				numbers.push(Math.cos(angle), Math.sin(angle));
			}
		}
	}
	return Float64Array.from(numbers);
}

function places(size: number, lineCount: number): Uint32Array {
	const bits = Math.log2(size);
	const offset = (line: number): number => {
		let reversed = 0;
		for (let bit = 0; bit < bits; bit++) reversed |= ((line >> bit) & 1) << (bits - 1 - bit);
		return 32 * reversed;
	};
	const table = new Uint32Array(2 * lineCount);
	for (let k = 0; k < lineCount; k++) {
		table[2 * k] = offset(k % size);
		table[2 * k + 1] = offset((size - k) % size);
	}
	return table;
}

function turns(points: number, lineCount: number): Float64Array {
	const table = new Float64Array(2 * lineCount);
	for (let k = 0; k < lineCount; k++) {
		const angle = (-2 * Math.PI * k) / points;
		table[2 * k] = Math.sin(angle) / 2;
		table[2 * k + 1] = -Math.cos(angle) / 2;
	}
	return table;
}
