import type Konva from 'konva';
import { carried, panned, seen, type Viewport } from '$lib/client/viewport';
import type { Box } from '$lib/geometry/point';
import type { Placement } from '$lib/geometry/placement';
import type { PieceShape } from '$lib/pattern/piece-shape';
import { drawCloth, type ClothLook } from './cloth';
import { drawPiece, type PieceLook } from './piece';

/*
 * A sheet is a picture drawn once, larger than what is in sight by a margin, and then carried along by the
 * compositor while the view pans or zooms or the pieces on it are dragged: a frame of moving costs no drawing.
 * A new picture is drawn a slice a frame on a second sheet, which then takes the first one's place.
 */

/** How far a sheet reaches beyond the canvas, in pixels. */
export const SHEET_MARGIN = 256;

/** A piece as the sheets draw it. */
export interface DrawnPiece {
  readonly id: string;
  readonly shape: PieceShape;
  readonly placement: Placement;
  readonly look: PieceLook;
  readonly box: Box;
}

/** What lies still: the cloth and pieces, lowest first. Compared by identity. */
export interface Scene {
  readonly cloth: ClothLook;
  readonly pieces: readonly DrawnPiece[];
}

/** `view` as a sheet sees it. */
export function onSheet(view: Viewport): Viewport {
  const moved = panned(view, SHEET_MARGIN, SHEET_MARGIN);
  return { ...moved, width: view.width + 2 * SHEET_MARGIN, height: view.height + 2 * SHEET_MARGIN };
}

function native(layer: Konva.Layer): { canvas: HTMLCanvasElement; ctx: CanvasRenderingContext2D } {
  const canvas = layer.getNativeCanvasElement();
  return { canvas, ctx: canvas.getContext('2d')! };
}

/** Carries the picture of `from` to where `to` wants it, moved by a further step. False when it can't be. */
function carry(canvas: HTMLCanvasElement, from: Viewport, to: Viewport, dLeft = 0, dTop = 0): boolean {
  const how = carried(onSheet(from), onSheet(to));
  if (!how) return false;
  canvas.style.transform = `translate(${how.left + dLeft}px, ${how.top + dTop}px) scale(${how.scale})`;
  return true;
}

/** Whether a carried picture still covers the canvas. */
function covers(from: Viewport, to: Viewport): boolean {
  const how = carried(onSheet(from), onSheet(to));
  if (!how) return false;
  const m = SHEET_MARGIN;
  const left = how.left - m;
  const top = how.top - m;
  return (
    left <= 0 &&
    top <= 0 &&
    left + (from.width + 2 * m) * how.scale >= to.width &&
    top + (from.height + 2 * m) * how.scale >= to.height
  );
}

/** Pieces drawn in one slice: few enough that a slice and the live check fit in a frame. */
const SLICE = 24;

/** The cloth and the pieces that lie still. */
export class StillSheet {
  #front: Konva.Layer;
  #back: Konva.Layer;
  #shown: { view: Viewport; scene: Scene } | null = null;
  #job: { view: Viewport; scene: Scene; pieces: readonly DrawnPiece[]; next: number } | null = null;
  #stillSince = 0;
  #lastView: Viewport | null = null;

  constructor(
    front: Konva.Layer,
    back: Konva.Layer,
    private readonly ratio: number
  ) {
    this.#front = front;
    this.#back = back;
    native(back).canvas.style.visibility = 'hidden';
  }

  /** Forgets what was drawn: after the canvas changed its size. */
  reset(): void {
    this.#shown = null;
    this.#job = null;
  }

  /**
   * One frame: carries the picture to `view`, and draws a slice of a new one where that is wanted. True while there
   * is more to draw. `now` in milliseconds.
   */
  frame(view: Viewport, scene: Scene, now: number): boolean {
    if (view !== this.#lastView) {
      this.#lastView = view;
      this.#stillSince = now;
    }
    if (!this.#shown || this.#shown.view.lie !== view.lie) {
      this.#begin(view, scene);
      while (this.#job) this.#slice();
      carry(native(this.#front).canvas, view, view);
      return false;
    }
    if (!this.#job && this.#wantsDrawing(view, scene, now)) this.#begin(view, scene);
    // A picture of pieces that have since changed is of no use; one of a former view still is.
    if (this.#job && this.#job.scene !== scene) this.#begin(view, scene);
    if (this.#job) this.#slice();
    carry(native(this.#front).canvas, this.#shown.view, view);
    return this.#job !== null || this.#shown.scene !== scene || this.#shown.view !== view;
  }

  /** Whether the picture on show is of `scene`. */
  shows(scene: Scene): boolean {
    return this.#shown?.scene === scene;
  }

  #wantsDrawing(view: Viewport, scene: Scene, now: number): boolean {
    const shown = this.#shown!;
    if (shown.scene !== scene) return true;
    if (shown.view === view) return false;
    if (now - this.#stillSince > 90) return true;
    const stretch = Math.abs(Math.log(view.scale / shown.view.scale));
    if (stretch > 0.7) return true;
    const ahead = carried(shown.view, view)!;
    const half = SHEET_MARGIN / 2;
    return stretch < 0.01
      ? Math.abs(ahead.left) > half || Math.abs(ahead.top) > half
      : !covers(shown.view, view);
  }

  #begin(view: Viewport, scene: Scene): void {
    const sheet = onSheet(view);
    const box = seen(sheet);
    const pieces = scene.pieces.filter(
      (piece) =>
        piece.box.minX <= box.maxX &&
        piece.box.maxX >= box.minX &&
        piece.box.minY <= box.maxY &&
        piece.box.maxY >= box.minY
    );
    this.#job = { view, scene, pieces, next: -1 };
  }

  #slice(): void {
    const job = this.#job!;
    const { ctx, canvas } = native(this.#back);
    const sheet = onSheet(job.view);
    const { ratio } = this;
    if (job.next < 0) {
      ctx.setTransform(1, 0, 0, 1, 0, 0);
      ctx.clearRect(0, 0, canvas.width, canvas.height);
      ctx.setTransform(ratio, 0, 0, ratio, 0, 0);
      drawCloth(ctx, sheet, job.scene.cloth);
      job.next = 0;
      if (job.pieces.length > SLICE) return;
    }
    const end = Math.min(job.pieces.length, job.next + SLICE);
    for (let i = job.next; i < end; i++) {
      const piece = job.pieces[i]!;
      drawPiece(ctx, sheet, piece.shape, piece.placement, piece.look, ratio);
    }
    job.next = end;
    if (end < job.pieces.length) return;
    const old = this.#front;
    this.#front = this.#back;
    this.#back = old;
    native(this.#front).canvas.style.visibility = 'visible';
    native(this.#back).canvas.style.visibility = 'hidden';
    this.#shown = { view: job.view, scene: job.scene };
    this.#job = null;
  }
}

/** The pieces in hand. They are drawn once where they lay, and carried. */
export class MovingSheet {
  #drawn: { view: Viewport; pieces: readonly DrawnPiece[] } | null = null;

  constructor(
    private readonly layer: Konva.Layer,
    private readonly ratio: number
  ) {}

  /** Shows `pieces` moved by pixels, or nothing. */
  frame(view: Viewport, pieces: readonly DrawnPiece[] | null, dLeft: number, dTop: number): void {
    const { canvas, ctx } = native(this.layer);
    if (!pieces) {
      if (this.#drawn) {
        ctx.setTransform(1, 0, 0, 1, 0, 0);
        ctx.clearRect(0, 0, canvas.width, canvas.height);
        canvas.style.visibility = 'hidden';
      }
      this.#drawn = null;
      return;
    }
    // Drawn where they are now when they left the sheet's margin behind, or when the picture got too coarse.
    const how = this.#drawn && carried(this.#drawn.view, view);
    const far =
      !how ||
      Math.abs(how.left + dLeft) > SHEET_MARGIN ||
      Math.abs(how.top + dTop) > SHEET_MARGIN ||
      Math.abs(Math.log(how.scale)) > 0.3;
    if (!this.#drawn || this.#drawn.pieces !== pieces || far) {
      const at = panned(view, dLeft, dTop);
      ctx.setTransform(1, 0, 0, 1, 0, 0);
      ctx.clearRect(0, 0, canvas.width, canvas.height);
      const sheet = onSheet(at);
      for (const piece of pieces) drawPiece(ctx, sheet, piece.shape, piece.placement, piece.look, this.ratio);
      canvas.style.visibility = 'visible';
      this.#drawn = { view: at, pieces };
    }
    const moved = panned(view, dLeft, dTop);
    carry(canvas, this.#drawn.view, moved);
  }
}
