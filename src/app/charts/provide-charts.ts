import type {Provider} from '@angular/core';
import {provideEchartsCore} from 'ngx-echarts';

/** Charts are loaded with the first page that shows one. */
export const provideCharts = (): Provider =>
  provideEchartsCore({echarts: () => import('./echarts').then(file => file.echarts)});
