import type { EChartsOption } from 'echarts';
import type { Attachment } from 'svelte/attachments';

/**
 * Draws into the element as soon as the chart library has arrived, redraws when the option changes and when the
 * element's size does. `onrange` reports the part shown, in axis units, after the reader has zoomed or moved;
 * `onpick` the value of what was clicked.
 */
export function drawChart(
	option: () => EChartsOption,
	onrange?: (from: number, to: number) => void,
	onpick?: (value: unknown) => void
): Attachment<HTMLElement> {
	return (element) => {
		let disposed = false;
		let dispose = () => {};
		let redraw = $state<((next: EChartsOption) => void) | null>(null);

		void (async () => {
			const [{ init }] = await Promise.all([import('$lib/charts/echarts-core'), document.fonts.ready]);
			if (disposed) return;
			const chart = init(element, null, { renderer: 'canvas' });
			const observer = new ResizeObserver(() => chart.resize());
			observer.observe(element);
			if (onrange) chart.on('datazoom', () => reportRange(chart.getOption(), onrange));
			if (onpick) chart.on('click', ({ value }) => onpick(value));
			dispose = () => {
				observer.disconnect();
				chart.dispose();
			};
			redraw = (next) => chart.setOption(next, { notMerge: true });
		})();

		$effect(() => redraw?.(option()));

		return () => {
			disposed = true;
			dispose();
		};
	};
}

function reportRange(option: unknown, onrange: (from: number, to: number) => void): void {
	if (typeof option !== 'object' || option === null || !('dataZoom' in option)) return;
	const zooms: unknown = option.dataZoom;
	const zoom: unknown = Array.isArray(zooms) ? zooms[0] : zooms;
	if (typeof zoom !== 'object' || zoom === null || !('startValue' in zoom) || !('endValue' in zoom)) return;
	onrange(Number(zoom.startValue), Number(zoom.endValue));
}
