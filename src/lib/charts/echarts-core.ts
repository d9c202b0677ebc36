/**
 * The parts of ECharts in use, registered once. Import this file lazily in the browser: it is the largest chunk of
 * the application.
 */
import { BarChart, CustomChart, HeatmapChart, LineChart } from 'echarts/charts';
import {
	DataZoomComponent,
	GridComponent,
	LegendComponent,
	MarkAreaComponent,
	MarkLineComponent,
	PolarComponent,
	TooltipComponent,
	VisualMapComponent
} from 'echarts/components';
import { init, use } from 'echarts/core';
import { CanvasRenderer, SVGRenderer } from 'echarts/renderers';

use([
	BarChart,
	CustomChart,
	HeatmapChart,
	LineChart,
	DataZoomComponent,
	GridComponent,
	LegendComponent,
	MarkAreaComponent,
	MarkLineComponent,
	PolarComponent,
	TooltipComponent,
	VisualMapComponent,
	CanvasRenderer,
	SVGRenderer
]);

export { init };
