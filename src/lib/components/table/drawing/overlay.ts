import { toScreen, type ScreenPoint, type Viewport } from '$lib/client/viewport';
import { laidWidth, type Strip } from '$lib/cloth/strip';
import type { Outline, Point } from '$lib/geometry/point';
import { hatch } from './cloth';
import { dyes } from './dyes';
import type { HeldNote } from './held-notes';
import { linesOf, usePlacement } from './piece';
import type { DrawnPiece } from './sheet';
import { drawTapes } from './tape';

/*
 * What lies over the pieces: rulers, what is chosen, overlaps with their measure, distances, the rubber band.
 * Drawn anew each frame, so it holds little.
 */

/** A stretch between two places with its measure in words. */
export interface Distance {
  readonly from: Point;
  readonly to: Point;
  readonly words: string;
}

/** Something the check found, as it is drawn. */
export interface Fault {
  readonly region: readonly Outline[];
  /** While pieces are held: the two that overlap. What both cover is hatched, without working the region out. */
  readonly shared?: readonly [DrawnPiece, DrawnPiece];
  readonly place: Point | null;
  readonly words: string;
  readonly stops: boolean;
  readonly chosen: boolean;
}

export interface Overlay {
  readonly unit: 'cm' | 'in';
  readonly strip: Strip;
  /** How far cloth is drawn. */
  readonly drawnTo: number;
  readonly lengthUsed: number;
  readonly lengthUsedWords: string;
  readonly chosen: readonly DrawnPiece[];
  /** The piece that the keys act on first. */
  readonly current: string | null;
  readonly faults: readonly Fault[];
  readonly distances: readonly Distance[];
  readonly notes: readonly HeldNote[];
  readonly band: { readonly from: ScreenPoint; readonly to: ScreenPoint } | null;
}

const FACE = '"IBM Plex Sans", system-ui, sans-serif';

/** Draws the overlay on a clean canvas in pixels. */
export function drawOverlay(
  ctx: CanvasRenderingContext2D,
  view: Viewport,
  overlay: Overlay,
  ratio: number
): void {
  drawLengthUsed(ctx, view, overlay);
  for (const fault of overlay.faults) drawFault(ctx, view, fault, ratio);
  drawChosen(ctx, view, overlay, ratio);
  for (const distance of overlay.distances) drawDistance(ctx, view, distance);
  const selvedge = Math.max(6 / view.scale, (overlay.strip.fullWidth - overlay.strip.usableWidth) / 2);
  drawTapes(ctx, view, overlay.unit, overlay.drawnTo, laidWidth(overlay.strip), selvedge);
  for (const note of overlay.notes) {
    const at = toScreen(view, note.at);
    const within = {
      left: clamp(at.left, 90, Math.max(90, view.width - 90)),
      top: clamp(at.top + 34, 20, Math.max(20, view.height - 20))
    };
    ticket(ctx, within, note.words, note.stops ? dyes.madder : dyes.charcoal, note.stops);
  }
  if (overlay.band) drawBand(ctx, overlay.band);
}

function drawChosen(ctx: CanvasRenderingContext2D, view: Viewport, overlay: Overlay, ratio: number): void {
  const pixel = 1 / view.scale;
  for (const piece of overlay.chosen) {
    usePlacement(ctx, view, piece.placement, ratio);
    ctx.lineJoin = 'round';
    ctx.strokeStyle = dyes.bleached;
    ctx.lineWidth = 5 * pixel;
    ctx.stroke(linesOf(piece.shape).cut);
    ctx.strokeStyle = dyes.woad;
    ctx.lineWidth = (piece.id === overlay.current ? 3 : 2) * pixel;
    ctx.stroke(linesOf(piece.shape).cut);
  }
  ctx.setTransform(ratio, 0, 0, ratio, 0, 0);
}

function drawLengthUsed(ctx: CanvasRenderingContext2D, view: Viewport, overlay: Overlay): void {
  if (overlay.lengthUsed <= 0) return;
  const a = toScreen(view, { x: overlay.lengthUsed, y: -20 });
  const b = toScreen(view, { x: overlay.lengthUsed, y: laidWidth(overlay.strip) + 20 });
  const [at, extent] = view.lie === 'across' ? [a.left, view.width] : [a.top, view.height];
  if (at < 0 || at > extent) return;
  ctx.beginPath();
  ctx.moveTo(a.left, a.top);
  ctx.lineTo(b.left, b.top);
  // A light casing keeps the line to be seen on any cloth.
  ctx.strokeStyle = dyes.bleached;
  ctx.lineWidth = 3.5;
  ctx.stroke();
  ctx.strokeStyle = dyes.woad;
  ctx.lineWidth = 1.75;
  ctx.setLineDash([9, 5]);
  ctx.stroke();
  ctx.setLineDash([]);
  const far = view.lie === 'across' ? { left: b.left, top: b.top - 12 } : { left: b.left + 8, top: b.top };
  ticket(
    ctx,
    { left: clamp(far.left, 40, view.width - 40), top: clamp(far.top, 14, view.height - 14) },
    overlay.lengthUsedWords,
    dyes.woad,
    false
  );
}

function drawFault(ctx: CanvasRenderingContext2D, view: Viewport, fault: Fault, ratio: number): void {
  const ink = fault.stops ? dyes.madder : dyes.weld;
  if (fault.shared) {
    ctx.save();
    for (const piece of fault.shared) {
      usePlacement(ctx, view, piece.placement, ratio);
      ctx.clip(linesOf(piece.shape).cut, 'evenodd');
    }
    ctx.setTransform(ratio, 0, 0, ratio, 0, 0);
    ctx.fillStyle = hatch(ctx, ink, 6);
    ctx.fillRect(0, 0, view.width, view.height);
    ctx.restore();
  }
  if (fault.region.length > 0) {
    ctx.beginPath();
    for (const outline of fault.region) {
      outline.forEach((point, i) => {
        const at = toScreen(view, point);
        if (i === 0) ctx.moveTo(at.left, at.top);
        else ctx.lineTo(at.left, at.top);
      });
      ctx.closePath();
    }
    ctx.fillStyle = hatch(ctx, ink, 6);
    ctx.fill('evenodd');
    ctx.strokeStyle = ink;
    ctx.lineWidth = fault.chosen ? 2.5 : 1.25;
    ctx.stroke();
  }
  if (!fault.place) return;
  const at = toScreen(view, fault.place);
  if (at.left < -60 || at.top < -30 || at.left > view.width + 60 || at.top > view.height + 30) return;
  if (fault.chosen) {
    ctx.strokeStyle = ink;
    ctx.lineWidth = 2;
    ctx.beginPath();
    ctx.arc(at.left, at.top, 18, 0, 2 * Math.PI);
    ctx.stroke();
  }
  if (fault.words)
    ticket(ctx, { left: at.left, top: at.top - (fault.chosen ? 32 : 18) }, fault.words, ink, true);
  else {
    ctx.fillStyle = ink;
    ctx.beginPath();
    ctx.arc(at.left, at.top, 4, 0, 2 * Math.PI);
    ctx.fill();
  }
}

/** A distance with square end strokes and its measure on a slip of paper. */
function drawDistance(ctx: CanvasRenderingContext2D, view: Viewport, distance: Distance): void {
  const a = toScreen(view, distance.from);
  const b = toScreen(view, distance.to);
  const length = Math.hypot(b.left - a.left, b.top - a.top);
  ctx.strokeStyle = dyes.charcoal;
  ctx.lineWidth = 1.5;
  ctx.beginPath();
  ctx.moveTo(a.left, a.top);
  ctx.lineTo(b.left, b.top);
  if (length > 0.5) {
    const nx = (-(b.top - a.top) / length) * 5;
    const ny = ((b.left - a.left) / length) * 5;
    for (const end of [a, b]) {
      ctx.moveTo(end.left - nx, end.top - ny);
      ctx.lineTo(end.left + nx, end.top + ny);
    }
  }
  ctx.stroke();
  ticket(
    ctx,
    { left: (a.left + b.left) / 2, top: (a.top + b.top) / 2 - 16 },
    distance.words,
    dyes.charcoal,
    false
  );
}

/** Words on a slip of paper about a place. */
function ticket(
  ctx: CanvasRenderingContext2D,
  at: ScreenPoint,
  words: string,
  ink: string,
  filled: boolean
): void {
  ctx.font = `600 13px ${FACE}`;
  ctx.textAlign = 'center';
  ctx.textBaseline = 'middle';
  const width = ctx.measureText(words).width + 14;
  ctx.fillStyle = filled && ink === dyes.madder ? ink : dyes.bleached;
  ctx.strokeStyle = ink;
  ctx.lineWidth = 1;
  ctx.beginPath();
  ctx.roundRect(at.left - width / 2, at.top - 11, width, 22, 3);
  ctx.fill();
  ctx.stroke();
  ctx.fillStyle = filled && ink === dyes.madder ? dyes.bleached : ink === dyes.weld ? dyes.charcoal : ink;
  ctx.fillText(words, at.left, at.top + 1);
}

function drawBand(ctx: CanvasRenderingContext2D, band: NonNullable<Overlay['band']>): void {
  ctx.strokeStyle = dyes.woad;
  ctx.fillStyle = 'rgba(47, 93, 124, 0.10)';
  ctx.lineWidth = 1.25;
  ctx.setLineDash([5, 4]);
  ctx.beginPath();
  ctx.rect(
    Math.min(band.from.left, band.to.left),
    Math.min(band.from.top, band.to.top),
    Math.abs(band.to.left - band.from.left),
    Math.abs(band.to.top - band.from.top)
  );
  ctx.fill();
  ctx.stroke();
  ctx.setLineDash([]);
}

function clamp(value: number, least: number, most: number): number {
  return Math.max(least, Math.min(most, value));
}
