import type { Viewport } from '$lib/client/viewport';
import { cosSin, place, type Placement } from '$lib/geometry/placement';
import type { Box, Outline, Point } from '$lib/geometry/point';
import type { PieceShape } from '$lib/pattern/piece-shape';
import { dyes } from './dyes';

/*
 * One piece as paper on the cloth. Its lines are kept as Path2D in the piece's own millimetres, made once a shape
 * and drawn through the canvas transform.
 */

interface Lines {
  /** The cut line with its cut-outs. */
  readonly cut: Path2D;
  readonly sew: Path2D;
  /** Notches and drill holes. */
  readonly marks: Path2D;
  readonly inside: Path2D;
  readonly grain: Path2D;
  readonly box: Box;
}

const kept = new WeakMap<PieceShape, Lines>();

function trace(path: Path2D, outline: readonly Point[], close: boolean): void {
  outline.forEach((p, i) => (i === 0 ? path.moveTo(p.x, p.y) : path.lineTo(p.x, p.y)));
  if (close) path.closePath();
}

/** The lines of a shape. */
export function linesOf(shape: PieceShape): Lines {
  const known = kept.get(shape);
  if (known) return known;
  const cut = new Path2D();
  trace(cut, shape.cut, true);
  shape.cutOuts.forEach((hole) => trace(cut, hole, true));
  const sew = new Path2D();
  trace(sew, shape.sew, true);
  const marks = new Path2D();
  for (const { from, to } of shape.notches) trace(marks, [from, to], false);
  for (const { at } of shape.drillHoles) {
    marks.moveTo(at.x + 3, at.y);
    marks.arc(at.x, at.y, 3, 0, 2 * Math.PI);
  }
  const inside = new Path2D();
  for (const line of shape.internalLines) trace(inside, line.points, false);
  const lines = { cut, sew, marks, inside, grain: grainPath(shape), box: boxOf(shape.cut) };
  kept.set(shape, lines);
  return lines;
}

function boxOf(outline: Outline): Box {
  let [minX, minY, maxX, maxY] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const { x, y } of outline) {
    minX = Math.min(minX, x);
    maxX = Math.max(maxX, x);
    minY = Math.min(minY, y);
    maxY = Math.max(maxY, y);
  }
  return { minX, minY, maxX, maxY };
}

/** The grain line with a barb at the end that points along the warp. */
function grainPath(shape: PieceShape): Path2D {
  const { from, to } = shape.grain;
  const length = Math.max(1, to.x - from.x);
  const barb = Math.min(14, length / 5);
  const path = new Path2D();
  path.moveTo(from.x, from.y);
  path.lineTo(to.x, to.y);
  path.moveTo(to.x - barb, to.y + barb * 0.5);
  path.lineTo(to.x, to.y);
  path.lineTo(to.x - barb, to.y - barb * 0.5);
  return path;
}

/** Sets the canvas so that the piece's own millimetres are drawn where `placement` puts them. */
export function usePlacement(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  placement: Placement,
  ratio: number
): void {
  const [cos, sin] = cosSin(placement.turn);
  const s = view.scale * ratio;
  const f = placement.flip ? -1 : 1;
  const ox = view.originX * ratio;
  const oy = view.originY * ratio;
  if (view.lie === 'across')
    ctx.setTransform(
      s * cos,
      -s * sin,
      -s * sin * f,
      -s * cos * f,
      ox + s * placement.x,
      oy - s * placement.y
    );
  else
    ctx.setTransform(s * sin, s * cos, s * cos * f, -s * sin * f, ox + s * placement.y, oy + s * placement.x);
}

/** What a piece is drawn with. */
export interface PieceLook {
  readonly paper: string;
  readonly dye: string;
  /** The garment's letter. */
  readonly letter: string;
  readonly name: string;
  /** 'left', 'right' or nothing where a hand means nothing. */
  readonly hand: string;
  readonly locked: boolean;
}

/** Pieces smaller than this on the screen are drawn as an outline only, in pixels. */
const SMALL = 26;

/** Draws one piece: paper, lines, marks, label. `ratio`: device pixels a pixel. Leaves the canvas without a transform. */
export function drawPiece(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  shape: PieceShape,
  placement: Placement,
  look: PieceLook,
  ratio: number
): void {
  const lines = linesOf(shape);
  const pixel = 1 / view.scale;
  const wide = (lines.box.maxX - lines.box.minX) * view.scale;
  const high = (lines.box.maxY - lines.box.minY) * view.scale;
  const small = Math.max(wide, high) < SMALL;
  usePlacement(ctx, view, placement, ratio);
  ctx.fillStyle = look.paper;
  ctx.fill(lines.cut, 'evenodd');
  ctx.lineJoin = 'round';
  if (!small && view.scale > 0.18) {
    ctx.lineWidth = 0.8 * pixel;
    ctx.strokeStyle = look.dye;
    ctx.globalAlpha = 0.55;
    ctx.setLineDash([5 * pixel, 3 * pixel]);
    ctx.stroke(lines.sew);
    ctx.stroke(lines.inside);
    ctx.setLineDash([]);
    ctx.globalAlpha = 1;
  }
  ctx.strokeStyle = dyes.charcoal;
  ctx.lineWidth = 1.15 * pixel;
  ctx.stroke(lines.cut);
  if (!small) {
    if (view.scale > 0.18) ctx.stroke(lines.marks);
    ctx.lineWidth = pixel;
    ctx.strokeStyle = look.dye;
    ctx.stroke(lines.grain);
  }
  ctx.setTransform(ratio, 0, 0, ratio, 0, 0);
  if (!small) drawLabel(ctx, view, shape, placement, look);
}

const widths = new Map<string, number>();

function textWidth(ctx: CanvasRenderingContext2D, text: string, font: string): number {
  const key = `${font}|${text}`;
  let width = widths.get(key);
  if (width === undefined) {
    if (widths.size > 4000) widths.clear();
    ctx.font = font;
    widths.set(key, (width = ctx.measureText(text).width));
  }
  return width;
}

/** The typeface arrived: what was measured before is void. */
export function forgetTextWidths(): void {
  widths.clear();
}

const FACE = '"IBM Plex Sans", system-ui, sans-serif';

/** The label: name and hand, in the piece where it fits, else only the letter of the garment. */
function drawLabel(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  shape: PieceShape,
  placement: Placement,
  look: PieceLook
): void {
  const at = place(shape.label, placement);
  const left = view.lie === 'across' ? view.originX + at.x * view.scale : view.originX + at.y * view.scale;
  const top = view.lie === 'across' ? view.originY - at.y * view.scale : view.originY + at.x * view.scale;
  if (left < -80 || top < -40 || left > view.width + 80 || top > view.height + 40) return;
  const [along, square] = room(shape);
  const quarter = Math.round(placement.turn / 90) % 2 === 1;
  const level = quarter !== (view.lie === 'down');
  const width = (level ? square : along) * view.scale;
  const height = (level ? along : square) * view.scale;
  const second = [look.letter, look.hand, look.locked ? 'locked' : ''].filter(Boolean).join(' · ');
  const upright = fits(ctx, look, second, width, height);
  const sideways = upright ? null : fits(ctx, look, second, height, width);
  const size = upright ?? sideways;
  ctx.textAlign = 'center';
  ctx.textBaseline = 'middle';
  if (size === null) {
    if (Math.min(width, height) < 12) return;
    ctx.fillStyle = look.paper;
    ctx.fillRect(left - 6, top - 7, 12, 14);
    ctx.font = `600 11px ${FACE}`;
    ctx.fillStyle = look.dye;
    ctx.fillText(look.letter, left, top);
    return;
  }
  ctx.save();
  ctx.translate(left, top);
  if (!upright) ctx.rotate(-Math.PI / 2);
  // The grain line may pass under the name: a little paper keeps it legible.
  const half = textWidth(ctx, look.name, `600 ${size}px ${FACE}`) / 2;
  ctx.fillStyle = look.paper;
  ctx.globalAlpha = 0.85;
  ctx.fillRect(-half - 3, -size * 1.15, 2 * half + 6, size * 2.3);
  ctx.globalAlpha = 1;
  ctx.fillStyle = dyes.charcoal;
  ctx.font = `600 ${size}px ${FACE}`;
  ctx.fillText(look.name, 0, -size * 0.5);
  ctx.fillStyle = look.dye === dyes.weld ? dyes.walnut : look.dye;
  ctx.font = `500 ${size - 1}px ${FACE}`;
  ctx.fillText(second, 0, size * 0.65);
  ctx.restore();
}

/** The largest of three sizes of type that fits, in pixels; null when none does. */
function fits(
  ctx: CanvasRenderingContext2D,
  look: PieceLook,
  second: string,
  width: number,
  height: number
): number | null {
  for (const size of [15, 13, 11]) {
    if (height < size * 2.5) continue;
    const needed = Math.max(
      textWidth(ctx, look.name, `600 ${size}px ${FACE}`),
      textWidth(ctx, second, `500 ${size - 1}px ${FACE}`)
    );
    if (needed + 8 <= width) return size;
  }
  return null;
}

const rooms = new WeakMap<PieceShape, readonly [number, number]>();

/** How far the piece reaches about its label point, along the grain and square to it, in millimetres. */
function room(shape: PieceShape): readonly [number, number] {
  const known = rooms.get(shape);
  if (known) return known;
  const { x, y } = shape.label;
  const reach = (alongX: boolean): number => {
    let before = Infinity;
    let after = Infinity;
    const [u, v] = alongX ? [x, y] : [y, x];
    const cut = shape.cut;
    for (let i = 0, j = cut.length - 1; i < cut.length; j = i++) {
      const [a, b] = [cut[j]!, cut[i]!];
      const [au, av, bu, bv] = alongX ? [a.x, a.y, b.x, b.y] : [a.y, a.x, b.y, b.x];
      if (av > v === bv > v) continue;
      const crossing = au + ((v - av) / (bv - av)) * (bu - au);
      if (crossing < u) before = Math.min(before, u - crossing);
      else after = Math.min(after, crossing - u);
    }
    const least = Math.min(before, after);
    return Number.isFinite(least) ? 2 * least : 0;
  };
  const found = [reach(true), reach(false)] as const;
  rooms.set(shape, found);
  return found;
}
