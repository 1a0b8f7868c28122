import {css, type Rgb} from './ramps';
import {extent, type Section} from './section';
import {xOf, yOf, type Layout} from './layout';
import type {Scale} from './levels';
import {ticks} from './ticks';

export interface Inks {
  readonly paper: Rgb;
  readonly ink: Rgb;
  readonly label: string;
  readonly line: string;
  readonly positive: string;
  readonly negative: string;
  readonly mono: string;
  readonly text: string;
}

const MINUS = '−';
export const written = (value: number, decimals: number): string =>
  (Math.abs(value) < 0.5 * 10 ** -decimals ? 0 : value).toFixed(decimals).replace('-', MINUS);

/** Axes left and below with ticks outside, their names at their ends, and the name of the section. */
export function paintAxes(
  ctx: CanvasRenderingContext2D,
  section: Section,
  layout: Layout,
  inks: Inks,
): void {
  const {plot} = layout;
  const {u, v} = extent(section);
  ctx.lineWidth = 1;
  ctx.strokeStyle = inks.line;
  ctx.strokeRect(plot.x - 0.5, plot.y - 0.5, plot.width + 1, plot.height + 1);
  ctx.fillStyle = inks.label;
  ctx.font = `400 11.5px ${inks.mono}`;

  const bottom = plot.y + plot.height;
  const across = ticks(u[0], u[1], plot.width / 55);
  ctx.textAlign = 'center';
  ctx.textBaseline = 'top';
  ctx.beginPath();
  for (const [list, size] of [
    [across.minor, 4],
    [across.major, 7],
  ] as const) {
    for (const value of list) {
      const x = Math.round(xOf(layout, value)) + 0.5;
      ctx.moveTo(x, bottom);
      ctx.lineTo(x, bottom + size);
    }
  }
  const upwards = ticks(v[0], v[1], plot.height / 45);
  for (const [list, size] of [
    [upwards.minor, 4],
    [upwards.major, 7],
  ] as const) {
    for (const value of list) {
      const y = Math.round(yOf(layout, value)) + 0.5;
      ctx.moveTo(plot.x, y);
      ctx.lineTo(plot.x - size, y);
    }
  }
  ctx.stroke();
  for (const value of across.major) {
    ctx.fillText(written(value, across.decimals), xOf(layout, value), bottom + 10);
  }
  ctx.textAlign = 'right';
  ctx.textBaseline = 'middle';
  for (const value of upwards.major) {
    ctx.fillText(written(value, upwards.decimals), plot.x - 11, yOf(layout, value) + 0.5);
  }

  ctx.font = `400 12px ${inks.text}`;
  const unit = section.units.length;
  ctx.textAlign = 'right';
  ctx.textBaseline = 'alphabetic';
  ctx.fillText(`${section.axes[0].name}, ${unit}`, plot.x + plot.width, bottom + 40);
  ctx.textAlign = 'left';
  ctx.fillText(section.name, plot.x, bottom + 40);
  ctx.save();
  ctx.translate(plot.x - 44, plot.y);
  ctx.rotate(-Math.PI / 2);
  ctx.textAlign = 'right';
  ctx.fillText(`${section.axes[1].name}, ${unit}`, 0, 0);
  ctx.restore();
}

/** The colour bar in the same steps as the map, pointed where values lie beyond its ends. */
export function paintBar(
  ctx: CanvasRenderingContext2D,
  layout: Layout,
  scale: Scale,
  colours: readonly Rgb[],
  title: string,
  inks: Inks,
): void {
  const {bar, isBarBelow, plot} = layout;
  const {levels} = scale;
  ctx.font = `400 12px ${inks.text}`;
  ctx.fillStyle = inks.label;
  ctx.textAlign = 'left';
  ctx.textBaseline = 'alphabetic';
  if (isBarBelow) ctx.fillText(title, 8, bar.y + 10, plot.x - 14);
  else ctx.fillText(title, bar.x, layout.plot.y + 8);
  if (levels.length === 0) return;

  const size = isBarBelow ? bar.width : bar.height;
  const tip = 9;
  const inner = size - 2 * tip;
  const bands = levels.length - 1;
  // Along the bar, 0 at the low end; across it, 0 to 13.
  const point = (along: number, across: number): [number, number] =>
    isBarBelow ? [bar.x + along, bar.y + across] : [bar.x + across, bar.y + size - along];
  const polygon = (points: readonly [number, number][], colour: Rgb): void => {
    ctx.beginPath();
    points.forEach(([along, across]) => ctx.lineTo(...point(along, across)));
    ctx.closePath();
    ctx.fillStyle = css(colour);
    ctx.fill();
  };
  const edge = (k: number): number => tip + (bands === 0 ? inner / 2 : (k * inner) / bands);
  for (let k = 0; k < bands; k++) {
    polygon(
      [
        [edge(k), 0],
        [edge(k + 1) + 0.4, 0],
        [edge(k + 1) + 0.4, 13],
        [edge(k), 13],
      ],
      colours[k + 1],
    );
  }
  const outline: [number, number][] = [];
  if (scale.isCutBelow)
    polygon(
      [
        [tip, 0],
        [tip, 13],
        [0, 6.5],
      ],
      colours[0],
    );
  outline.push([tip, 13], scale.isCutBelow ? [0, 6.5] : [tip, 6.5], [tip, 0]);
  if (scale.isCutAbove)
    polygon(
      [
        [size - tip, 0],
        [size - tip, 13],
        [size, 6.5],
      ],
      colours[bands + 1],
    );
  outline.push([size - tip, 0], scale.isCutAbove ? [size, 6.5] : [size - tip, 6.5], [
    size - tip,
    13,
  ]);
  ctx.beginPath();
  outline.forEach(([along, across]) => ctx.lineTo(...point(along, across)));
  ctx.closePath();
  ctx.strokeStyle = inks.line;
  ctx.lineWidth = 1;
  ctx.stroke();

  const texts = levels.map(level =>
    written(level, scale.ramp === 'sequential' ? decimalsFor(level, scale) : scale.decimals),
  );
  ctx.font = `400 11.5px ${inks.mono}`;
  const room = isBarBelow ? Math.max(...texts.map(text => ctx.measureText(text).width)) + 10 : 17;
  const each = [1, 2, 5, 10].find(step => (step * inner) / Math.max(1, bands) >= room) ?? 20;
  const zero = Math.max(0, levels.indexOf(0));
  const widest = Math.max(...texts.map(text => ctx.measureText(text).width));
  ctx.fillStyle = inks.label;
  levels.forEach((_, k) => {
    if ((k - zero) % each !== 0) return;
    const [x, y] = point(edge(k), 13);
    ctx.beginPath();
    ctx.moveTo(x, y);
    ctx.lineTo(x + (isBarBelow ? 0 : 5), y + (isBarBelow ? 5 : 0));
    ctx.stroke();
    ctx.textAlign = isBarBelow ? 'center' : 'right';
    ctx.textBaseline = isBarBelow ? 'top' : 'middle';
    if (isBarBelow) ctx.fillText(texts[k], x, y + 8);
    else ctx.fillText(texts[k], x + 10 + widest, y + 0.5);
  });
}

/** A ladder of levels has its own decimals on each rung: 0.5, 1, 200. */
export function decimalsFor(level: number, scale: Scale): number {
  if (scale.ramp === 'diverging') return scale.decimals;
  const digits = String(level).split('.')[1]?.length ?? 0;
  return Math.min(digits, 6);
}
