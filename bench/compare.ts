import {cpus} from 'node:os';

/** Median and spread of repeated measurements. */
export interface Summary {
  readonly median: number;
  readonly low: number;
  readonly high: number;
}

export function summarise(values: readonly number[]): Summary {
  const sorted = [...values].sort((a, b) => a - b);
  return {median: quantile(sorted, 0.5), low: sorted[0], high: sorted[sorted.length - 1]};
}

/** @param sorted ascending */
export function quantile(sorted: readonly number[], share: number): number {
  const place = share * (sorted.length - 1);
  const below = Math.floor(place);
  const above = Math.min(below + 1, sorted.length - 1);
  return sorted[below] + (place - below) * (sorted[above] - sorted[below]);
}

/** What the figures were measured on; they mean little elsewhere. */
export function printMachine(): void {
  const [{model}] = cpus();
  process.stdout.write(`Node ${process.version}, ${cpus().length} × ${model}\n`);
}

export function show({median, low, high}: Summary, digits = 2): string {
  return `${median.toFixed(digits)} (${low.toFixed(digits)} … ${high.toFixed(digits)})`;
}
