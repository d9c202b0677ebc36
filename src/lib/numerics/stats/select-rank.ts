/** Below this many values sorting costs less than choosing pivots. */
const SORTED_BELOW = 24;

/**
 * The value that would stand at a place if the values were sorted, without sorting them all.
 * values   [n] free of NaN; reordered in place: afterwards nothing before the place is greater, nothing behind it less
 * place    0 … n−1
 * returns  the same value as `values.sort()[place]` (a zero may have the other sign)
 * cost     about 2·n comparisons; never more than a sort beside them: after too many poor pivots the rest is sorted
 * source   Hoare, Algorithm 65 (FIND), Communications of the ACM 4(7), 1961; pivot from a sample as Floyd & Rivest,
 *          Communications of the ACM 18(3), 1975, choose it (bounds from memory)
 */
export function selectRank(values: Float64Array, place: number): number {
	let low = 0;
	let high = values.length - 1;
	if (!(place >= low && place <= high))
		throw new RangeError(`no place ${place} among ${values.length} values`);
	let patience = 4 + 2 * Math.ceil(Math.log2(values.length + 1));
	while (high - low >= SORTED_BELOW && patience-- > 0) {
		const pivot = pivotFor(values, low, high, place);
		let left = low;
		let right = high;
		while (left <= right) {
			while (values[left]! < pivot) left++;
			while (values[right]! > pivot) right--;
			if (left > right) break;
			const held = values[left]!;
			values[left++] = values[right]!;
			values[right--] = held;
		}
		if (place <= right) high = right;
		else if (place >= left) low = left;
		else return pivot;
	}
	values.subarray(low, high + 1).sort();
	return values[place]!;
}

/** A value that is likely to fall close to the place: the matching one out of a small even sample. */
function pivotFor(values: Float64Array, low: number, high: number, place: number): number {
	const span = high - low;
	const size = Math.min(63, 2 * Math.floor(Math.sqrt(span) / 4) + 3);
	const sample = new Float64Array(size);
	for (let i = 0; i < size; i++) sample[i] = values[low + Math.floor((i * span) / (size - 1))]!;
	sample.sort();
	return sample[Math.round(((place - low) / span) * (size - 1))]!;
}
