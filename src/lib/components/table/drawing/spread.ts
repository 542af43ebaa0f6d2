import { seen, toScreen, type Viewport } from '$lib/client/viewport';
import { spreadMarks } from '$lib/cloth/spread';
import type { ClothLook } from './cloth';
import { dyes, inkOn, mix } from './dyes';

/*
 * How the cloth is spread and what is woven or printed into it: folds, the border of what lies doubled, the selvedge of the ply that is
 * folded over, the lines of the repeat to scale, and in words which side is up and what a placement gives.
 */

const FACE = '"IBM Plex Sans", system-ui, sans-serif';

function lineBetween(
  ctx: CanvasRenderingContext2D | Path2D,
  view: Viewport,
  from: { x: number; y: number },
  to: { x: number; y: number }
): void {
  const a = toScreen(view, from);
  const b = toScreen(view, to);
  ctx.moveTo(a.left, a.top);
  ctx.lineTo(b.left, b.top);
}

/** A fold along the warp: a rounded double edge. */
export function drawFold(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  colour: string,
  start: number,
  end: number,
  y: number
): void {
  ctx.lineCap = 'round';
  for (const [out, thick, ink] of [
    [0, 5, mix(colour, dyes.charcoal, 0.55)],
    [0, 1.5, mix(colour, dyes.bleached, 0.5)]
  ] as const) {
    ctx.strokeStyle = ink;
    ctx.lineWidth = thick;
    ctx.beginPath();
    lineBetween(ctx, view, { x: start, y: y + out }, { x: end, y: y + out });
    ctx.stroke();
  }
  ctx.lineCap = 'butt';
}

/** A fold across, at the start of the cloth. */
export function drawCrosswiseFold(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  colour: string,
  below: number,
  above: number
): void {
  ctx.strokeStyle = mix(colour, dyes.charcoal, 0.55);
  ctx.lineWidth = 5;
  ctx.beginPath();
  lineBetween(ctx, view, { x: 0, y: below }, { x: 0, y: above });
  ctx.stroke();
}

/** What lies doubled and what lies single, the covered margin between them, and the marks in words. */
export function drawLayers(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  { strip, colour }: ClothLook,
  start: number,
  end: number
): void {
  for (const zone of strip.spread) {
    const a = toScreen(view, { x: start, y: zone.from });
    const b = toScreen(view, { x: end, y: zone.to });
    const box = [
      Math.min(a.left, b.left),
      Math.min(a.top, b.top),
      Math.abs(b.left - a.left),
      Math.abs(b.top - a.top)
    ] as const;
    if (zone.layers.length === 0) {
      // The selvedge of the upper ply: it lies on the lower one.
      ctx.fillStyle = mix(colour, dyes.walnut, 0.3);
      ctx.fillRect(...box);
    } else if (zone.layers.length === 1 && strip.spread.length > 1) {
      // One layer lets more of the table through.
      ctx.fillStyle = 'rgba(255, 253, 248, 0.35)';
      ctx.fillRect(...box);
    }
    if (zone.from > 0) {
      ctx.strokeStyle = inkOn(colour, 0.7);
      ctx.lineWidth = 1.5;
      ctx.setLineDash(zone.layers.length === 0 ? [] : [10, 4, 2, 4]);
      ctx.beginPath();
      lineBetween(ctx, view, { x: start, y: zone.from }, { x: end, y: zone.from });
      ctx.stroke();
      ctx.setLineDash([]);
    }
  }
  drawMarks(ctx, view, { strip, colour, drawnTo: end }, end);
}

/** 'RIGHT SIDE UP', 'FOLD: gives L + R', written along the cloth again and again, faintly, under the pieces. */
function drawMarks(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  { strip, colour }: ClothLook,
  end: number
): void {
  const [side, gives] = spreadMarks(strip);
  const step = Math.max(700, 420 / view.scale);
  ctx.save();
  ctx.fillStyle = inkOn(colour, 0.62);
  ctx.font = `600 12px ${FACE}`;
  ctx.textAlign = 'left';
  ctx.textBaseline = 'middle';
  const from = seen(view, 20);
  const write = (words: string, y: number, inset: number): void => {
    for (let x = Math.max(0, Math.floor(from.minX / step)) * step; x < Math.min(end, from.maxX); x += step) {
      const at = toScreen(view, { x, y });
      ctx.save();
      ctx.translate(at.left, at.top);
      if (view.lie !== 'across') ctx.rotate(Math.PI / 2);
      ctx.fillText(words, 10, view.lie === 'across' ? -inset : -inset);
      ctx.restore();
    }
  };
  strip.spread.forEach((zone, i) => {
    if (zone.layers.length === 0) return;
    if (i === 0) {
      write(gives ?? side!, zone.from, 12);
      if (gives) write(side!, zone.from, 28);
    } else
      write(
        `SINGLE LAYER: gives one${strip.sidesAlike ? '' : `, ${zone.layers[0]!.sideUp.toUpperCase()} SIDE UP`}`,
        zone.from,
        12
      );
  });
  ctx.restore();
}

/** The repeat to scale: its lines across the width and along the warp. One that is not symmetric has barbs to one side. */
export function drawRepeat(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  { strip, colour }: ClothLook,
  start: number,
  end: number
): void {
  const sight = seen(view, 10);
  const width = strip.spread[strip.spread.length - 1]!.to;
  const path = new Path2D();
  const barb = 6 / view.scale;
  const { along, across } = strip.repeat;
  // Lines nearer than a few pixels would be a tone, not lines.
  const every = (size: number): number => size * Math.max(1, Math.ceil(7 / (size * view.scale)));
  if (along) {
    const step = every(along.size);
    for (
      let x = along.offset + Math.ceil((Math.max(start, sight.minX) - along.offset) / step) * step;
      x <= Math.min(end, sight.maxX);
      x += step
    ) {
      lineBetween(path, view, { x, y: 0 }, { x, y: width });
      if (!along.symmetric)
        for (let y = 40; y < width; y += 160) {
          lineBetween(path, view, { x, y: y - barb }, { x: x + barb, y });
          lineBetween(path, view, { x: x + barb, y }, { x, y: y + barb });
        }
    }
  }
  if (across) {
    const step = every(across.size);
    for (let y = across.offset - Math.floor(across.offset / step) * step; y <= width; y += step) {
      if (y < sight.minY || y > sight.maxY) continue;
      lineBetween(path, view, { x: start, y }, { x: end, y });
      if (!across.symmetric)
        for (let x = 40; x < end; x += 160) {
          lineBetween(path, view, { x: x - barb, y }, { x, y: y + barb });
          lineBetween(path, view, { x, y: y + barb }, { x: x + barb, y });
        }
    }
  }
  ctx.strokeStyle = mix(colour, dyes.lichen, 0.55);
  ctx.lineWidth = 1.25;
  ctx.stroke(path);
}
