import type { EChartsOption } from 'echarts';
import type { ChartSize } from '$lib/charts/theme';

/** Gives a file to the browser to save. */
export function downloadBlob(blob: Blob, fileName: string): void {
	const address = URL.createObjectURL(blob);
	const link = document.createElement('a');
	link.href = address;
	link.download = fileName;
	link.click();
	setTimeout(() => URL.revokeObjectURL(address), 10_000);
}

/** The chart as it would be printed, twice as fine as the screen's pixels. */
export async function chartPng(option: EChartsOption, size: ChartSize): Promise<Blob> {
	const { init } = await import('$lib/charts/echarts-core');
	const canvasHolder = document.createElement('div');
	const chart = init(canvasHolder, null, {
		renderer: 'canvas',
		width: size.width_px,
		height: size.height_px,
		devicePixelRatio: 2
	});
	try {
		chart.setOption({ ...option, animation: false });
		const canvas = chart.renderToCanvas({ pixelRatio: 2, backgroundColor: '#ffffff' });
		return await new Promise<Blob>((resolve, reject) =>
			canvas.toBlob((blob) => (blob ? resolve(blob) : reject(new Error('The picture is empty'))), 'image/png')
		);
	} finally {
		chart.dispose();
	}
}

export async function chartSvg(option: EChartsOption, size: ChartSize): Promise<Blob> {
	const { renderChartSvg } = await import('$lib/charts/render-chart-svg');
	return new Blob([renderChartSvg(option, size)], { type: 'image/svg+xml' });
}
