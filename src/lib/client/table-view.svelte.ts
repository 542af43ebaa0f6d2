import type { Box, Point } from '$lib/geometry/point';
import { Gestures, type Table, type Tool } from './gestures';
import type { OpenLay } from './open-lay.svelte';
import { boxAround, pieceAt, piecesWithin } from './table-pieces';
import {
  centred,
  fitted,
  panned,
  resized,
  toCloth,
  toScreen,
  turnedTable,
  zoomed,
  type Lie,
  type ScreenPoint,
  type Viewport
} from './viewport';

/*
 * How the table is looked at and which tool lies ready; the gestures of the canvas act through it on the open lay.
 */

export class TableView implements Table {
  view: Viewport = $state.raw({ lie: 'across', scale: 0.4, originX: 60, originY: 300, width: 0, height: 0 });
  tool: Tool = $state('hand');
  /** Space is held, or the hand switch is on. */
  panning: boolean = $state(false);
  /** Picking adds: the switch for fingers, which have no shift key. */
  severalAtOnce: boolean = $state(false);
  band: { readonly from: ScreenPoint; readonly to: ScreenPoint } | null = $state.raw(null);
  measured: { readonly from: Point; readonly to: Point } | null = $state.raw(null);
  readonly gestures: Gestures;
  /** Where the cloth is drawn to, and whether the pointer is over the Rail: the screen knows. */
  clothBox: () => Box = () => ({ minX: 0, minY: 0, maxX: 1000, maxY: 1000 });
  overRail: (at: ScreenPoint) => boolean = () => false;
  #fittedOnce = false;
  /** Whether the person turned the table, so that a new size does not turn it back. */
  #turnedByHand = false;

  constructor(readonly lay: OpenLay) {
    this.gestures = new Gestures(this);
  }

  get readOnly(): boolean {
    return this.lay.readOnly;
  }

  pieceAt(point: Point, reach: number): string | null {
    return pieceAt(this.lay.pieces, point, reach)?.id ?? null;
  }
  isChosen(id: string): boolean {
    return this.lay.isPicked(id);
  }
  canMove(id: string): boolean {
    return this.lay.pieces.some((piece) => piece.id === id && !piece.placement.locked);
  }
  choose(id: string | null, adds: boolean): void {
    this.lay.pick(id, adds);
  }
  chooseWithin(from: ScreenPoint, to: ScreenPoint, adds: boolean): void {
    const a = toCloth(this.view, from);
    const b = toCloth(this.view, to);
    const box = {
      minX: Math.min(a.x, b.x),
      minY: Math.min(a.y, b.y),
      maxX: Math.max(a.x, b.x),
      maxY: Math.max(a.y, b.y)
    };
    this.lay.pickAll(
      piecesWithin(this.lay.pieces, box).map(({ id }) => id),
      adds
    );
  }
  lift(): boolean {
    return this.lay.lift();
  }
  carry(step: Point): void {
    this.lay.carry(step);
  }
  putDown(at: ScreenPoint): void {
    this.lay.putDown(this.overRail(at) ? 'rail' : 'cloth');
  }
  letGo(): void {
    this.lay.letGo();
  }
  say(words: string): void {
    this.lay.say(words, true);
  }

  // Looking

  /** The canvas has this size now, on a screen that is wide (the warp lies across) or tall. */
  resize(width: number, height: number, lie: Lie): void {
    if (width < 2 || height < 2) return;
    if (!this.#fittedOnce) {
      this.#fittedOnce = true;
      this.view = { ...this.view, width, height, lie };
      this.begin();
      return;
    }
    this.view = resized(this.view, width, height);
    if (!this.#turnedByHand && lie !== this.view.lie) {
      this.view = turnedTable(this.view);
      this.fit();
    }
  }

  /** The first look: all of the cloth, or its whole width at the zero end where all would be too small to read. */
  begin(): void {
    this.fit();
    const whole = this.clothBox();
    const width = { ...whole, maxX: whole.minX + (whole.maxY - whole.minY) * 0.3 };
    const padding = this.#padding();
    const near = fitted(this.view, width, padding);
    if (this.view.scale >= near.scale * 0.45) return;
    const across = near.lie === 'across';
    const zero = toScreen(near, { x: whole.minX, y: 0 });
    this.view = panned(near, across ? padding.left - zero.left : 0, across ? 0 : padding.top - zero.top);
  }

  /** All of the cloth. */
  fit(): void {
    this.view = fitted(this.view, this.clothBox(), this.#padding());
  }

  /** What is picked, or all pieces. */
  fitPicked(): void {
    const box = boxAround(this.lay.pickedPieces.length > 0 ? this.lay.pickedPieces : this.lay.pieces);
    if (box) this.view = fitted(this.view, box, this.#padding(60));
  }

  #padding(all = 0): { left: number; right: number; top: number; bottom: number } {
    const across = this.view.lie === 'across';
    const small = Math.min(this.view.width, this.view.height) < 500;
    const free = small ? 8 : 22;
    // The tape and the rule lie outside the cloth.
    return {
      left: 34 + free / 2 + all,
      right: (across ? free + 24 : free) + all,
      top: (across ? free + 8 : 34) + all,
      bottom: (across ? 34 + free / 2 : free + 24) + all
    };
  }

  zoom(factor: number, at: ScreenPoint = { left: this.view.width / 2, top: this.view.height / 2 }): void {
    this.view = zoomed(this.view, factor, at);
  }

  pan(dLeft: number, dTop: number): void {
    this.view = panned(this.view, dLeft, dTop);
  }

  turnTable(): void {
    this.#turnedByHand = true;
    this.view = turnedTable(this.view);
    this.fit();
    this.lay.say(
      this.view.lie === 'across'
        ? 'Table turned: the warp runs left to right, the near selvedge is below.'
        : 'Table turned: the warp runs top to bottom, the near selvedge is on the left.'
    );
  }

  /** Brings a place of the cloth into the middle, near enough to see. */
  bringIntoView(point: Point, box: Box | null): void {
    const middle = { left: this.view.width / 2, top: this.view.height / 2 };
    const closer = box
      ? Math.min(fitted(this.view, box, this.#padding(80)).scale, Math.max(this.view.scale, 1))
      : Math.max(this.view.scale, 0.5);
    this.view = centred({ ...this.view, scale: closer }, point, middle);
  }

  /** The measuring tool, or the hand again. */
  toggleMeasure(): void {
    this.tool = this.tool === 'measure' ? 'hand' : 'measure';
    this.measured = null;
    this.lay.say(
      this.tool === 'measure' ? 'Measure: drag from one place to another.' : 'Measuring put away.'
    );
  }

  /** Escape: the gesture, else the measure, else what is picked. */
  escape(): void {
    if (this.gestures.state !== 'idle') this.gestures.cancel();
    else if (this.tool === 'measure') this.toggleMeasure();
    else if (this.lay.picked.length > 0) {
      this.lay.pick(null, false);
      this.lay.say('Nothing picked.');
    }
  }
}
