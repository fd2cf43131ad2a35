import { BarChart, LineChart, ScatterChart } from 'echarts/charts';
import { GraphicComponent, GridComponent } from 'echarts/components';
import { use } from 'echarts/core';
import { SVGRenderer } from 'echarts/renderers';

/** Only what a figure can ask for, in a module of its own: the whole library takes longer to load than a report to print. */
use([LineChart, ScatterChart, BarChart, GridComponent, GraphicComponent, SVGRenderer]);

export { init, setPlatformAPI } from 'echarts/core';
