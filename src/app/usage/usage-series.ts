import type {UsageDay} from '../../../shared/api';

export type GroupBy = 'key' | 'operation';

/** What one key, or one operation, spent. */
export interface UsageSeries {
  readonly id: string;
  readonly name: string;
  /** "…4f2a"; empty where there is none. */
  readonly ending: string;
  readonly calls: number;
  readonly pairs: number;
  readonly byDay: ReadonlyMap<string, number>;
  /** 0 to 4 for the five colours, 5 for all others together. */
  readonly colour: number;
}

const COLOURS = 5;

interface Sum {
  id: string;
  name: string;
  ending: string;
  calls: number;
  pairs: number;
  byDay: Map<string, number>;
}

/** The days summed by key or by operation, the biggest user first; from the sixth on they share a colour. */
export function usageSeries(days: readonly UsageDay[], by: GroupBy): UsageSeries[] {
  const sums = new Map<string, Sum>();
  for (const {day, source, operation, calls, pairs} of days) {
    const id = by === 'key' ? source.id : operation;
    const name = by === 'key' ? source.name : operation[0].toUpperCase() + operation.slice(1);
    const ending = by === 'key' && source.lastFour !== '' ? `…${source.lastFour}` : '';
    const sum = sums.get(id) ?? {
      id,
      name,
      ending,
      calls: 0,
      pairs: 0,
      byDay: new Map<string, number>(),
    };
    sum.calls += calls;
    sum.pairs += pairs;
    sum.byDay.set(day, (sum.byDay.get(day) ?? 0) + pairs);
    sums.set(id, sum);
  }
  return [...sums.values()]
    .sort((a, b) => b.pairs - a.pairs || a.id.localeCompare(b.id))
    .map((sum, index) => ({...sum, colour: Math.min(index, COLOURS)}));
}

/** The series as the chart stacks them: the sixth and all after it are one, "Others". */
export function stacked(series: readonly UsageSeries[]): UsageSeries[] {
  const shown = series.slice(0, COLOURS);
  const rest = series.slice(COLOURS);
  if (rest.length === 0) return [...shown];
  const byDay = new Map<string, number>();
  for (const {byDay: days} of rest) {
    for (const [day, pairs] of days) byDay.set(day, (byDay.get(day) ?? 0) + pairs);
  }
  const others: UsageSeries = {
    id: 'others',
    name: 'Others',
    ending: '',
    calls: rest.reduce((sum, {calls}) => sum + calls, 0),
    pairs: rest.reduce((sum, {pairs}) => sum + pairs, 0),
    byDay,
    colour: COLOURS,
  };
  return [...shown, others];
}

/** One row a day, source and operation, as the service keeps them; locale-free. */
export function usageCsv(days: readonly UsageDay[]): string {
  const quoted = (text: string): string =>
    /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
  const rows = days.map(({day, source, operation, calls, pairs}) =>
    [
      day,
      source.kind,
      source.id,
      quoted(source.name),
      source.lastFour,
      operation,
      calls,
      pairs,
    ].join(','),
  );
  return ['day,sourceKind,sourceId,sourceName,lastFour,operation,calls,pairs', ...rows, ''].join(
    '\r\n',
  );
}
