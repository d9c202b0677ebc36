import { fetchTile, fetchWindow, type WindowFigures } from '$lib/api-client/viewer';
import { TILE_ENTRIES, type PyramidTiming } from '$lib/recording/pyramid/pyramid-layout';
import type { Tile } from '$lib/recording/pyramid/tile-codec';
import { timeAxis, type TimeAxis } from '$lib/recording/pyramid/time-axis';
import { columnsOf, pixelEntries, planView, samplesOf, type PyramidShape, type ViewPlan } from './columns';
import { plotWidth, type LaneScene, type Scene, type Stretch, type Trace } from './draw-scene';
import { lanesOf, MOST_SHOWN_AT_FIRST, type ViewerChannel } from './lanes';
import { TileStore, type TileKey } from './tile-store';
import { insideBounds, type ViewBounds, type ViewRange } from './view-range';

/** What the server tells of a capture before the first tile. */
export interface ViewerCapture {
	captureId: string;
	name: string;
	start_ms: number | null;
	timeZone: string;
	nominalFrequency_Hz: number;
	sampleCount: number;
	duration_s: number;
	pyramid: { key: string; levelCount: number; timing: PyramidTiming };
	channels: readonly ViewerChannel[];
	isAnalysed: boolean;
	flagged: readonly Stretch[];
	events:
		| readonly {
				kind: 'dip' | 'swell' | 'interruption';
				start_s: number;
				end_s: number;
				extreme_pct: number;
				phases: string[];
		  }[]
		| null;
}

export type CursorName = 'A' | 'B';
const HELD_BYTES = 192 * 2 ** 20;
/** Samples that the shortest view still shows. */
const FEWEST_SAMPLES = 8;
/** Up to this many samples in a pixel a line through all of them is drawn, more are drawn as bands. */
const LINE_UP_TO = 1;
/** Share of a cycle in one pixel from which on a wave is drawn by its outline. */
const ENVELOPE_FROM_CYCLES = 0.2;
const WINDOW_AFTER_MS = 120;

/** The state of one viewer: which part of which channels, the cursors, the tiles behind it. */
export class Viewer {
	readonly axis: TimeAxis;
	readonly bounds: ViewBounds;
	readonly shape: PyramidShape;
	range = $state.raw<ViewRange>({ from_s: 0, to_s: 1 });
	shown = $state.raw<readonly number[]>([]);
	isEachAlone = $state(false);
	isFitted = $state(false);
	cursors = $state<Record<CursorName, number | null>>({ A: null, B: null });
	/** The harmonic window under cursor A. */
	window = $state.raw<WindowFigures | null>(null);
	windowState = $state<'none' | 'waiting' | 'found' | 'gap' | 'failed'>('none');
	problem = $state('');
	/** Counts tiles that came: whoever draws depends on it. */
	arrivals = $state(0);
	width_px = $state(0);
	readonly lanes = $derived.by(() =>
		lanesOf(
			this.capture.channels.filter(({ index }) => this.shown.includes(index)),
			this.isEachAlone
		)
	);

	private store: TileStore;
	/** Channels that every tile in the store has, in its order. */
	private fetched: number[];
	private windowTimer: ReturnType<typeof setTimeout> | undefined;
	private windowAsked: AbortController | undefined;

	constructor(
		readonly capture: ViewerCapture,
		first: { range: ViewRange | null; at_s: number | null }
	) {
		const { timing, levelCount } = capture.pyramid;
		this.axis = timeAxis(timing, capture.sampleCount);
		this.shape = { sampleCount: capture.sampleCount, levelCount };
		this.bounds = {
			duration_s: capture.duration_s,
			shortest_s: Math.min(
				capture.duration_s,
				(FEWEST_SAMPLES * capture.duration_s) / Math.max(1, capture.sampleCount)
			)
		};
		this.range = insideBounds(first.range ?? { from_s: 0, to_s: capture.duration_s }, this.bounds);
		const known = capture.channels.filter(({ quantity }) => quantity !== 'other');
		this.shown = (known.length > 0 ? known : capture.channels)
			.slice(0, MOST_SHOWN_AT_FIRST)
			.map(({ index }) => index);
		this.fetched = [...this.shown].sort((a, b) => a - b);
		this.store = this.newStore();
		if (first.at_s !== null) this.setCursor('A', first.at_s);
	}

	private newStore(): TileStore {
		const { captureId, pyramid } = this.capture;
		return new TileStore(
			({ level, tile }, signal) => fetchTile(captureId, pyramid.key, level, tile, this.fetched, signal),
			HELD_BYTES,
			{
				arrived: () => {
					this.problem = '';
					this.arrivals++;
				},
				failed: (cause) => {
					this.problem =
						cause instanceof Error ? cause.message : 'A part of the capture could not be fetched.';
				}
			}
		);
	}

	show(range: ViewRange): void {
		this.range = insideBounds(range, this.bounds);
	}

	toggle(index: number): void {
		const next = this.shown.includes(index)
			? this.shown.filter((other) => other !== index)
			: [...this.shown, index].sort((a, b) => a - b);
		if (next.length === 0) return;
		this.shown = next;
		if (next.every((one) => this.fetched.includes(one))) return;
		this.store.close();
		this.fetched = [...this.fetched, ...next.filter((one) => !this.fetched.includes(one))].sort(
			(a, b) => a - b
		);
		this.store = this.newStore();
		this.arrivals++;
	}

	private readonly tileAt = (level: number, tile: number): Tile | null => this.store.get(level, tile);
	private readonly hasTile = (level: number, tile: number): boolean => this.store.has({ level, tile });

	plan(range: ViewRange, width_px: number): ViewPlan {
		return planView(range, plotWidth(width_px), this.axis, this.shape);
	}

	/** Asks for what the present view and the cursors need, and drops what they no longer do. */
	fetchFor(range: ViewRange, width_px: number): void {
		const plan = this.plan(range, width_px);
		const top: TileKey = { level: this.shape.levelCount - 1, tile: 0 };
		const atCursors = Object.values(this.cursors).flatMap((time_s): TileKey[] =>
			time_s === null ? [] : [{ level: 0, tile: Math.floor(this.sampleAt(time_s) / TILE_ENTRIES) }]
		);
		this.store.want([top, ...plan.needed, ...atCursors], plan.ahead);
	}

	sampleAt(time_s: number): number {
		return Math.max(0, Math.min(this.shape.sampleCount - 1, Math.round(this.axis.indexAt(time_s))));
	}

	/** Value of a channel's sample nearest to that time, in its unit; null while it is on its way, NaN when missing. */
	valueAt(channel: ViewerChannel, time_s: number): number | null {
		const sample = this.sampleAt(time_s);
		const tile = this.tileAt(0, Math.floor(sample / TILE_ENTRIES));
		const place = this.fetched.indexOf(channel.index);
		const value = tile?.channels[place]?.least[sample % TILE_ENTRIES];
		return value === undefined ? null : value * channel.toPrimary;
	}

	/** Least and greatest of the whole capture in the lane's unit; null before the first tile. */
	private wholeRange(channels: readonly ViewerChannel[]): [number, number] | null {
		const top = this.tileAt(this.shape.levelCount - 1, 0);
		if (!top) return null;
		return extremes(
			channels.flatMap((channel) => {
				const found = top.channels[this.fetched.indexOf(channel.index)];
				return found ? [{ least: found.least, greatest: found.greatest, factor: channel.toPrimary }] : [];
			})
		);
	}

	/** Everything that the picture of a range shows, with what has come so far. */
	scene(range: ViewRange, width_px: number, height_px: number): Scene & { isComplete: boolean } {
		const plot_px = plotWidth(width_px);
		const plan = this.plan(range, width_px);
		const perPixel = (plan.toSample - plan.fromSample) / plot_px;
		const samples =
			perPixel <= LINE_UP_TO
				? samplesOf(plan.fromSample, plan.toSample, this.fetched.length, this.axis, this.tileAt)
				: null;
		const pixels = samples
			? null
			: pixelEntries(range, plot_px, this.axis, this.shape, plan.level, this.hasTile);
		const lanes = this.lanes.map((lane): LaneScene => {
			const traces = lane.channels.map((channel): Trace => {
				const place = this.fetched.indexOf(channel.index);
				return { channel, place, columns: pixels ? columnsOf(pixels, place, this.tileAt) : null };
			});
			const shown = () =>
				extremes(
					traces.flatMap(({ channel, columns, place }) => {
						const values = samples?.values[place];
						const own = columns ?? (values ? { least: values, greatest: values } : null);
						return own ? [{ ...own, factor: channel.toPrimary }] : [];
					})
				);
			const [low, high] = (this.isFitted ? shown() : (this.wholeRange(lane.channels) ?? shown())) ?? [-1, 1];
			const room = 0.06 * (high - low) || Math.max(1e-9, 0.1 * Math.abs(high)) || 1;
			return { lane, traces, low: low - room, high: high + room };
		});
		return {
			width_px,
			height_px,
			range,
			lanes,
			samples,
			isEnvelope:
				(range.to_s - range.from_s) / plot_px > ENVELOPE_FROM_CYCLES / this.capture.nominalFrequency_Hz,
			flagged: this.capture.flagged,
			events: (this.capture.events ?? []).map(({ start_s, end_s, kind }) => ({
				from_s: start_s,
				to_s: end_s,
				label: kind
			})),
			window: this.window,
			start_ms: this.capture.start_ms,
			timeZone: this.capture.timeZone,
			isComplete: samples !== null || (pixels?.isComplete ?? false)
		};
	}

	/** The whole capture from its coarsest tile alone. */
	strip(): Pick<Scene, 'lanes'> {
		const whole: ViewRange = { from_s: 0, to_s: this.capture.duration_s };
		const level = this.shape.levelCount - 1;
		const pixels = pixelEntries(whole, plotWidth(this.width_px), this.axis, this.shape, level, this.hasTile);
		return {
			lanes: this.lanes.map((lane) => {
				const [low, high] = this.wholeRange(lane.channels) ?? [-1, 1];
				const traces = lane.channels.map((channel) => {
					const place = this.fetched.indexOf(channel.index);
					return { channel, place, columns: columnsOf(pixels, place, this.tileAt) };
				});
				return { lane, traces, low, high: high > low ? high : low + 1 };
			})
		};
	}

	/** Placed on the sample nearest to that time; null takes the cursor away. */
	setCursor(name: CursorName, time_s: number | null): void {
		const inside = time_s === null ? null : Math.min(Math.max(0, time_s), this.capture.duration_s);
		this.cursors[name] = inside === null ? null : this.axis.timeOf(this.sampleAt(inside));
		if (name === 'A') this.askWindow(this.cursors.A);
	}

	/** Moves a cursor by so many samples. */
	stepCursor(name: CursorName, samples: number): void {
		const at = this.cursors[name];
		if (at === null) return;
		const next = Math.max(0, Math.min(this.shape.sampleCount - 1, this.sampleAt(at) + samples));
		this.setCursor(name, this.axis.timeOf(next));
	}

	private askWindow(at_s: number | null): void {
		clearTimeout(this.windowTimer);
		this.windowAsked?.abort();
		if (at_s === null || !this.capture.isAnalysed) {
			this.window = null;
			this.windowState = 'none';
			return;
		}
		if (this.window && at_s >= this.window.from_s && at_s < this.window.to_s) return;
		this.windowState = 'waiting';
		this.windowTimer = setTimeout(() => {
			const asked = new AbortController();
			this.windowAsked = asked;
			fetchWindow(this.capture.captureId, at_s, asked.signal).then(
				(found) => {
					this.window = found;
					this.windowState = found ? 'found' : 'gap';
				},
				(cause: unknown) => {
					if (asked.signal.aborted) return;
					this.window = null;
					this.windowState = 'failed';
					this.problem = cause instanceof Error ? cause.message : '';
				}
			);
		}, WINDOW_AFTER_MS);
	}

	close(): void {
		clearTimeout(this.windowTimer);
		this.windowAsked?.abort();
		this.store.close();
	}
}

function extremes(
	all: readonly { least: Float32Array; greatest: Float32Array; factor: number }[]
): [number, number] | null {
	let low = NaN;
	let high = NaN;
	for (const { least, greatest, factor } of all)
		for (let i = 0; i < least.length; i++) {
			const a = least[i]! * factor;
			const b = greatest[i]! * factor;
			if (a < low || (low !== low && a === a)) low = a;
			if (b < low) low = b;
			if (b > high || (high !== high && b === b)) high = b;
			if (a > high) high = a;
		}
	return low === low && high === high ? [low, high] : null;
}
