import { seen, toScreen, type Viewport } from '$lib/client/viewport';
import { flawsAsLaid } from '$lib/cloth/flaws-as-laid';
import { hasBothSides, sideMargin, spreadKind, spreadWords } from '$lib/cloth/spread';
import { laidWidth, sideUp, type Flaw, type Strip } from '$lib/cloth/strip';
import { foldsOf } from '$lib/lay/on-fold';
import { drawCrosswiseFold, drawFold, drawLayers, drawRepeat } from './spread';
import { dyes, inkOn, mix } from './dyes';

/*
 * The cloth as it lies: its colour, threads along the warp, the nap as barbs, selvedges, zero end, the roll at the
 * open end, end allowances and flaws. What a colour says, a shape says too.
 */

export interface ClothLook {
  readonly strip: Strip;
  readonly colour: string;
  /** How far the cloth is drawn, in millimetres from its zero end. */
  readonly drawnTo: number;
}

/** How far to draw cloth of open length, so that work has room beyond what is used. */
export function drawnLength(strip: Strip, lengthUsed: number, leastLength: number): number {
  if (strip.length !== null) return strip.length;
  const wanted = Math.max(lengthUsed, leastLength, 500) * 1.12 + 300;
  // In steps, so that the roll does not creep with each move.
  return Math.ceil(wanted / 250) * 250;
}

/** Fills the rectangle of the cloth between two places. */
function rectangle(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  fromX: number,
  fromY: number,
  toX: number,
  toY: number
): { left: number; top: number; width: number; height: number } {
  const a = toScreen(view, { x: fromX, y: fromY });
  const b = toScreen(view, { x: toX, y: toY });
  const left = Math.min(a.left, b.left);
  const top = Math.min(a.top, b.top);
  const width = Math.abs(b.left - a.left);
  const height = Math.abs(b.top - a.top);
  ctx.fillRect(left, top, width, height);
  return { left, top, width, height };
}

/** Draws the cloth. The canvas is in pixels. */
export function drawCloth(ctx: CanvasRenderingContext2D, view: Viewport, look: ClothLook): void {
  const { strip, colour, drawnTo } = look;
  const width = laidWidth(strip);
  const selvedge = Math.max(6 / view.scale, sideMargin(strip));
  const start = -strip.endAllowance.start;
  const end = strip.length === null ? drawnTo : strip.length + strip.endAllowance.end;
  const folds = foldsOf(strip);
  const near = folds.some(({ side }) => side === 'near');
  const far = folds.some(({ side }) => side === 'far');
  const [below, above] = [near ? 0 : -selvedge, width + (far ? 0 : selvedge)];

  ctx.fillStyle = 'rgba(35, 38, 43, 0.10)';
  ctx.save();
  ctx.translate(3, 5);
  rectangle(ctx, view, start, below, end, above);
  ctx.restore();

  ctx.fillStyle = colour;
  rectangle(ctx, view, start, below, end, above);
  drawThreads(ctx, view, look, start, end);
  if (strip.repeat.along || strip.repeat.across) drawRepeat(ctx, view, look, start, end);
  drawLayers(ctx, view, look, start, end);
  const edge = (fold: boolean, from: number, to: number): void =>
    fold
      ? drawFold(ctx, view, colour, start, end, from < 0 ? 0 : width)
      : drawSelvedge(ctx, view, colour, start, end, from, to);
  edge(near, -selvedge, 0);
  edge(far, width, width + selvedge);

  // Before the zero end lies the allowance that is cut square or lost.
  ctx.fillStyle = hatch(ctx, inkOn(colour, 0.28));
  if (strip.endAllowance.start > 0) rectangle(ctx, view, start, below, 0, above);
  if (strip.length !== null && strip.endAllowance.end > 0)
    rectangle(ctx, view, strip.length, below, end, above);

  chalkLine(ctx, view, 0, below, above, inkOn(colour, 0.85), 2);
  if (strip.length === null) drawRoll(ctx, view, colour, end, below, above);
  else chalkLine(ctx, view, strip.length, below, above, inkOn(colour, 0.85), 2);
  if (strip.given?.outline) drawBeyondEdge(ctx, view, look, start, end, selvedge);
  if (folds.some(({ side }) => side === 'start')) drawCrosswiseFold(ctx, view, colour, below, above);
  for (const flaw of flawsAsLaid(strip)) drawFlaw(ctx, view, flaw);
}

function chalkLine(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  x: number,
  fromY: number,
  toY: number,
  ink: string,
  thick: number
): void {
  const a = toScreen(view, { x, y: fromY });
  const b = toScreen(view, { x, y: toY });
  ctx.strokeStyle = ink;
  ctx.lineWidth = thick;
  ctx.beginPath();
  ctx.moveTo(a.left, a.top);
  ctx.lineTo(b.left, b.top);
  ctx.stroke();
}

/** Warp threads as broken strokes along the grain; on napped cloth each carries a barb that points with the nap. */
function drawThreads(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  { strip, colour }: ClothLook,
  start: number,
  end: number
): void {
  const inSight = seen(view, 40);
  // A pattern of threads that keeps its density on the screen at every zoom.
  const octave = 2 ** Math.round(Math.log2(0.22 / view.scale));
  const gap = 120 * octave;
  const stride = 360 * octave;
  const fromX = Math.max(start, inSight.minX);
  const toX = Math.min(end, inSight.maxX);
  const napped = strip.nap !== 'none';
  const towards = strip.spread[0]!.layers[0]!.nap === 'along' ? 1 : -1;
  const barb = 18 * octave;
  const path = new Path2D();
  const line = (x1: number, y1: number, x2: number, y2: number): void => {
    const a = toScreen(view, { x: x1, y: y1 });
    const b = toScreen(view, { x: x2, y: y2 });
    path.moveTo(a.left, a.top);
    path.lineTo(b.left, b.top);
  };
  const firstRow = Math.max(0, Math.floor(inSight.minY / gap));
  const lastRow = Math.min(Math.floor(laidWidth(strip) / gap), Math.ceil(inSight.maxY / gap));
  for (let row = firstRow; row <= lastRow; row++) {
    const y = (row + 0.5) * gap;
    if (y >= laidWidth(strip)) continue;
    const shift = row % 2 === 0 ? 0 : stride / 2;
    for (let k = Math.floor((fromX - shift) / stride); k * stride + shift < toX; k++) {
      const x = k * stride + shift;
      const x1 = Math.max(start, x);
      const x2 = Math.min(end, x + stride * 0.42);
      if (x2 <= x1) continue;
      line(x1, y, x2, y);
      if (!napped) continue;
      const tip = towards === 1 ? x2 : x1;
      line(tip - towards * barb, y + barb * 0.55, tip, y);
      line(tip - towards * barb, y - barb * 0.55, tip, y);
    }
  }
  ctx.strokeStyle = inkOn(colour, napped ? 0.26 : 0.16);
  ctx.lineWidth = 1;
  ctx.stroke(path);
}

/** A selvedge: denser cloth with the pin holes of the loom along it. */
function drawSelvedge(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  colour: string,
  start: number,
  end: number,
  from: number,
  to: number
): void {
  ctx.fillStyle = mix(colour, dyes.walnut, 0.22);
  const { height, width } = rectangle(ctx, view, start, from, end, to);
  if (Math.min(height, width) < 5) return;
  const inSight = seen(view, 20);
  const step = 25 * 2 ** Math.max(0, Math.round(Math.log2(0.5 / view.scale)));
  ctx.fillStyle = inkOn(colour, 0.5);
  const y = (from + to) / 2;
  const first = Math.ceil(Math.max(start, inSight.minX) / step);
  for (let k = first; k * step < Math.min(end, inSight.maxX); k++) {
    const at = toScreen(view, { x: k * step, y });
    ctx.fillRect(at.left - 1, at.top - 1, 2, 2);
  }
}

/** Cloth that is still on its roll, beyond the open end. */
function drawRoll(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  colour: string,
  end: number,
  fromY: number,
  toY: number
): void {
  const thick = Math.min(46, Math.max(16, 90 * view.scale));
  const a = toScreen(view, { x: end, y: fromY });
  const b = toScreen(view, { x: end, y: toY });
  const across = view.lie === 'across';
  const left = Math.min(a.left, b.left);
  const top = Math.min(a.top, b.top);
  const width = across ? thick : Math.abs(b.left - a.left);
  const height = across ? Math.abs(b.top - a.top) : thick;
  const shade = across
    ? ctx.createLinearGradient(left, 0, left + width, 0)
    : ctx.createLinearGradient(0, top, 0, top + height);
  shade.addColorStop(0, mix(colour, dyes.charcoal, 0.2));
  shade.addColorStop(0.3, mix(colour, dyes.bleached, 0.45));
  shade.addColorStop(0.65, colour);
  shade.addColorStop(1, mix(colour, dyes.charcoal, 0.42));
  ctx.fillStyle = shade;
  const out = 7;
  ctx.beginPath();
  if (across) ctx.roundRect(left, top - out, width, height + 2 * out, 6);
  else ctx.roundRect(left - out, top, width + 2 * out, height, 6);
  ctx.fill();
  ctx.strokeStyle = inkOn(colour, 0.4);
  ctx.lineWidth = 1;
  ctx.stroke();
}

/** A flaw: its box and radius crossed out, never too small to be seen. */
function drawFlaw(ctx: CanvasRenderingContext2D, view: Viewport, flaw: Flaw): void {
  const reach = { x: flaw.along / 2 + flaw.radius, y: flaw.across / 2 + flaw.radius };
  const a = toScreen(view, { x: flaw.x - reach.x, y: flaw.y - reach.y });
  const b = toScreen(view, { x: flaw.x + reach.x, y: flaw.y + reach.y });
  const middle = { left: (a.left + b.left) / 2, top: (a.top + b.top) / 2 };
  const half = {
    left: Math.max(5, Math.abs(b.left - a.left) / 2),
    top: Math.max(5, Math.abs(b.top - a.top) / 2)
  };
  ctx.strokeStyle = dyes.madder;
  ctx.lineWidth = 1.5;
  ctx.beginPath();
  if (flaw.along > 0 || flaw.across > 0)
    ctx.rect(middle.left - half.left, middle.top - half.top, 2 * half.left, 2 * half.top);
  else ctx.arc(middle.left, middle.top, half.left, 0, 2 * Math.PI);
  const arm = flaw.along > 0 || flaw.across > 0 ? 1 : 0.7;
  ctx.moveTo(middle.left - half.left * arm, middle.top - half.top * arm);
  ctx.lineTo(middle.left + half.left * arm, middle.top + half.top * arm);
  ctx.moveTo(middle.left + half.left * arm, middle.top - half.top * arm);
  ctx.lineTo(middle.left - half.left * arm, middle.top + half.top * arm);
  ctx.stroke();
}

/** Around an odd remnant: what of the strip is not cloth, veiled and hatched, its edge chalked. */
function drawBeyondEdge(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  { strip, colour }: ClothLook,
  start: number,
  end: number,
  selvedge: number
): void {
  const ring = (points: readonly { x: number; y: number }[]): void => {
    points.forEach((point, i) => {
      const at = toScreen(view, point);
      if (i === 0) ctx.moveTo(at.left, at.top);
      else ctx.lineTo(at.left, at.top);
    });
    ctx.closePath();
  };
  const edge = strip.given!.outline!;
  ctx.beginPath();
  ring([
    { x: start, y: -selvedge },
    { x: end, y: -selvedge },
    { x: end, y: laidWidth(strip) + selvedge },
    { x: start, y: laidWidth(strip) + selvedge }
  ]);
  ring(edge);
  ctx.fillStyle = 'rgba(246, 241, 231, 0.88)';
  ctx.fill('evenodd');
  ctx.fillStyle = hatch(ctx, inkOn(colour, 0.28));
  ctx.fill('evenodd');
  ctx.beginPath();
  ring(edge);
  ctx.strokeStyle = inkOn(colour, 0.85);
  ctx.lineWidth = 2;
  ctx.stroke();
}

const hatches = new Map<string, HTMLCanvasElement>();

/** Slanting strokes of one colour, as a pattern. */
export function hatch(ctx: CanvasRenderingContext2D, ink: string, gap = 8): CanvasPattern | string {
  const key = `${ink}|${gap}`;
  let tile = hatches.get(key);
  if (!tile) {
    tile = document.createElement('canvas');
    tile.width = tile.height = gap;
    const t = tile.getContext('2d');
    if (!t) return ink;
    t.strokeStyle = ink;
    t.lineWidth = 1.2;
    for (const shift of [-gap, 0, gap]) {
      t.beginPath();
      t.moveTo(shift - 1, gap + 1);
      t.lineTo(shift + gap + 1, -1);
      t.stroke();
    }
    hatches.set(key, tile);
  }
  return ctx.createPattern(tile, 'repeat') ?? ink;
}

/** How the cloth lies, in words: its spread, and which side is up. */
export function sideUpWords(strip: Strip): string {
  const side = strip.sidesAlike
    ? 'both sides of the cloth are alike'
    : `${sideUp(strip) === 'right' ? 'right' : 'wrong'} side of the cloth up`;
  const spread = spreadKind(strip);
  if (spread === 'open') return side[0]!.toUpperCase() + side.slice(1);
  const gives = hasBothSides(strip) ? ', each placement gives left and right' : '';
  return `${spreadWords(strip)}, ${side}${gives}`;
}

/** The nap, in words. */
export function napWords(strip: Strip): string {
  switch (strip.nap) {
    case 'none':
      return 'No nap';
    case 'oneWay':
      return 'Nap runs one way, as the barbs point';
    case 'garmentWay':
      return 'Nap: each garment one way';
  }
}
