import { toScreen, type Viewport } from '$lib/client/viewport';
import { dyes, TAPE } from './dyes';

/*
 * The two rulers: a tape measure along the near selvedge, and a wooden rule across the zero end. Both stay in sight
 * when their edge of the cloth is not.
 */

const FACE = '"IBM Plex Sans", system-ui, sans-serif';
const TAPE_WIDTH = 24;

/** Tick distances in millimetres that read well, for centimetres or inches. */
function ticks(unit: 'cm' | 'in', scale: number): { small: number; large: number; of: number } {
  const of = unit === 'cm' ? 10 : 25.4;
  const steps =
    unit === 'cm'
      ? [0.1, 0.5, 1, 5, 10, 20, 50, 100, 200, 500]
      : [0.125, 0.25, 0.5, 1, 3, 6, 12, 36, 72, 144, 360];
  const large = steps.find((step) => step * of * scale >= 52) ?? steps[steps.length - 1]!;
  const parts =
    unit === 'cm'
      ? ({ 0.5: 5, 5: 5, 50: 5, 500: 5 }[large] ?? (large === 20 || large === 200 ? 4 : 10))
      : ({ 0.125: 1, 0.25: 2, 0.5: 4, 1: 8, 3: 3, 6: 6, 12: 12, 36: 3, 72: 6, 144: 4, 360: 10 }[large] ?? 1);
  return { large: large * of, small: (large * of) / parts, of };
}

function numeral(value: number): string {
  return String(Math.round(value * 1000) / 1000);
}

/** Draws the tape along the near selvedge and the rule across, over `length` × `width` millimetres of cloth. */
export function drawTapes(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  unit: 'cm' | 'in',
  length: number,
  width: number,
  selvedge: number
): void {
  drawOne(ctx, view, unit, 'weft', width, -selvedge);
  drawOne(ctx, view, unit, 'warp', length, -selvedge);
}

function drawOne(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  unit: 'cm' | 'in',
  along: 'warp' | 'weft',
  length: number,
  selvedge: number
): void {
  const level = (along === 'warp') === (view.lie === 'across');
  const zero = toScreen(view, { x: 0, y: 0 });
  const beside = toScreen(view, along === 'warp' ? { x: 0, y: selvedge } : { x: -0.02 / view.scale, y: 0 });
  // Along the warp the tape lies outside the near selvedge; the rule lies before the zero end.
  const gap = along === 'warp' ? 4 : 6;
  const outside = along === 'warp' ? (view.lie === 'across' ? 1 : -1) : -1;
  const edge = level
    ? clamp(beside.top + outside * gap + (outside < 0 ? -TAPE_WIDTH : 0), 2, view.height - TAPE_WIDTH - 2)
    : clamp(beside.left + outside * gap + (outside < 0 ? -TAPE_WIDTH : 0), 2, view.width - TAPE_WIDTH - 2);
  const sign = along === 'weft' && view.lie === 'across' ? -1 : 1;
  const origin = level ? zero.left : zero.top;
  const extent = level ? view.width : view.height;
  const a = origin;
  const b = origin + sign * length * view.scale;
  const from = Math.max(-30, Math.min(a, b));
  const to = Math.min(extent + 30, Math.max(a, b));
  if (to <= from) return;

  ctx.save();
  ctx.fillStyle = along === 'warp' ? TAPE : '#E6D9C3';
  ctx.strokeStyle = along === 'warp' ? dyes.weld : dyes.walnut;
  ctx.globalAlpha = 0.96;
  ctx.lineWidth = 0.75;
  ctx.beginPath();
  if (level) ctx.roundRect(from, edge, to - from, TAPE_WIDTH, 2);
  else ctx.roundRect(edge, from, TAPE_WIDTH, to - from, 2);
  ctx.fill();
  ctx.stroke();
  ctx.globalAlpha = 1;

  const { large, small, of } = ticks(unit, view.scale);
  const path = new Path2D();
  ctx.fillStyle = dyes.charcoal;
  ctx.font = `500 11px ${FACE}`;
  ctx.textAlign = 'left';
  ctx.textBaseline = 'middle';
  const position = (mm: number): number => origin + sign * mm * view.scale;
  const first = Math.max(0, Math.floor((sign > 0 ? from - origin : origin - to) / view.scale / small));
  const last = Math.min(
    Math.floor(length / small + 1e-6),
    Math.ceil((sign > 0 ? to - origin : origin - from) / view.scale / small)
  );
  const perLarge = Math.round(large / small);
  const towardsCloth = outside > 0 ? 0 : TAPE_WIDTH;
  for (let k = first; k <= last; k++) {
    const at = position(k * small);
    const whole = k % perLarge === 0;
    const half = perLarge % 2 === 0 && k % (perLarge / 2) === 0;
    const reach = whole ? 12 : half ? 8 : 5;
    const tip = towardsCloth === 0 ? edge + reach : edge + TAPE_WIDTH - reach;
    const root = edge + towardsCloth;
    if (level) {
      path.moveTo(at, root);
      path.lineTo(at, tip);
    } else {
      path.moveTo(root, at);
      path.lineTo(tip, at);
    }
    if (!whole) continue;
    const text = numeral((k * small) / of);
    const line = towardsCloth === 0 ? edge + TAPE_WIDTH - 7 : edge + 7.5;
    if (level) ctx.fillText(text, at + 3, line);
    else {
      ctx.save();
      ctx.translate(line, at);
      ctx.rotate(-Math.PI / 2);
      ctx.fillText(text, 3, 0);
      ctx.restore();
    }
  }
  ctx.strokeStyle = dyes.charcoal;
  ctx.lineWidth = 0.9;
  ctx.stroke(path);
  ctx.restore();
}

function clamp(value: number, least: number, most: number): number {
  return Math.max(least, Math.min(most, value));
}
