import type {Inks} from './paint-frame';
import type {Rgb} from './ramps';

/** A colour that the browser has worked out, light or dark as the page is now. */
function resolved(host: HTMLElement, token: string): string {
  const probe = host.ownerDocument.createElement('span');
  probe.hidden = true;
  probe.style.color = `var(${token})`;
  host.append(probe);
  const colour = getComputedStyle(probe).color;
  probe.remove();
  return colour;
}

function channels(colour: string): Rgb {
  const [red = 0, green = 0, blue = 0] = (colour.match(/[\d.]+/g) ?? []).map(Number);
  return [red, green, blue];
}

/** The colours and faces of the sheet, read once for every painting. */
export function readInks(host: HTMLElement): Inks {
  return {
    paper: channels(resolved(host, '--mat-sys-surface-container-lowest')),
    ink: channels(resolved(host, '--mat-sys-on-surface')),
    label: resolved(host, '--mat-sys-on-surface-variant'),
    line: resolved(host, '--mat-sys-outline'),
    positive: resolved(host, '--fst-positive'),
    negative: resolved(host, '--fst-negative'),
    mono: `'JetBrains Mono Variable', monospace`,
    text: `'Hanken Grotesk Variable', sans-serif`,
  };
}
