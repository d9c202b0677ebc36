import type { EChartsOption } from 'echarts';
import { init } from './echarts-core';
import type { ChartSize } from './theme';

/**
 * A chart as an SVG text without a browser, for the PDF and for downloads. Text stays text, in the font family of
 * the theme. The same option and size give the same bytes, whatever was drawn before: element ids, which the
 * library counts up over the life of the process, are numbered anew, and the classes it adds for pointers go.
 */
export function renderChartSvg(option: EChartsOption, size: ChartSize): string {
	const chart = init(null, null, {
		renderer: 'svg',
		ssr: true,
		width: size.width_px,
		height: size.height_px
	});
	try {
		chart.setOption({ ...option, animation: false });
		return renumberIds(chart.renderToSVGString());
	} finally {
		chart.dispose();
	}
}

function renumberIds(svg: string): string {
	const names = new Map<string, string>();
	for (const [, id = ''] of svg.matchAll(/ id="([^"]+)"/g)) names.set(id, `c${names.size}`);
	return svg
		.replace(/ class="zr\d+-cls-\d+"/g, '')
		.replace(/<style\b[^>]*>[\s\S]*?<\/style>\n?/g, '')
		.replace(/ id="([^"]+)"/g, (_, id: string) => ` id="${names.get(id) ?? id}"`)
		.replace(/url\(#([^)]+)\)/g, (_, id: string) => `url(#${names.get(id) ?? id})`)
		.replace(/href="#([^"]+)"/g, (_, id: string) => `href="#${names.get(id) ?? id}"`);
}
