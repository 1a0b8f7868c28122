import type {FieldPicture} from './field-picture';
import {sheet} from './layout';
import {paint} from './paint';
import {css} from './ramps';
import type {Section} from './section';

const WIDTH = 960;
const BLOCK = 58;
const RATIO = 2;

export interface BlockCell {
  readonly label: string;
  readonly value: string;
}

/** The picture as a PNG with its title block, so that it can stand by itself in a design review. */
export function savePng(
  picture: FieldPicture,
  section: Section,
  cells: readonly BlockCell[],
): Promise<Blob> {
  const layout = sheet(section, WIDTH, 720);
  const drawing = picture.picture(layout);
  const {inks} = drawing;
  const canvas = document.createElement('canvas');
  canvas.width = WIDTH * RATIO;
  canvas.height = (layout.height + BLOCK + 16) * RATIO;
  const ctx = canvas.getContext('2d');
  if (!ctx) return Promise.reject(new Error('this browser has no canvas'));
  ctx.scale(RATIO, RATIO);
  ctx.fillStyle = css(inks.paper);
  ctx.fillRect(0, 0, WIDTH, layout.height + BLOCK + 16);
  paint(ctx, drawing);

  const top = layout.height + 0.5;
  ctx.strokeStyle = inks.line;
  ctx.lineWidth = 1;
  ctx.strokeRect(8.5, top, WIDTH - 17, BLOCK);
  const width = (WIDTH - 17) / cells.length;
  ctx.textAlign = 'left';
  ctx.textBaseline = 'alphabetic';
  cells.forEach(({label, value}, k) => {
    const x = 8.5 + k * width;
    if (k > 0) {
      ctx.beginPath();
      ctx.moveTo(x, top);
      ctx.lineTo(x, top + BLOCK);
      ctx.stroke();
    }
    ctx.fillStyle = inks.label;
    ctx.font = `500 12px ${inks.text}`;
    ctx.fillText(label, x + 12, top + 23, width - 20);
    ctx.fillStyle = css(inks.ink);
    ctx.font = `400 13px ${inks.mono}`;
    ctx.fillText(value, x + 12, top + 43, width - 20);
  });
  return new Promise((resolve, reject) => {
    canvas.toBlob(
      blob => (blob ? resolve(blob) : reject(new Error('the picture could not be encoded'))),
      'image/png',
    );
  });
}
