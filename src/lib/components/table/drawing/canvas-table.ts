import Konva from 'konva';
import type { Viewport } from '$lib/client/viewport';
import { drawOverlay, type Overlay } from './overlay';
import { forgetTextWidths } from './piece';
import { MovingSheet, SHEET_MARGIN, StillSheet, type DrawnPiece, type Scene } from './sheet';

/*
 * The canvases of the Lay table. Below, on a stage larger than what is in sight: two layers that take turns in
 * showing what lies still, and one for the pieces in hand. Above, as large as what is in sight: the overlay.
 */

/** Everything one frame shows. */
export interface Frame {
  readonly view: Viewport;
  readonly scene: Scene;
  /** Pieces in hand and how far they are carried, in pixels. */
  readonly moving: {
    readonly pieces: readonly DrawnPiece[];
    readonly dLeft: number;
    readonly dTop: number;
  } | null;
  readonly overlay: Overlay;
}

/** Beyond two device pixels a pixel the eye gains nothing and the canvas costs twice. */
const MOST_RATIO = 2;

export class CanvasTable {
  #sheets: Konva.Stage;
  #over: Konva.Stage;
  #overLayer: Konva.Layer;
  #still: StillSheet;
  #moving: MovingSheet;
  #movingPieces: readonly DrawnPiece[] | null = null;
  #movedBy = { dLeft: 0, dTop: 0 };
  #ratio: number;
  #request = 0;
  /** Milliseconds that the last frames' work took, newest last; for the frame bench. */
  readonly work: number[] = [];

  constructor(
    sheetsBox: HTMLDivElement,
    overBox: HTMLDivElement,
    /** What to show; asked once a frame. */
    private readonly ask: () => Frame
  ) {
    this.#ratio = Math.min(MOST_RATIO, window.devicePixelRatio || 1);
    Konva.pixelRatio = this.#ratio;
    this.#sheets = new Konva.Stage({ container: sheetsBox, width: 1, height: 1, listening: false });
    this.#over = new Konva.Stage({ container: overBox, width: 1, height: 1, listening: false });
    const layers = [0, 1, 2].map(() => new Konva.Layer({ listening: false }));
    this.#sheets.add(...(layers as [Konva.Layer, Konva.Layer, Konva.Layer]));
    for (const layer of layers) {
      const { style } = layer.getNativeCanvasElement();
      style.transformOrigin = '0 0';
      style.willChange = 'transform';
    }
    this.#overLayer = new Konva.Layer({ listening: false });
    this.#over.add(this.#overLayer);
    this.#still = new StillSheet(layers[0]!, layers[1]!, this.#ratio);
    this.#moving = new MovingSheet(layers[2]!, this.#ratio);
  }

  /** Fits the canvases to what is in sight. */
  resize(width: number, height: number): void {
    this.#over.size({ width, height });
    this.#sheets.size({ width: width + 2 * SHEET_MARGIN, height: height + 2 * SHEET_MARGIN });
    this.#still.reset();
    this.redraw();
  }

  /** Draws everything anew: after the typeface arrived. */
  repaint(): void {
    forgetTextWidths();
    this.#still.reset();
    this.redraw();
  }

  /** Asks for a frame; any number of calls before it make one. */
  redraw(): void {
    if (this.#request === 0) this.#request = requestAnimationFrame((now) => this.#frame(now));
  }

  #frame(now: number): void {
    const began = performance.now();
    this.#request = 0;
    const { view, scene, moving, overlay } = this.ask();
    if (view.width < 2 || view.height < 2) return;
    let more = this.#still.frame(view, scene, now);
    if (moving) {
      this.#movingPieces = moving.pieces;
      this.#movedBy = { dLeft: moving.dLeft, dTop: moving.dTop };
    } else if (this.#movingPieces && this.#still.shows(scene)) this.#movingPieces = null;
    // Put down pieces stay on their own sheet until the still one shows them.
    else if (this.#movingPieces) more = true;
    this.#moving.frame(view, this.#movingPieces, this.#movedBy.dLeft, this.#movedBy.dTop);

    const canvas = this.#overLayer.getNativeCanvasElement();
    const ctx = canvas.getContext('2d')!;
    ctx.setTransform(1, 0, 0, 1, 0, 0);
    ctx.clearRect(0, 0, canvas.width, canvas.height);
    ctx.setTransform(this.#ratio, 0, 0, this.#ratio, 0, 0);
    drawOverlay(ctx, view, overlay, this.#ratio);
    if (more) this.redraw();
    this.work.push(performance.now() - began);
    if (this.work.length > 2000) this.work.splice(0, 1000);
  }

  destroy(): void {
    cancelAnimationFrame(this.#request);
    this.#request = -1;
    this.#sheets.destroy();
    this.#over.destroy();
  }
}
