/** The part of a capture that is shown, seconds after sample 0. */
export interface ViewRange {
	from_s: number;
	to_s: number;
}

export interface ViewBounds {
	duration_s: number;
	/** Shortest part that is of any use: a few samples. */
	shortest_s: number;
}

/** Moved and shortened so that it lies inside the capture. */
export function insideBounds({ from_s, to_s }: ViewRange, { duration_s, shortest_s }: ViewBounds): ViewRange {
	const length_s = Math.min(duration_s, Math.max(shortest_s, to_s - from_s));
	const middle_s = (from_s + to_s) / 2;
	const start_s = to_s - from_s < shortest_s ? middle_s - length_s / 2 : from_s;
	const inside_s = Math.min(Math.max(0, start_s), Math.max(0, duration_s - length_s));
	return { from_s: inside_s, to_s: inside_s + length_s };
}

/** Scaled by `factor`; `about_s` stays where it is on the screen. */
export function zoomAbout(range: ViewRange, bounds: ViewBounds, factor: number, about_s: number): ViewRange {
	const length_s = range.to_s - range.from_s;
	const wanted_s = Math.min(bounds.duration_s, Math.max(bounds.shortest_s, length_s * factor));
	const scale = wanted_s / length_s;
	return insideBounds(
		{
			from_s: about_s - (about_s - range.from_s) * scale,
			to_s: about_s - (about_s - range.from_s) * scale + wanted_s
		},
		bounds
	);
}

/** Moved by a share of its own length. */
export function panBy(range: ViewRange, bounds: ViewBounds, share: number): ViewRange {
	const step_s = (range.to_s - range.from_s) * share;
	return insideBounds({ from_s: range.from_s + step_s, to_s: range.to_s + step_s }, bounds);
}

/** A stretch with room on either side, for jumping to an event. */
export function around(from_s: number, to_s: number, bounds: ViewBounds, least_s: number): ViewRange {
	const length_s = Math.max(least_s, 1.6 * (to_s - from_s));
	const middle_s = (from_s + to_s) / 2;
	return insideBounds({ from_s: middle_s - length_s / 2, to_s: middle_s + length_s / 2 }, bounds);
}
