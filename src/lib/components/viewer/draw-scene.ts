import { CHART_PALETTES, phaseStyle, type ChartMode, type PhaseStyle } from '$lib/charts/theme';
import type { Columns, SampleRun } from './columns';
import { axisSteps, digitsFor, titleOf, type Lane, type ViewerChannel } from './lanes';
import type { Pen } from './pen';
import { clockText, secondsText, timeMarks, timeStep_s } from './time-marks';
import type { ViewRange } from './view-range';

/** One channel as it is drawn: bands where pixels stand for many samples, a line where they do not. */
export interface Trace {
	channel: ViewerChannel;
	columns: Columns | null;
	/** Place of the channel in `samples.values`. */
	place: number;
}

export interface LaneScene {
	lane: Lane;
	traces: Trace[];
	/** Value axis, in the lane's unit. */
	low: number;
	high: number;
}

export interface Stretch {
	from_s: number;
	to_s: number;
}

export interface Scene {
	width_px: number;
	height_px: number;
	range: ViewRange;
	lanes: LaneScene[];
	samples: SampleRun | null;
	/** Pixels stand for so much of a cycle that only the outline of the wave is left. */
	isEnvelope: boolean;
	flagged: readonly Stretch[];
	events: readonly (Stretch & { label: string })[];
	/** The harmonic window in hand. */
	window: Stretch | null;
	start_ms: number | null;
	timeZone: string;
}

export const PLOT_LEFT_PX = 62;
export const PLOT_RIGHT_PX = 10;
/** Room for the flags of the cursors. */
export const TOP_PX = 20;
export const BOTTOM_PX = 44;
const LANE_HEAD_PX = 20;
const LANE_GAP_PX = 8;
/** Pixels between samples from which on each is marked. */
const MARKED_FROM_PX = 6;

export function plotWidth(width_px: number): number {
	return Math.max(1, Math.floor(width_px - PLOT_LEFT_PX - PLOT_RIGHT_PX));
}

export function xOf(time_s: number, range: ViewRange, width_px: number): number {
	return PLOT_LEFT_PX + ((time_s - range.from_s) / (range.to_s - range.from_s)) * plotWidth(width_px);
}

/** How a channel is drawn; those that have no conductor take turns among the looks. */
export function lookOf(channel: ViewerChannel, mode: ChartMode): PhaseStyle {
	if (channel.phase !== null) return phaseStyle(channel.phase, mode);
	return phaseStyle((['L1', 'L2', 'L3', 'N'] as const)[channel.index % 4]!, mode);
}

export function drawScene(pen: Pen, scene: Scene, mode: ChartMode): void {
	const palette = CHART_PALETTES[mode];
	const { width_px, height_px, range, lanes } = scene;
	const plot_px = plotWidth(width_px);
	pen.rect(0, 0, width_px, height_px, palette.ground, 1);
	const lane_px = (height_px - TOP_PX - BOTTOM_PX) / Math.max(1, lanes.length) - LANE_GAP_PX;
	const top = (i: number) => TOP_PX + i * (lane_px + LANE_GAP_PX) + LANE_HEAD_PX;
	const plotBottom = top(lanes.length - 1) + lane_px - LANE_HEAD_PX;
	const x = (time_s: number) => xOf(time_s, range, width_px);

	pen.inside(PLOT_LEFT_PX, 0, plot_px, height_px, () => {
		for (const { from_s, to_s } of scene.flagged)
			if (to_s > range.from_s && from_s < range.to_s)
				pen.rect(
					x(from_s),
					TOP_PX,
					Math.max(1, x(to_s) - x(from_s)),
					plotBottom - TOP_PX,
					palette.ochre,
					0.14
				);
		if (scene.window) {
			const { from_s, to_s } = scene.window;
			pen.rect(
				x(from_s),
				TOP_PX,
				Math.max(1, x(to_s) - x(from_s)),
				plotBottom - TOP_PX,
				palette.copper,
				0.12
			);
		}
	});

	const step_s = timeStep_s(range.to_s - range.from_s, Math.max(2, Math.floor(plot_px / 130)));
	const marks = timeMarks(range.from_s, range.to_s, step_s);
	lanes.forEach((lane, i) => drawLane(pen, scene, lane, top(i), lane_px - LANE_HEAD_PX, marks, mode));
	drawTimes(pen, scene, marks, step_s, plotBottom, mode);

	pen.inside(PLOT_LEFT_PX, 0, plot_px, height_px, () => {
		for (const event of scene.events) {
			if (event.to_s < range.from_s || event.from_s > range.to_s) continue;
			const left = x(event.from_s);
			const right = Math.max(left + 2, x(event.to_s));
			pen.rect(left, TOP_PX, right - left, 4, palette.oxide, 1);
			pen.rect(left, TOP_PX, 1, plotBottom - TOP_PX, palette.oxide, 0.7);
		}
	});
}

function drawTimes(
	pen: Pen,
	{ range, width_px, start_ms, timeZone }: Scene,
	marks: readonly number[],
	step_s: number,
	bottom: number,
	mode: ChartMode
): void {
	const palette = CHART_PALETTES[mode];
	marks.forEach((mark, i) => {
		const at = xOf(mark, range, width_px);
		// A label at an edge leans inwards.
		const anchor = at < PLOT_LEFT_PX + 36 ? 'start' : at > width_px - PLOT_RIGHT_PX - 36 ? 'end' : 'middle';
		pen.rect(at, bottom, 1, 4, palette.edge, 1);
		pen.text(at, bottom + 14, secondsText(mark, step_s), palette.ink, anchor);
		if (start_ms !== null)
			pen.text(
				at,
				bottom + 30,
				clockText(start_ms + 1000 * mark, timeZone, step_s, i === 0),
				palette.inkSoft,
				anchor
			);
	});
}

function drawLane(
	pen: Pen,
	scene: Scene,
	{ lane, traces, low, high }: LaneScene,
	top: number,
	height: number,
	marks: readonly number[],
	mode: ChartMode
): void {
	const palette = CHART_PALETTES[mode];
	const { range, width_px, samples } = scene;
	const plot_px = plotWidth(width_px);
	const y = (value: number) => top + height - ((value - low) / (high - low)) * height;
	const [name, unit] = lane.title.split(/, (?=[^,]*$)/);
	pen.text(PLOT_LEFT_PX, top - 10, `${name}${unit ? `, ${unit}` : ''}`, palette.ink, 'start', true);
	drawKey(pen, traces, width_px, top - 10, mode);

	for (const mark of marks) pen.rect(xOf(mark, range, width_px), top, 1, height, palette.rule, 1);
	const steps = axisSteps(low, high, Math.max(2, Math.floor(height / 34)));
	const digits = steps.length > 1 ? digitsFor(steps[1]! - steps[0]!) : 0;
	for (const step of steps) {
		pen.rect(PLOT_LEFT_PX, Math.round(y(step)), plot_px, 1, step === 0 ? palette.edge : palette.rule, 1);
		pen.text(PLOT_LEFT_PX - 6, y(step), valueText(step, digits), palette.inkSoft, 'end');
	}
	pen.inside(PLOT_LEFT_PX, top - 2, plot_px, height + 4, () => {
		for (const { channel, columns, place } of traces) {
			const look = lookOf(channel, mode);
			if (columns) {
				const [low, high] = joinedBars(columns, channel.toPrimary, y);
				if (!scene.isEnvelope) pen.bars(PLOT_LEFT_PX, low, high, look.color, 1);
				else {
					// Conductors lie over one another: a thin wash each, and both edges in the look of the line.
					pen.bars(PLOT_LEFT_PX, low, high, look.color, 0.16);
					const xs = Float64Array.from(low, (_, i) => PLOT_LEFT_PX + i + 0.5);
					const edge = { color: look.color, width: 1.25, dash: look.dash === 'solid' ? [] : look.dash };
					pen.line(xs, Float64Array.from(low), edge);
					pen.line(xs, Float64Array.from(high), edge);
				}
			} else if (samples) {
				const values = samples.values[place]!;
				const xs = new Float64Array(values.length);
				const ys = new Float64Array(values.length);
				for (let i = 0; i < values.length; i++) {
					xs[i] = xOf(samples.times_s[i]!, range, width_px);
					ys[i] = y(values[i]! * channel.toPrimary);
				}
				pen.line(xs, ys, { color: look.color, width: 1.5, dash: look.dash === 'solid' ? [] : look.dash });
				if (xs.length > 1 && (xs.at(-1)! - xs[0]!) / (xs.length - 1) >= MARKED_FROM_PX)
					pen.dots(xs, ys, look.color, look.symbol);
			}
		}
	});
}

/** Which line is which: a short stroke in its look and the channel's name, from the right. */
function drawKey(pen: Pen, traces: readonly Trace[], width_px: number, y: number, mode: ChartMode): void {
	const palette = CHART_PALETTES[mode];
	let right = width_px - PLOT_RIGHT_PX;
	for (const { channel } of [...traces].reverse()) {
		const look = lookOf(channel, mode);
		const name = titleOf(channel);
		const text_px = 7 * name.length;
		if (right - text_px - 26 < PLOT_LEFT_PX + 110) return;
		pen.text(right, y, name, palette.inkSoft, 'end');
		const at = right - text_px - 22;
		pen.line(Float64Array.of(at, at + 18), Float64Array.of(y, y), {
			color: look.color,
			width: 2,
			dash: look.dash === 'solid' ? [] : look.dash
		});
		right = at - 12;
	}
}

/** Least and greatest as pixels; each stroke reaches its neighbour, so that the band has no holes on steep parts. */
function joinedBars(
	{ least, greatest }: Columns,
	factor: number,
	y: (value: number) => number
): [low: Float32Array, high: Float32Array] {
	const low = new Float32Array(least.length);
	const high = new Float32Array(least.length);
	let before: [number, number] | null = null;
	for (let i = 0; i < least.length; i++) {
		if (least[i] !== least[i]) {
			low[i] = high[i] = NaN;
			before = null;
			continue;
		}
		const a = y(least[i]! * factor);
		const b = y(greatest[i]! * factor);
		let above = Math.min(a, b);
		let below = Math.max(a, b);
		const own: [number, number] = [above, below];
		if (before) {
			if (above > before[1]) above = before[1];
			if (below < before[0]) below = before[0];
		}
		if (below - above < 1) below = above + 1;
		low[i] = below;
		high[i] = above;
		before = own;
	}
	return [low, high];
}

export function valueText(value: number, digits: number): string {
	const magnitude = Math.abs(value);
	if (magnitude >= 1e5) return `${(value / 1e3).toFixed(0)}k`;
	return value.toFixed(digits).replace('-', '−');
}
