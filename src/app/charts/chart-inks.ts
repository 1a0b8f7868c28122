const TOKENS = {
  ink: '--mat-sys-on-surface',
  label: '--mat-sys-on-surface-variant',
  outline: '--mat-sys-outline',
  paper: '--mat-sys-surface-container-lowest',
  grid: '--fst-grid',
  positive: '--fst-positive',
  series1: '--fst-series-1',
  series2: '--fst-series-2',
  series3: '--fst-series-3',
  series4: '--fst-series-4',
  series5: '--fst-series-5',
} as const;

export type ChartInks = Readonly<Record<keyof typeof TOKENS, string>>;

/** The colours of charts as the browser has worked them out, light or dark as the page is now. */
export function chartInks(host: HTMLElement): ChartInks {
  const probe = host.ownerDocument.createElement('span');
  probe.hidden = true;
  host.append(probe);
  const inks = Object.fromEntries(
    Object.entries(TOKENS).map(([name, token]) => {
      probe.style.color = `var(${token})`;
      return [name, getComputedStyle(probe).color];
    }),
  );
  probe.remove();
  return inks as ChartInks;
}

export const MONO = "'JetBrains Mono Variable', monospace";
export const TEXT = "'Hanken Grotesk Variable', sans-serif";
