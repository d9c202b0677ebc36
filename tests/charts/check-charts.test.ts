import { describe, expect, it } from 'vitest';
import { buildLevelsOption, levelsTable } from '$lib/charts/levels-chart';
import { renderChartSvg } from '$lib/charts/render-chart-svg';
import {
	buildSpansOption,
	spanRows,
	spansHeight_px,
	spansTable,
	type SpansData
} from '$lib/charts/spans-chart';
import { CHART_PALETTES } from '$lib/charts/theme';

const SIZE = { width_px: 700, height_px: 260 };

describe('levels', () => {
	const bar = (measured: number) => ({
		axis: 'rms in V',
		bars: [{ label: 'U1', measured, expected: 230, low: 184, high: 276 }]
	});
	const svg = (measured: number) => renderChartSvg(buildLevelsOption(bar(measured), 'print', SIZE), SIZE);

	it('draws a bar outside its band in the colour of a fault, and none on its edge', () => {
		expect(svg(183)).toContain(CHART_PALETTES.print.oxide);
		expect(svg(277)).toContain(CHART_PALETTES.print.oxide);
		expect(svg(184)).not.toContain(CHART_PALETTES.print.oxide);
		expect(svg(276)).not.toContain(CHART_PALETTES.print.oxide);
	});
	it('has a legend only where something is expected', () => {
		expect(svg(230)).toContain('>expected<');
		const open = { axis: 'A', bars: [{ label: 'I1', measured: 5, expected: null, low: null, high: null }] };
		expect(renderChartSvg(buildLevelsOption(open, 'print', SIZE), SIZE)).not.toContain('>expected<');
	});
	it('gives the bounds in its table', () => {
		expect(levelsTable(bar(230)).rows).toEqual([['U1', 230, 230, 184, 276]]);
	});
});

describe('spans', () => {
	const at = Date.parse('2026-03-10T15:00:00Z');
	const span = (row: string, tone: SpansData['spans'][number]['tone']) => ({
		row,
		from_ms: at,
		to_ms: at + 3_600_000,
		label: row,
		tone
	});
	const data: SpansData = {
		timeZone: 'Europe/Berlin',
		spans: [span('recorded', 'plain'), span('missing', 'bad'), span('recorded', 'plain')],
		marks: [{ at_ms: at + 7_200_000, label: 'uploaded' }]
	};

	it('gives each row one line, in the order of the first span', () => {
		expect(spanRows(data)).toEqual(['recorded', 'missing']);
		const oneRow = { ...data, spans: data.spans.slice(0, 1) };
		expect(spansHeight_px(data)).toBeGreaterThan(spansHeight_px(oneRow));
	});
	it('explains the colours that occur, and no other', () => {
		const svg = renderChartSvg(buildSpansOption(data, 'print', SIZE), SIZE);
		// The row's name and the legend's entry: once each.
		expect(svg.match(/>missing</g)).toHaveLength(2);
		expect(svg).not.toContain('>to be looked at<');
		expect(svg).not.toContain('>counts<');
		expect(svg).toContain('>uploaded<');
	});
	it('writes instants in the zone of the site', () => {
		// Central European time is UTC+1 in winter.
		expect(spansTable(data).rows[0]).toEqual([
			'recorded',
			'recorded',
			'10 Mar, 16:00:00',
			'10 Mar, 17:00:00'
		]);
	});
});
