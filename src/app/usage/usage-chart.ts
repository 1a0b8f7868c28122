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
import {MONO, TEXT, chartInks, type ChartInks} from '../charts/chart-inks';
import {provideCharts} from '../charts/provide-charts';
import {groups} from '../format/numbers';
import {pairsScale} from '../format/pairs-scale';
import {dayUtc, isoDay} from '../format/times';
import {ColourScheme} from '../theme/colour-scheme';
import type {UsageSeries} from './usage-series';

/** Between groups of digits, where text can not be drawn in spans. */
const NARROW_SPACE = '\u202f';

const hatch = (colour: string): object => ({
  symbol: 'rect',
  dashArrayX: [1, 0],
  dashArrayY: [2, 3],
  rotation: -Math.PI / 4,
  color: colour,
});

/** Pairs by day, stacked by key or operation. */
@Component({
  selector: 'app-usage-chart',
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
  `,
  styles: `
    .chart {
      height: 300px;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class UsageChart {
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly scheme = inject(ColourScheme);

  readonly days = input.required<readonly string[]>();
  readonly series = input.required<readonly UsageSeries[]>();
  readonly summary = input.required<string>();
  /** Pairs a day that would use the allowance up evenly; null where it says nothing about the range. */
  readonly evenPace = input<number | null>(null);

  protected readonly options = computed<EChartsCoreOption>(() => {
    this.scheme.isDark();
    const inks = chartInks(this.host);
    const days = this.days();
    const series = this.series();
    const today = isoDay(new Date());
    const totals = days.map(day => series.reduce((sum, {byDay}) => sum + (byDay.get(day) ?? 0), 0));
    const most = Math.max(0, ...totals);
    const scale = pairsScale(most);
    const write = (value: number): string => groups(scale.write(value).digits).join(NARROW_SPACE);
    const colours = coloursOf(inks);
    const top = series.length - 1;
    return {
      animationDuration: 240,
      animationEasing: 'cubicOut',
      textStyle: {fontFamily: TEXT},
      grid: {left: 58, right: 12, top: 26, bottom: 30},
      tooltip: {
        trigger: 'axis',
        renderMode: 'richText',
        backgroundColor: inks.paper,
        borderColor: inks.ink,
        borderRadius: 0,
        axisPointer: {type: 'shadow', shadowStyle: {color: inks.grid, opacity: 0.5}},
        textStyle: {color: inks.ink, fontFamily: MONO, fontSize: 12},
        formatter: (items: readonly {readonly dataIndex: number}[]) => {
          const index = items[0]?.dataIndex ?? 0;
          const parts = series
            .filter(({byDay}) => byDay.has(days[index]))
            .map(({name, byDay}) => `${name} ${write(byDay.get(days[index]) ?? 0)}`);
          const heading = `${dayUtc(days[index])} UTC${days[index] === today ? ', so far' : ''}`;
          return [heading, ...parts, `Sum ${write(totals[index])} ${scale.letter}pairs`].join('\n');
        },
      },
      xAxis: {
        type: 'category',
        data: days,
        axisLine: {lineStyle: {color: inks.ink}},
        axisTick: {show: false},
        axisLabel: {
          color: inks.label,
          fontFamily: MONO,
          interval: (index: number) => isLabelled(index, days),
          formatter: (day: string, index: number) =>
            index === 0 || day.endsWith('-01')
              ? dayUtc(day).slice(0, -5)
              : String(Number(day.slice(8))),
        },
      },
      yAxis: {
        type: 'value',
        splitNumber: 4,
        axisLine: {show: false},
        axisTick: {show: false},
        splitLine: {lineStyle: {color: inks.grid}},
        axisLabel: {color: inks.label, fontFamily: MONO, formatter: axisWriter(scale.letter)},
      },
      series: series.map(({name, byDay, colour}, index) => ({
        type: 'bar',
        name,
        stack: 'pairs',
        barMaxWidth: 28,
        barCategoryGap: '32%',
        itemStyle: {
          color: colours[colour],
          borderColor: inks.paper,
          borderWidth: 0.6,
          ...(colour === 5 ? {decal: hatch(inks.paper)} : {}),
        },
        emphasis: {disabled: true},
        data: days.map((day, k) => ({
          value: byDay.get(day) ?? (index === top && totals[k] > 0 ? 0 : null),
          ...(day === today ? {itemStyle: {decal: hatch(inks.paper)}} : {}),
          ...(index === top
            ? {label: labelOf(day === today, totals[k] === most, write(totals[k]), inks)}
            : {}),
        })),
        ...(index === 0 ? {markLine: paceLine(this.evenPace(), most, write, inks)} : {}),
      })),
    };
  });
}

const coloursOf = (inks: ChartInks): string[] => [
  inks.series2,
  inks.series1,
  inks.series3,
  inks.series4,
  inks.series5,
  inks.outline,
];

const AXIS_SIZES: Readonly<Record<string, number>> = {T: 1e12, G: 1e9, M: 1e6, '': 1};

const axisWriter =
  (letter: string) =>
  (value: number): string =>
    groups(String(Number((value / AXIS_SIZES[letter]).toPrecision(6)))).join(NARROW_SPACE);

/** 1, 5, 10 … of a month; first and every few days elsewhere. */
function isLabelled(index: number, days: readonly string[]): boolean {
  if (days.length <= 8) return true;
  const day = Number(days[index].slice(8));
  return index === 0 || day === 1 || (days.length <= 62 && day % 5 === 0 && day < 31);
}

function labelOf(isToday: boolean, isMost: boolean, text: string, inks: ChartInks): object {
  return {
    show: isToday || isMost,
    position: 'top',
    color: inks.ink,
    fontFamily: TEXT,
    fontSize: 12,
    formatter: isToday ? 'so far' : text,
  };
}

function paceLine(
  pace: number | null,
  most: number,
  write: (value: number) => string,
  inks: ChartInks,
): object | undefined {
  if (pace === null || pace > 1.5 * most || most === 0) return undefined;
  return {
    silent: true,
    symbol: 'none',
    lineStyle: {color: inks.ink, type: [5, 3], width: 1},
    label: {
      position: 'insideEndTop',
      color: inks.ink,
      fontFamily: TEXT,
      formatter: `even pace ${write(pace)}`,
    },
    data: [{yAxis: pace}],
  };
}
