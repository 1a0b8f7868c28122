import {extent, type Section} from './section';

export interface Box {
  readonly x: number;
  readonly y: number;
  readonly width: number;
  readonly height: number;
}

/** Where things are on the sheet, in CSS pixels. */
export interface Layout {
  readonly width: number;
  readonly height: number;
  readonly plot: Box;
  readonly bar: Box;
  readonly isBarBelow: boolean;
  readonly hasAxes: boolean;
  /** Pixels per length unit, the same along both axes. */
  readonly scale: number;
  readonly low: {readonly u: number; readonly v: number};
}

const NARROW = 520;

/** Equal scale on both axes; the colour bar stands at the right, or lies below on a narrow sheet. */
export function sheet(section: Section, width: number, tallest: number): Layout {
  const {u, v} = extent(section);
  const isBarBelow = width < NARROW;
  const left = 58;
  const right = isBarBelow ? 14 : 92;
  const top = 12;
  const below = isBarBelow ? 104 : 52;
  const scale = Math.min(
    (width - left - right) / (u[1] - u[0]),
    (tallest - top - below) / (v[1] - v[0]),
  );
  const plot = {x: left, y: top, width: scale * (u[1] - u[0]), height: scale * (v[1] - v[0])};
  return {
    width,
    height: Math.ceil(top + plot.height + below),
    plot,
    bar: isBarBelow
      ? {
          x: left,
          y: plot.y + plot.height + 62,
          width: Math.max(120, width - left - right - 20),
          height: 13,
        }
      : {
          x: plot.x + plot.width + 18,
          y: top + 22,
          width: 13,
          height: Math.max(80, plot.height - 14),
        },
    isBarBelow,
    hasAxes: true,
    scale,
    low: {u: u[0], v: v[0]},
  };
}

/** The picture alone, filling a box from edge to edge; what does not fit is cut off. */
export function bleed(section: Section, width: number, height: number): Layout {
  const {u, v} = extent(section);
  const scale = Math.max(width / (u[1] - u[0]), height / (v[1] - v[0]));
  const plot = {
    x: (width - scale * (u[1] - u[0])) / 2,
    y: (height - scale * (v[1] - v[0])) / 2,
    width: scale * (u[1] - u[0]),
    height: scale * (v[1] - v[0]),
  };
  const bar = {x: 0, y: 0, width: 0, height: 0};
  return {
    width,
    height,
    plot,
    bar,
    isBarBelow: false,
    hasAxes: false,
    scale,
    low: {u: u[0], v: v[0]},
  };
}

export const xOf = ({plot, scale, low}: Layout, u: number): number => plot.x + (u - low.u) * scale;
export const yOf = ({plot, scale, low}: Layout, v: number): number =>
  plot.y + plot.height - (v - low.v) * scale;

/** The affine map from grid indices to pixels: x = a i + c j + e, y = b i + d j + f. */
export interface IndexToPixel {
  readonly a: number;
  readonly b: number;
  readonly c: number;
  readonly d: number;
  readonly e: number;
  readonly f: number;
}

export function indexToPixel({origin, iStep, jStep}: Section, layout: Layout): IndexToPixel {
  const {scale} = layout;
  return {
    a: iStep.u * scale,
    b: -iStep.v * scale,
    c: jStep.u * scale,
    d: -jStep.v * scale,
    e: xOf(layout, origin.u),
    f: yOf(layout, origin.v),
  };
}

/** The grid point nearest to a place on the sheet, or null outside the section. */
export function nearestPoint(
  section: Section,
  layout: Layout,
  x: number,
  y: number,
): {readonly i: number; readonly j: number} | null {
  const {a, b, c, d, e, f} = indexToPixel(section, layout);
  const determinant = a * d - b * c;
  const i = Math.round((d * (x - e) - c * (y - f)) / determinant);
  const j = Math.round((a * (y - f) - b * (x - e)) / determinant);
  const isInside = i >= 0 && j >= 0 && i < section.counts[0] && j < section.counts[1];
  // Rounding may have left a zero with a sign.
  return isInside ? {i: i + 0, j: j + 0} : null;
}
