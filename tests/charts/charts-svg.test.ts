import { describe, expect, it } from 'vitest';
import { buildOrderBarsOption, orderBarsTable, type OrderBarsData } from '$lib/charts/order-bars-chart';
import { buildPhasorOption } from '$lib/charts/phasor-chart';
import { renderChartSvg } from '$lib/charts/render-chart-svg';
import { buildSpectrumOption, spectrumTable, type SpectrumData } from '$lib/charts/spectrum-chart';
import { CHART_PALETTES } from '$lib/charts/theme';
import { buildTrendOption, maskFlagged } from '$lib/charts/trend-chart';
import { buildWaveformOption } from '$lib/charts/waveform-chart';

const SIZE = { width_px: 700, height_px: 320 };

function spectrum(fifth: number | null): SpectrumData {
	return {
		orders: [3, 5, 7],
		phases: [
			{ phase: 'L1', label: 'A', values: [1, fifth, 2] },
			{ phase: 'L2', label: 'B', values: [1, 3, 2] }
		],
		limits: [7, 7, 7],
		valueAxis: 'percent of demand current'
	};
}

describe('spectrum', () => {
	it('hatches the part over the limit, and only then', () => {
		const over = renderChartSvg(buildSpectrumOption(spectrum(9.6), 'print', SIZE), SIZE);
		const under = renderChartSvg(buildSpectrumOption(spectrum(7), 'print', SIZE), SIZE);
		expect(over).toContain('<pattern');
		expect(over).toContain('part over the limit');
		expect(under).not.toContain('<pattern');
		expect(under).not.toContain('part over the limit');
	});

	it('names both axes, the phases and the limit in selectable text', () => {
		const svg = renderChartSvg(buildSpectrumOption(spectrum(9.6), 'print', SIZE), SIZE);
		for (const text of ['Harmonic order', 'percent of demand current', '>A<', '>B<', '>limit<'])
			expect(svg).toContain(text);
	});

	it('uses one font family that the PDF has registered, and only normal or bold', () => {
		const svg = renderChartSvg(buildSpectrumOption(spectrum(9.6), 'print', SIZE), SIZE);
		const families = new Set([...svg.matchAll(/font-family:([^;"]+)/g)].map(([, family]) => family));
		expect([...families]).toEqual(['IBM Plex Sans']);
		expect(svg).not.toMatch(/font-weight:\s*[1-9]00/);
	});

	it('shows no data as no data in its table', () => {
		expect(spectrumTable(spectrum(null)).rows[1]).toEqual([5, null, 3, 7]);
	});
});

describe('renderChartSvg', () => {
	it('gives the same bytes for the same figure, whatever was drawn before', () => {
		const first = renderChartSvg(buildSpectrumOption(spectrum(9.6), 'print', SIZE), SIZE);
		renderChartSvg(buildSpectrumOption(spectrum(8), 'print', SIZE), SIZE);
		expect(renderChartSvg(buildSpectrumOption(spectrum(9.6), 'print', SIZE), SIZE)).toBe(first);
	});

	it('carries no style element, which neither the page nor the PDF would take', () => {
		expect(renderChartSvg(buildSpectrumOption(spectrum(9.6), 'print', SIZE), SIZE)).not.toContain('<style');
	});
});

describe('trend', () => {
	it('masks flagged intervals and keeps gaps apart from zero', () => {
		const series = { times_ms: [0, 10, 20, 30, 40], values: [1, 2, 0, null, 5] };
		expect(maskFlagged(series, [{ from_ms: 10, to_ms: 20 }])).toEqual([
			[0, 1],
			[10, null],
			[20, 0],
			[30, null],
			[40, 5]
		]);
	});

	it("labels the site's own days, also across its change to summer time (8 March 2026 in Chicago, tz database)", () => {
		const first = Date.UTC(2026, 2, 3, 6); // midnight in Chicago, UTC−6
		const times = Array.from({ length: 8 * 24 }, (_, i) => first + i * 3_600_000);
		const option = buildTrendOption(
			{
				series: [{ label: 'C', phase: 'L3', times_ms: times, values: times.map(() => 1) }],
				valueAxis: '%',
				limit: { label: 'limit 7.00', value: 7 },
				flagged: [],
				zone: 'America/Chicago'
			},
			'print',
			SIZE
		);
		const svg = renderChartSvg(option, SIZE);
		expect(svg).toContain('>4 Mar<');
		expect(svg).toContain('>8 Mar<');
		expect(svg).toContain('>9 Mar, 01:00<');
		expect(svg).toContain('limit 7.00');
	});
});

describe('waveform and phasors', () => {
	it('stacks voltage over current and drops the zoom controls on paper', () => {
		const data = {
			channels: [
				{
					label: 'V A',
					phase: 'L1' as const,
					quantity: 'voltage' as const,
					unit: 'V',
					points: [0, 1, 0.1, -1]
				},
				{
					label: 'I A',
					phase: 'L1' as const,
					quantity: 'current' as const,
					unit: 'A',
					points: [0, 5, 0.1, -5]
				}
			],
			extent_s: { from: 0, to: 0.1 }
		};
		const option = buildWaveformOption(data, 'print', SIZE);
		expect(option.grid).toHaveLength(2);
		expect(option.dataZoom).toBeUndefined();
		expect(buildWaveformOption(data, 'screen-dark', SIZE).dataZoom).toHaveLength(2);
		const svg = renderChartSvg(option, SIZE);
		expect(svg).toContain('Voltage, V');
		expect(svg).toContain('Current, A');
	});

	it('draws each arrow in the colour of its phase', () => {
		const svg = renderChartSvg(
			buildPhasorOption(
				{
					order: 1,
					phasors: [
						{ phase: 'L1', label: 'V A', quantity: 'voltage', magnitude: 277, unit: 'V', angle_deg: 0 },
						{ phase: 'L2', label: 'V B', quantity: 'voltage', magnitude: 277, unit: 'V', angle_deg: -120 }
					]
				},
				'print'
			),
			{ width_px: 480, height_px: 380 }
		);
		expect(svg).toContain(CHART_PALETTES.print.phase1);
		expect(svg).toContain(CHART_PALETTES.print.phase2);
	});
});

describe('signed bars by order', () => {
	const data: OrderBarsData = {
		orders: [0, 5, 7],
		sets: [
			{ label: 'A', look: { phase: 'L1' }, values: [null, 120, -40], hollow: [false, false, true] },
			{ label: 'zero', look: { tone: 'third' }, values: [1, 2, 3] }
		],
		valueAxis: 'active power, W',
		hollowMeans: 'direction undecided'
	};

	it('names order 0 dc, and says what hollow bars mean', () => {
		const svg = renderChartSvg(buildOrderBarsOption(data, 'print', SIZE), SIZE);
		for (const text of ['>dc<', '>5<', 'active power, W', 'direction undecided', '−'])
			expect(svg).toContain(text);
		const { hollowMeans: _, ...plain } = data;
		expect(renderChartSvg(buildOrderBarsOption(plain, 'print', SIZE), SIZE)).not.toContain('undecided');
	});

	it('draws a hollow bar by its outline', () => {
		const solid = { ...data, sets: data.sets.map((set) => ({ ...set, hollow: [] })) };
		const outlines = (of: OrderBarsData) =>
			renderChartSvg(buildOrderBarsOption(of, 'print', SIZE), SIZE).split(
				`stroke="${CHART_PALETTES.print.phase1}"`
			).length - 1;
		expect(outlines(data) - outlines(solid)).toBe(1);
	});

	it('leaves missing values missing in the table', () => {
		expect(orderBarsTable(data).rows).toEqual([
			[0, null, 1],
			[5, 120, 2],
			[7, -40, 3]
		]);
	});
});
