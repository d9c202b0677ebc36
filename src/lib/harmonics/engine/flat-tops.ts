/** Runs of samples at one end of a channel's range of values. */
interface EndRuns {
	value: number;
	/** Runs of three samples and more. */
	runs: number;
	longestRun: number;
	/** Pieces that reached this value and were looked through. */
	pieces: number;
}

/** Pieces of one block at one extreme value that are looked through; what they do not show, more of them would not. */
const ENOUGH_PIECES = 3;

/** What is needed to tell cut-off crests, gathered piece by piece. */
export interface FlatTops {
	top: EndRuns;
	bottom: EndRuns;
	/** Smallest step between neighbours that was seen; Infinity when none was. */
	resolution: number;
}

export function noFlatTops(): FlatTops {
	return {
		top: { value: -Infinity, runs: 0, longestRun: 0, pieces: 0 },
		bottom: { value: Infinity, runs: 0, longestRun: 0, pieces: 0 },
		resolution: Infinity
	};
}

/**
 * Adds the runs at the greatest and the least value of a piece.
 * samples   any unit; [from, to) free of NaN
 * least, greatest  of the piece
 * note      a piece inside the values seen so far cannot hold a cut crest and costs nothing
 */
export function addPiece(
	tops: FlatTops,
	samples: Float64Array,
	from: number,
	to: number,
	least: number,
	greatest: number
): void {
	const { top, bottom } = tops;
	if (greatest > top.value || (greatest === top.value && top.pieces < ENOUGH_PIECES))
		addEnd(top, runsAt(samples, from, to, greatest));
	if (least < bottom.value || (least === bottom.value && bottom.pieces < ENOUGH_PIECES))
		addEnd(bottom, runsAt(samples, from, to, least));
}

/** Looks for the smallest step between neighbours of a piece. */
export function addResolution(tops: FlatTops, samples: Float64Array, from: number, to: number): void {
	for (let i = from + 1; i < to; i++) {
		const step = Math.abs(samples[i]! - samples[i - 1]!);
		if (step > 0 && step < tops.resolution) tops.resolution = step;
	}
}

/** Joins what two parts of a capture gathered. */
export function joinFlatTops(a: FlatTops, b: FlatTops): FlatTops {
	const joined: FlatTops = {
		top: { ...a.top },
		bottom: { ...a.bottom },
		resolution: Math.min(a.resolution, b.resolution)
	};
	if (b.top.value >= joined.top.value) addEnd(joined.top, b.top);
	if (b.bottom.value <= joined.bottom.value) addEnd(joined.bottom, b.bottom);
	return joined;
}

/** A new extreme makes what was seen at the old one an ordinary value. */
function addEnd(end: EndRuns, piece: EndRuns): void {
	const same = piece.value === end.value;
	end.value = piece.value;
	end.pieces = piece.pieces + (same ? end.pieces : 0);
	end.runs = piece.runs + (same ? end.runs : 0);
	end.longestRun = Math.max(piece.longestRun, same ? end.longestRun : 0);
}

function runsAt(samples: Float64Array, from: number, to: number, value: number): EndRuns {
	const found: EndRuns = { value, runs: 0, longestRun: 0, pieces: 1 };
	let run = 0;
	for (let i = from; i <= to; i++) {
		if (i < to && samples[i] === value) {
			run++;
			continue;
		}
		if (run >= 3) {
			found.runs++;
			if (run > found.longestRun) found.longestRun = run;
		}
		run = 0;
	}
	return found;
}
