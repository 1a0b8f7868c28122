import type {UsageDay} from '../../../shared/api';
import {daysOf, usageRange} from './usage-range';
import {stacked, usageCsv, usageSeries} from './usage-series';

const now = new Date('2026-10-15T23:30:00Z');
const day = (
  name: string,
  pairs: number,
  date = '2026-10-01',
  operation: UsageDay['operation'] = 'fields',
): UsageDay => ({
  day: date,
  source: {kind: 'key', id: name, name, lastFour: '4f2a'},
  operation,
  calls: 1,
  pairs,
});

describe('a usage range', () => {
  it('is this month unless the address says otherwise, with the days to come left empty', () => {
    const range = usageRange(undefined, undefined, undefined, now);
    expect(range).toEqual({
      name: 'month',
      since: '2026-10-01',
      until: '2026-10-15',
      end: '2026-10-31',
    });
    expect(daysOf(range)).toHaveLength(31);
  });

  it('counts seven days with today, and knows the month before, in UTC', () => {
    expect(usageRange('7-days', undefined, undefined, now)).toMatchObject({
      since: '2026-10-09',
      until: '2026-10-15',
    });
    expect(usageRange('last-month', undefined, undefined, now)).toMatchObject({
      since: '2026-09-01',
      until: '2026-09-30',
    });
    expect(
      usageRange('last-month', undefined, undefined, new Date('2026-01-02T00:00:00Z')),
    ).toMatchObject({
      since: '2025-12-01',
      until: '2025-12-31',
    });
  });

  it('takes custom days only where they are days in order', () => {
    expect(usageRange('custom', '2026-08-01', '2026-08-03', now)).toMatchObject({
      name: 'custom',
      end: '2026-08-03',
    });
    expect(usageRange('custom', '2026-08-03', '2026-08-01', now).name).toBe('month');
    expect(usageRange('custom', 'yesterday', '2026-08-01', now).name).toBe('month');
  });
});

describe('usage series', () => {
  it('put the biggest user first and sum by key or by operation', () => {
    const days = [day('a', 5), day('b', 20), day('a', 7, '2026-10-02', 'forces')];
    expect(usageSeries(days, 'key').map(({name, pairs}) => [name, pairs])).toEqual([
      ['b', 20],
      ['a', 12],
    ]);
    expect(usageSeries(days, 'operation').map(({name, pairs}) => [name, pairs])).toEqual([
      ['Fields', 25],
      ['Forces', 7],
    ]);
  });

  it('stack five and all others together, losing nothing', () => {
    const days = Array.from({length: 8}, (_, k) => day(`key ${k}`, 100 - k));
    const stack = stacked(usageSeries(days, 'key'));
    expect(stack).toHaveLength(6);
    expect(stack[5]).toMatchObject({name: 'Others', pairs: 95 + 94 + 93});
    expect(stack.reduce((sum, {pairs}) => sum + pairs, 0)).toBe(
      days.reduce((sum, {pairs}) => sum + pairs, 0),
    );
  });

  it('are written to CSV with quoted names', () => {
    const source = {kind: 'key', id: 'k1', name: 'a, "b"', lastFour: '4f2a'} as const;
    const [heads, row] = usageCsv([{...day('k1', 5), source}]).split('\r\n');
    expect(heads).toBe('day,sourceKind,sourceId,sourceName,lastFour,operation,calls,pairs');
    expect(row).toBe('2026-10-01,key,k1,"a, ""b""",4f2a,fields,1,5');
  });
});
