import type { ChartTable } from '$lib/charts/chart-table';
import type { Scene } from './draw-scene';
import { plotWidth } from './draw-scene';
import { titleOf, type ViewerChannel } from './lanes';

/** What one channel does over the shown stretch, in its unit; NaN where nothing was recorded. */
export interface StretchFigures {
	channel: ViewerChannel;
	least: number;
	greatest: number;
	/** Of the single samples; null where the stretch is shown by least and greatest values only. */
	rms: number | null;
}

export function stretchFigures(scene: Scene): StretchFigures[] {
	return scene.lanes.flatMap(({ traces }) =>
		traces.map(({ channel, columns, place }) => {
			const samples = scene.samples?.values[place];
			const lows = columns?.least ?? samples ?? new Float32Array();
			const highs = columns?.greatest ?? samples ?? new Float32Array();
			let low = NaN;
			let high = NaN;
			let squares = 0;
			let count = 0;
			for (let i = 0; i < lows.length; i++) {
				// A few samples beyond either edge are drawn, so that lines leave the picture; they do not count.
				if (samples) {
					const time_s = scene.samples!.times_s[i]!;
					if (time_s < scene.range.from_s || time_s > scene.range.to_s) continue;
				}
				const below = lows[i]!;
				const above = highs[i]!;
				if (below !== below) continue;
				if (!(low <= below)) low = below;
				if (!(high >= above)) high = above;
				if (samples) squares += below * below;
				count++;
			}
			const factor = channel.toPrimary;
			const ends = [low * factor, high * factor];
			return {
				channel,
				least: Math.min(...ends),
				greatest: Math.max(...ends),
				rms: samples ? Math.sqrt(squares / count) * Math.abs(factor) : null
			};
		})
	);
}

/** The shown stretch as a table: single samples, or least and greatest of each pixel's stretch. */
export function stretchTable(scene: Scene): ChartTable {
	const traces = scene.lanes.flatMap((lane) => lane.traces);
	const named = (channel: ViewerChannel) => `${titleOf(channel)}${channel.unit ? `, ${channel.unit}` : ''}`;
	const figure = (value: number | undefined, factor: number) =>
		value === undefined || Number.isNaN(value) ? null : Number((value * factor).toPrecision(7));
	const { samples } = scene;
	if (samples)
		return {
			columns: [
				{ label: 'Time, s', numeric: true, digits: 6 },
				...traces.map(({ channel }) => ({ label: named(channel), numeric: true, digits: 4 }))
			],
			rows: Array.from(samples.times_s, (time_s, i) => [
				Number(time_s.toFixed(9)),
				...traces.map(({ channel, place }) => figure(samples.values[place]![i], channel.toPrimary))
			])
		};
	const width = plotWidth(scene.width_px);
	const step_s = (scene.range.to_s - scene.range.from_s) / width;
	return {
		columns: [
			{ label: 'From, s', numeric: true, digits: 6 },
			...traces.flatMap(({ channel }) => [
				{ label: `${named(channel)}, least`, numeric: true, digits: 4 },
				{ label: `${named(channel)}, greatest`, numeric: true, digits: 4 }
			])
		],
		rows: Array.from({ length: width }, (_, x) => [
			Number((scene.range.from_s + x * step_s).toFixed(9)),
			...traces.flatMap(({ channel, columns }) => {
				const ends = [
					figure(columns?.least[x], channel.toPrimary),
					figure(columns?.greatest[x], channel.toPrimary)
				];
				return channel.toPrimary < 0 ? ends.reverse() : ends;
			})
		])
	};
}
