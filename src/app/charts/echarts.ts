import {BarChart, LineChart} from 'echarts/charts';
import {AriaComponent, GridComponent, TooltipComponent} from 'echarts/components';
import * as echarts from 'echarts/core';
import {SVGRenderer} from 'echarts/renderers';

echarts.use([AriaComponent, BarChart, GridComponent, LineChart, SVGRenderer, TooltipComponent]);

export {echarts};
