export interface TimeView {
	from: number;
	to: number;
}

/** The view scaled by `factor` about its middle and kept inside the capture. */
export function zoomView(view: TimeView, extent: TimeView, factor: number): TimeView {
	const whole = extent.to - extent.from;
	const length = Math.min(whole, (view.to - view.from) * factor);
	const middle = (view.from + view.to) / 2;
	return clampView({ from: middle - length / 2, to: middle + length / 2 }, extent);
}

/** The view moved by a share of its own length. */
export function moveView(view: TimeView, extent: TimeView, share: number): TimeView {
	const step = (view.to - view.from) * share;
	return clampView({ from: view.from + step, to: view.to + step }, extent);
}

function clampView(view: TimeView, extent: TimeView): TimeView {
	const length = Math.min(view.to - view.from, extent.to - extent.from);
	const from = Math.min(Math.max(view.from, extent.from), extent.to - length);
	return { from, to: from + length };
}
