import { BarChart, LineChart, ScatterChart } from 'echarts/charts';
import { GraphicComponent, GridComponent } from 'echarts/components';
import { type EChartsType, init, use } from 'echarts/core';
import { CanvasRenderer, SVGRenderer } from 'echarts/renderers';

/** Only what a figure can ask for. */
use([LineChart, ScatterChart, BarChart, GridComponent, GraphicComponent, SVGRenderer, CanvasRenderer]);

export { type EChartsType, init };
