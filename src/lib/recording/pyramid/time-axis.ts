import type { PyramidTiming } from './pyramid-layout';

/** Sample number ↔ seconds after sample 0. */
export interface TimeAxis {
	/** `index` may lie between samples. Where samples have stamps of their own, near enough to know where to look. */
	timeOf(index: number): number;
	/** Place among the samples at that time, with a fraction; inside a gap the first sample after it. */
	indexAt(time_s: number): number;
}

/** First place where `isAt` holds; `count` where it never does. `isAt` is false first and true from then on. */
function firstPlace(count: number, isAt: (i: number) => boolean): number {
	let low = 0;
	let high = count;
	while (low < high) {
		const middle = (low + high) >> 1;
		if (isAt(middle)) high = middle;
		else low = middle + 1;
	}
	return low;
}

export function timeAxis(timing: PyramidTiming, sampleCount: number): TimeAxis {
	return timing.kind === 'rates' ? rateAxis(timing.segments) : anchorAxis(timing, sampleCount);
}

function rateAxis(segments: Extract<PyramidTiming, { kind: 'rates' }>['segments']): TimeAxis {
	return {
		timeOf(index) {
			const at = Math.min(
				segments.length - 1,
				firstPlace(segments.length, (i) => segments[i]!.toSample > index)
			);
			const segment = segments[at]!;
			return segment.start_s + (index - segment.fromSample) / segment.samplingRate_Hz;
		},
		indexAt(time_s) {
			const next = firstPlace(segments.length, (i) => segments[i]!.start_s > time_s);
			const segment = segments[Math.max(0, next - 1)]!;
			const index = segment.fromSample + (time_s - segment.start_s) * segment.samplingRate_Hz;
			return Math.min(Math.max(index, segment.fromSample), segment.toSample);
		}
	};
}

function anchorAxis(
	{ anchorEvery, anchors_s }: Extract<PyramidTiming, { kind: 'stamps' }>,
	sampleCount: number
): TimeAxis {
	const indexOfAnchor = (i: number) => Math.min(sampleCount, i * anchorEvery);
	const last = anchors_s.length - 1;
	const between = (x: number, x0: number, x1: number, y0: number, y1: number) =>
		x1 === x0 ? y0 : y0 + ((x - x0) * (y1 - y0)) / (x1 - x0);
	return {
		timeOf(index) {
			const i = Math.max(0, Math.min(last - 1, Math.floor(index / anchorEvery)));
			return between(index, indexOfAnchor(i), indexOfAnchor(i + 1), anchors_s[i]!, anchors_s[i + 1]!);
		},
		indexAt(time_s) {
			const next = firstPlace(anchors_s.length, (i) => anchors_s[i]! > time_s);
			const i = Math.max(0, Math.min(last - 1, next - 1));
			const index = between(time_s, anchors_s[i]!, anchors_s[i + 1]!, indexOfAnchor(i), indexOfAnchor(i + 1));
			return Math.min(Math.max(index, 0), sampleCount);
		}
	};
}
