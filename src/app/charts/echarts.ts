import {BarChart, LineChart} from 'echarts/charts';
import {GridComponent, MarkLineComponent, TooltipComponent} from 'echarts/components';
import * as echarts from 'echarts/core';
import {SVGRenderer} from 'echarts/renderers';

echarts.use([BarChart, GridComponent, LineChart, MarkLineComponent, SVGRenderer, TooltipComponent]);

export {echarts};
