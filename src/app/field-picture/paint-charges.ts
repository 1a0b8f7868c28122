import {css} from './ramps';
import {xOf, yOf, type Layout} from './layout';
import type {Inks} from './paint-frame';
import type {Section, SectionCharge} from './section';

/** More charges than this are a cloud, drawn by their signs alone. */
export const CLOUD = 40;

const HALF = 7.5;

/** Positive is a disc with a plus, negative a square with a minus: the sign never hangs on the colour. */
function paintGlyph(
  ctx: CanvasRenderingContext2D,
  x: number,
  y: number,
  isPositive: boolean,
  inks: Inks,
): void {
  const paper = css(inks.paper);
  ctx.beginPath();
  if (isPositive) ctx.arc(x, y, HALF, 0, 2 * Math.PI);
  else ctx.rect(x - HALF, y - HALF, 2 * HALF, 2 * HALF);
  ctx.fillStyle = isPositive ? inks.positive : inks.negative;
  ctx.strokeStyle = paper;
  ctx.lineWidth = 1.6;
  ctx.fill();
  ctx.stroke();
  ctx.beginPath();
  ctx.moveTo(x - 3.6, y);
  ctx.lineTo(x + 3.6, y);
  if (isPositive) {
    ctx.moveTo(x, y - 3.6);
    ctx.lineTo(x, y + 3.6);
  }
  ctx.stroke();
}

function paintCloud(
  ctx: CanvasRenderingContext2D,
  charges: readonly SectionCharge[],
  layout: Layout,
  inks: Inks,
): void {
  const most = Math.max(...charges.map(({charge}) => Math.abs(charge)));
  for (const isCasing of [true, false]) {
    for (const sign of [1, -1]) {
      ctx.beginPath();
      for (const {u, v, charge} of charges) {
        if (Math.sign(charge) !== sign) continue;
        const half = 2 + 2.5 * Math.sqrt(Math.abs(charge) / most);
        const [x, y] = [xOf(layout, u), yOf(layout, v)];
        ctx.moveTo(x - half, y);
        ctx.lineTo(x + half, y);
        if (sign > 0) {
          ctx.moveTo(x, y - half);
          ctx.lineTo(x, y + half);
        }
      }
      ctx.lineWidth = isCasing ? 3.4 : 2;
      ctx.strokeStyle = isCasing ? css(inks.paper) : sign > 0 ? inks.positive : inks.negative;
      ctx.stroke();
    }
  }
}

export function paintCharges(
  ctx: CanvasRenderingContext2D,
  section: Section,
  layout: Layout,
  inks: Inks,
): void {
  const {charges} = section;
  if (charges.length === 0) return;
  if (charges.length > CLOUD) {
    paintCloud(ctx, charges, layout, inks);
    return;
  }
  for (const {u, v, charge} of charges)
    paintGlyph(ctx, xOf(layout, u), yOf(layout, v), charge > 0, inks);
}
