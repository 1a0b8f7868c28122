import {arrows} from './arrows';
import type {Contour} from './contour-rings';
import {labelPlaces, type Circle, type LabelPlace} from './label-places';
import {indexToPixel, xOf, yOf, type IndexToPixel, type Layout} from './layout';
import type {Scale} from './levels';
import {CLOUD, paintCharges} from './paint-charges';
import {decimalsFor, paintAxes, paintBar, written, type Inks} from './paint-frame';
import {contrast, css, mix, type Rgb} from './ramps';
import type {Section} from './section';

export interface Picture {
  readonly section: Section;
  readonly values: Float64Array;
  readonly scale: Scale;
  readonly contours: readonly Contour[];
  readonly colours: readonly Rgb[];
  readonly layout: Layout;
  readonly inks: Inks;
  readonly title: string;
  readonly hasArrows: boolean;
  /** Lines of force to draw instead of arrows, flat in u, v. */
  readonly lines: readonly Float64Array[];
}

interface Drawn {
  readonly level: number;
  readonly path: Path2D;
  readonly lines: readonly Float64Array[];
}

function drawn({level, rings}: Contour, {a, b, c, d, e, f}: IndexToPixel): Drawn {
  const path = new Path2D();
  const lines = rings.map(ring => {
    const line = new Float64Array(ring.length);
    for (let k = 0; k < ring.length; k += 2) {
      const x = a * ring[k] + c * ring[k + 1] + e;
      const y = b * ring[k] + d * ring[k + 1] + f;
      line[k] = x;
      line[k + 1] = y;
      if (k === 0) path.moveTo(x, y);
      else path.lineTo(x, y);
    }
    path.closePath();
    return line;
  });
  return {level, path, lines};
}

/** The outline of the grid points, which need not be a rectangle. */
function outline({counts}: Section, {a, b, c, d, e, f}: IndexToPixel): Path2D {
  const [i, j] = [counts[0] - 1, counts[1] - 1];
  const path = new Path2D();
  for (const [p, q] of [
    [0, 0],
    [i, 0],
    [i, j],
    [0, j],
  ])
    path.lineTo(a * p + c * q + e, b * p + d * q + f);
  path.closePath();
  return path;
}

export function paint(ctx: CanvasRenderingContext2D, picture: Picture): void {
  const {section, layout, scale, colours, inks} = picture;
  const map = indexToPixel(section, layout);
  const shapes = picture.contours.map(contour => drawn(contour, map));
  const inkOn = (band: Rgb): Rgb =>
    contrast(band, inks.ink) >= contrast(band, inks.paper) ? inks.ink : inks.paper;
  const bandOf = (value: number): number => {
    let band = 0;
    while (band < scale.levels.length && value >= scale.levels[band]) band++;
    return band;
  };

  ctx.save();
  const clip = outline(section, map);
  ctx.clip(clip);
  ctx.fillStyle = css(colours[0]);
  ctx.fill(clip);
  shapes.forEach(({path}, k) => {
    ctx.fillStyle = css(colours[k + 1]);
    ctx.fill(path, 'evenodd');
  });
  paintGaps(ctx, picture, map);

  const taken: Circle[] =
    section.charges.length > CLOUD
      ? []
      : section.charges.map(({u, v}) => ({x: xOf(layout, u), y: yOf(layout, v), radius: 10}));
  const labels = placeLabels(ctx, picture, shapes, taken);
  ctx.lineJoin = 'round';
  shapes.forEach(({level, path}, k) => {
    const isZero = scale.ramp === 'diverging' && level === 0;
    ctx.setLineDash(scale.ramp === 'diverging' && level < 0 ? [5, 2.5] : []);
    ctx.lineWidth = isZero ? 1.5 : 0.85;
    ctx.globalAlpha = isZero ? 1 : 0.62;
    ctx.strokeStyle = css(inkOn(colours[k]));
    ctx.stroke(path);
  });
  ctx.setLineDash([]);
  ctx.globalAlpha = 1;
  if (picture.lines.length > 0) paintLines(ctx, picture);
  else if (picture.hasArrows) {
    ctx.lineWidth = 1.15;
    ctx.lineCap = 'round';
    for (const {x, y, dx, dy, index} of arrows(section, layout, taken)) {
      ctx.strokeStyle = css(inkOn(colours[bandOf(picture.values[index])]));
      paintArrow(ctx, x, y, dx, dy);
    }
  }
  for (const label of labels) paintLabel(ctx, label, colours, bandOf(label.level), inkOn, inks);
  paintCharges(ctx, section, layout, inks);
  ctx.restore();
  if (layout.hasAxes) {
    paintAxes(ctx, section, layout, inks);
    paintBar(ctx, layout, scale, colours, picture.title, inks);
  }
}

/** Masked points are gaps of one cell, crossed out, under whatever charge lies there. */
function paintGaps(
  ctx: CanvasRenderingContext2D,
  {section, values, inks}: Picture,
  {a, b, c, d, e, f}: IndexToPixel,
): void {
  const path = new Path2D();
  let isAny = false;
  for (let k = 0; k < values.length; k++) {
    if (!Number.isNaN(values[k])) continue;
    isAny = true;
    const [i, j] = [k % section.counts[0], Math.floor(k / section.counts[0])];
    for (const [p, q] of [
      [-0.5, -0.5],
      [0.5, -0.5],
      [0.5, 0.5],
      [-0.5, 0.5],
    ]) {
      const [x, y] = [a * (i + p) + c * (j + q) + e, b * (i + p) + d * (j + q) + f];
      if (p < 0 && q < 0) path.moveTo(x, y);
      else path.lineTo(x, y);
    }
    path.closePath();
  }
  if (!isAny) return;
  ctx.fillStyle = css(inks.paper);
  ctx.fill(path);
}

function placeLabels(
  ctx: CanvasRenderingContext2D,
  {scale, layout, inks}: Picture,
  shapes: readonly Drawn[],
  taken: Circle[],
): LabelPlace[] {
  ctx.font = `400 10.5px ${inks.mono}`;
  const {plot, width, height} = layout;
  const x = Math.max(plot.x, 0);
  const y = Math.max(plot.y, 0);
  const inside = {
    x,
    y,
    width: Math.min(plot.x + plot.width, width) - x,
    height: Math.min(plot.y + plot.height, height) - y,
  };
  // The zero line first, then outwards from it: the outer lines are longer and find room anywhere.
  const order = [...shapes].sort((p, q) => Math.abs(p.level) - Math.abs(q.level));
  return order.flatMap(({level, lines}) => {
    const text = written(level, decimalsFor(level, scale));
    const size = ctx.measureText(text).width;
    return lines.flatMap(line => labelPlaces(line, text, size, level, inside, taken));
  });
}

function paintLabel(
  ctx: CanvasRenderingContext2D,
  {x, y, angle, text}: LabelPlace,
  colours: readonly Rgb[],
  band: number,
  inkOn: (band: Rgb) => Rgb,
  inks: Inks,
): void {
  const ink = inkOn(colours[band]);
  const away = ink === inks.ink ? inks.paper : inks.ink;
  ctx.save();
  ctx.translate(x, y);
  ctx.rotate(angle);
  ctx.font = `400 10.5px ${inks.mono}`;
  ctx.textAlign = 'center';
  ctx.textBaseline = 'middle';
  ctx.lineJoin = 'round';
  ctx.lineWidth = 4;
  ctx.strokeStyle = css(mix(colours[band], away, 0.2));
  ctx.strokeText(text, 0, 0.5);
  ctx.fillStyle = css(ink);
  ctx.fillText(text, 0, 0.5);
  ctx.restore();
}

function paintArrow(
  ctx: CanvasRenderingContext2D,
  x: number,
  y: number,
  dx: number,
  dy: number,
): void {
  const size = Math.hypot(dx, dy);
  const [ux, uy] = [dx / size, dy / size];
  const [tipX, tipY] = [x + dx, y + dy];
  const head = Math.min(5, size);
  ctx.beginPath();
  ctx.moveTo(x - dx, y - dy);
  ctx.lineTo(tipX, tipY);
  ctx.moveTo(tipX - head * (ux + 0.6 * uy), tipY - head * (uy - 0.6 * ux));
  ctx.lineTo(tipX, tipY);
  ctx.lineTo(tipX - head * (ux - 0.6 * uy), tipY - head * (uy + 0.6 * ux));
  ctx.stroke();
}

function paintLines(ctx: CanvasRenderingContext2D, {lines, layout, inks}: Picture): void {
  for (const line of lines) {
    const path = new Path2D();
    for (let k = 0; k < line.length; k += 2)
      path.lineTo(xOf(layout, line[k]), yOf(layout, line[k + 1]));
    ctx.globalAlpha = 0.5;
    ctx.strokeStyle = css(inks.ink);
    ctx.lineWidth = 0.9;
    ctx.stroke(path);
    const middle = 2 * Math.floor(0.14 * line.length);
    if (middle + 3 >= line.length) continue;
    const [x, y] = [xOf(layout, line[middle]), yOf(layout, line[middle + 1])];
    const angle = Math.atan2(yOf(layout, line[middle + 3]) - y, xOf(layout, line[middle + 2]) - x);
    ctx.save();
    ctx.globalAlpha = 0.8;
    ctx.translate(x, y);
    ctx.rotate(angle);
    ctx.beginPath();
    ctx.moveTo(5, 0);
    ctx.lineTo(-4, -3.6);
    ctx.lineTo(-4, 3.6);
    ctx.closePath();
    ctx.fillStyle = css(inks.ink);
    ctx.fill();
    ctx.restore();
  }
  ctx.globalAlpha = 1;
}
