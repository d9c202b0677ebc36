/**
 * Thins a waveform for drawing so that no peak is lost: of each bucket the least and the greatest sample are kept,
 * in their order of time.
 *
 * samples   [n], any unit; NaN (no data) is skipped, a bucket of only NaN gives one NaN point that breaks the line
 * from, to  range of samples, `to` exclusive, within the array
 * buckets   at least 1; with no more than two samples per bucket every sample is kept as it is
 * timeOf    sample index → position on the time axis
 * returns   interleaved [x0, y0, x1, y1, …], at most 2 × buckets points
 */
export function decimateMinMax(
	samples: Float64Array,
	from: number,
	to: number,
	buckets: number,
	timeOf: (sample: number) => number
): Float64Array {
	const count = to - from;
	if (count <= 2 * buckets) {
		const all = new Float64Array(2 * Math.max(0, count));
		for (let i = 0; i < count; i++) {
			all[2 * i] = timeOf(from + i);
			all[2 * i + 1] = samples[from + i] as number;
		}
		return all;
	}
	const points = new Float64Array(4 * buckets);
	let used = 0;
	for (let bucket = 0; bucket < buckets; bucket++) {
		const start = from + Math.floor((bucket * count) / buckets);
		const end = from + Math.floor(((bucket + 1) * count) / buckets);
		let least = -1;
		let greatest = -1;
		for (let i = start; i < end; i++) {
			const value = samples[i] as number;
			if (Number.isNaN(value)) continue;
			if (least < 0 || value < (samples[least] as number)) least = i;
			if (greatest < 0 || value > (samples[greatest] as number)) greatest = i;
		}
		const kept =
			least < 0
				? [start]
				: least === greatest
					? [least]
					: [Math.min(least, greatest), Math.max(least, greatest)];
		for (const i of kept) {
			points[used++] = timeOf(i);
			points[used++] = samples[i] as number;
		}
	}
	return points.subarray(0, used);
}
