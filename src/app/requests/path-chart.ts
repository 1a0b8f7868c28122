import {
  ChangeDetectionStrategy,
  Component,
  ElementRef,
  computed,
  inject,
  input,
} from '@angular/core';
import type {EChartsCoreOption} from 'echarts/core';
import {NgxEchartsDirective} from 'ngx-echarts';
import type {FieldAnswer, Targets} from '../../../shared/api';
import {MONO, TEXT, chartInks} from '../charts/chart-inks';
import {provideCharts} from '../charts/provide-charts';
import {plain, significant} from '../format/numbers';
import {ColourScheme} from '../theme/colour-scheme';
import {placesOfTargets} from './targets';

interface Curve {
  readonly title: string;
  readonly values: readonly (readonly [number, number | null])[];
}

/** Potential and field strength along a path, one above the other over the same length. */
@Component({
  selector: 'app-path-chart',
  imports: [NgxEchartsDirective],
  providers: [provideCharts()],
  template: `
    <div
      echarts
      class="chart"
      role="img"
      [attr.aria-label]="summary()"
      [options]="options()"
      [initOpts]="{renderer: 'svg'}"
    ></div>
    <p class="visually-hidden">{{ summary() }}</p>
  `,
  styles: `
    .chart {
      height: 440px;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PathChart {
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly scheme = inject(ColourScheme);

  readonly targets = input.required<Targets>();
  readonly answer = input.required<FieldAnswer>();

  private readonly curves = computed<Curve[]>(() => {
    const {columns, units, count} = this.answer();
    const {arcLength} = placesOfTargets(this.targets());
    if (arcLength === null) return [];
    const {potential, fieldX, fieldY, fieldZ} = columns;
    const strength =
      columns.fieldMagnitude ??
      (fieldX && fieldY && fieldZ
        ? fieldX.map((x, k) => (x === null ? null : Math.hypot(x, fieldY[k] ?? 0, fieldZ[k] ?? 0)))
        : undefined);
    const along = (values: readonly (number | null)[]): [number, number | null][] =>
      Array.from({length: count}, (_, k) => [arcLength(k), values[k]]);
    return [
      ...(potential ? [{title: `V, ${units.potential}`, values: along(potential)}] : []),
      ...(strength ? [{title: `|E|, ${units.field}`, values: along(strength)}] : []),
    ];
  });

  protected readonly summary = computed(() => {
    const parts = this.curves().map(({title, values}) => {
      const known = values.flatMap(([, value]) => (value === null ? [] : [value]));
      const [low, high] = [Math.min(...known), Math.max(...known)];
      return `${title}: from ${plain(significant(low))} to ${plain(significant(high))}`;
    });
    return `Values along the path. ${parts.join('; ')}.`;
  });

  protected readonly options = computed<EChartsCoreOption>(() => {
    this.scheme.isDark();
    const inks = chartInks(this.host);
    const curves = this.curves();
    const unit = this.answer().units.length;
    const share = 100 / curves.length;
    const last = curves[0]?.values.at(-1)?.[0] ?? 0;
    return {
      animation: false,
      textStyle: {fontFamily: TEXT},
      aria: {enabled: false},
      axisPointer: {link: [{xAxisIndex: 'all'}], lineStyle: {color: inks.label, type: 'solid'}},
      tooltip: {
        trigger: 'axis',
        // Drawn with the chart: the page's policy forbids written styles.
        renderMode: 'richText',
        backgroundColor: inks.paper,
        borderColor: inks.ink,
        borderRadius: 0,
        textStyle: {color: inks.ink, fontFamily: MONO, fontSize: 12},
        formatter: (items: readonly {readonly dataIndex: number}[]) => {
          const index = items[0]?.dataIndex ?? 0;
          return [
            `along ${plain(significant(curves[0].values[index][0]))} ${unit}`,
            ...curves.map(({title, values}) => {
              const value = values[index][1];
              const [name, valueUnit] = title.split(', ');
              return value === null
                ? `${name} masked`
                : `${name} ${plain(significant(value))} ${valueUnit}`;
            }),
          ].join('\n');
        },
      },
      grid: curves.map((_, k) => ({
        left: 72,
        right: 20,
        top: `${k * share + 8}%`,
        height: `${share - (k === curves.length - 1 ? 20 : 14)}%`,
      })),
      xAxis: curves.map((_, k) => ({
        type: 'value',
        gridIndex: k,
        min: 0,
        max: last,
        name: k === curves.length - 1 ? `along the path, ${unit}` : '',
        nameLocation: 'end',
        nameGap: 0,
        nameTextStyle: {
          color: inks.label,
          align: 'right',
          verticalAlign: 'top',
          padding: [26, 0, 0, 0],
        },
        axisLine: {onZero: false, lineStyle: {color: inks.outline}},
        axisTick: {lineStyle: {color: inks.outline}},
        splitLine: {show: false},
        axisLabel: {
          show: k === curves.length - 1,
          color: inks.label,
          fontFamily: MONO,
          showMaxLabel: false,
          hideOverlap: true,
        },
      })),
      yAxis: curves.map(({title}, k) => ({
        type: 'value',
        gridIndex: k,
        scale: true,
        name: title,
        nameLocation: 'end',
        nameTextStyle: {color: inks.label, align: 'left', padding: [0, 0, 2, -60]},
        axisLine: {show: false},
        axisTick: {show: false},
        splitNumber: 4,
        splitLine: {lineStyle: {color: inks.grid}},
        axisLabel: {
          color: inks.label,
          fontFamily: MONO,
          formatter: (value: number) => String(value).replace('-', '−'),
        },
      })),
      series: curves.map(({title, values}, k) => ({
        type: 'line',
        name: title,
        xAxisIndex: k,
        yAxisIndex: k,
        data: values,
        showSymbol: false,
        connectNulls: false,
        lineStyle: {width: 2, color: k === 0 ? inks.series2 : inks.series3},
        itemStyle: {color: k === 0 ? inks.series2 : inks.series3},
      })),
    };
  });
}
