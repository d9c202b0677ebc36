/** Rows by order that the lines of one window are joined to; index = order. `at` is the start of the row in each array. */
export interface GroupRows {
	/** Line of the order, rms. */
	components: Float64Array;
	/** Harmonic subgroup: the line of the order with its two neighbours. */
	subgroups: Float64Array;
	/** Harmonic group: all lines half way to either neighbouring order, the outermost two with half of their square. */
	groups: Float64Array;
	/** Interharmonic centred subgroup between the order and the next: without the two lines nearest to each order. */
	interharmonicSubgroups: Float64Array;
	/** Interharmonic group: every line strictly between the order and the next. */
	interharmonicGroups: Float64Array;
}

/**
 * Joins the lines of a window of N cycles to components, subgroups and groups.
 * squares          [≥ N·(highestOrder + 1) + 1, or N·highestOrder + 2 without `reachesBeyond`] squares of the one-sided rms
 *                  lines (numerics/dft/convention.md), V² or A²
 * cyclesPerWindow  N: 10 at 50 Hz (9 and 7 lines between orders), 12 at 60 Hz (11 and 9)
 * reachesBeyond    whether the lines up to the order after the highest may be used; without it the highest order has
 *                  neither group nor anything above it
 * into, at         rows that receive rms values; index 0 of the interharmonic rows lies below the fundamental, index 0 of
 *                  components and subgroups is |dc|, that of groups stays as it was; any NaN among the lines gives NaN
 * note             Subgroups and centred subgroups tile the axis. Groups and interharmonic groups overlap.
 * source           IEC 61000-4-7:2002+A1:2008, 3.2 to 3.4, 5.5, 5.6 and annex A (from memory)
 */
export function joinLines(
	squares: Float64Array,
	cyclesPerWindow: 10 | 12,
	highestOrder: number,
	reachesBeyond: boolean,
	into: GroupRows,
	at: number
): void {
	const { components, subgroups, groups, interharmonicSubgroups, interharmonicGroups } = into;
	const middle = cyclesPerWindow / 2;
	components[at] = Math.sqrt(squares[0]!);
	subgroups[at] = components[at]!;
	// Upper half of the gap before the order in hand: from half of its middle line to the line next to the order.
	let upperHalf = 0;
	for (let order = 0; order <= highestOrder; order++) {
		const line = order * cyclesPerWindow;
		const own = squares[line]!;
		const next = squares[line + 1]!;
		if (order > 0) {
			components[at + order] = Math.sqrt(own);
			subgroups[at + order] = Math.sqrt(squares[line - 1]! + own + next);
			if (order === highestOrder && !reachesBeyond) return;
		}
		let low = 0;
		for (let k = line + 2; k < line + middle; k++) low += squares[k]!;
		const half = squares[line + middle]!;
		let high = 0;
		for (let k = line + middle + 1; k < line + cyclesPerWindow - 1; k++) high += squares[k]!;
		const last = squares[line + cyclesPerWindow - 1]!;
		const inner = low + half + high;
		interharmonicSubgroups[at + order] = Math.sqrt(inner);
		interharmonicGroups[at + order] = Math.sqrt(next + inner + last);
		if (order > 0) groups[at + order] = Math.sqrt(upperHalf + own + next + low + half / 2);
		upperHalf = half / 2 + high + last;
	}
}
