import type { Point } from '$lib/geometry/point';
import { panned, toCloth, zoomed, type ScreenPoint, type Viewport } from './viewport';

/*
 * What fingers, pens and mice do on the canvas: a small tree of states. `pointing` is not yet `moving`: only a real
 * move lifts a piece. Each state can be cancelled; a second finger ends what the first one did and pinches.
 */

export interface Pointer extends ScreenPoint {
  readonly id: number;
  readonly kind: 'mouse' | 'touch' | 'pen';
  /** 0 main, 1 middle, 2 right. */
  readonly button: number;
  /** Shift, or ctrl or ⌘: adds to what is chosen. */
  readonly adds: boolean;
}

export type Tool = 'hand' | 'measure';

/** What gestures act on. */
export interface Table {
  view: Viewport;
  readonly tool: Tool;
  readonly readOnly: boolean;
  /** A held key (space) or a switch that makes a drag pan. */
  readonly panning: boolean;
  /** Several pieces are being picked: each touch adds. */
  readonly severalAtOnce: boolean;
  /** The piece at a place of the cloth, within `reach` millimetres. */
  pieceAt(point: Point, reach: number): string | null;
  isChosen(id: string): boolean;
  canMove(id: string): boolean;
  choose(id: string | null, adds: boolean): void;
  chooseWithin(from: ScreenPoint, to: ScreenPoint, adds: boolean): void;
  /** Takes the chosen pieces in hand. False when none can be moved. */
  lift(): boolean;
  carry(step: Point): void;
  /** Puts down what is in hand; `at` is where the pointer is. */
  putDown(at: ScreenPoint): void;
  letGo(): void;
  band: { readonly from: ScreenPoint; readonly to: ScreenPoint } | null;
  measured: { readonly from: Point; readonly to: Point } | null;
  say(words: string): void;
}

type State =
  | { readonly name: 'idle' }
  | {
      readonly name: 'pointing';
      readonly at: Pointer;
      readonly piece: string | null;
      readonly wasChosen: boolean;
    }
  | { readonly name: 'moving'; readonly at: Pointer; readonly grabbed: Point }
  | { readonly name: 'fetching'; readonly pointer: number; readonly grabbed: Point }
  | { readonly name: 'bandSelecting'; readonly at: Pointer }
  | { readonly name: 'panning'; readonly pointer: number; readonly last: ScreenPoint }
  | { readonly name: 'pinching'; readonly a: Pointer; readonly b: Pointer }
  | { readonly name: 'measuring'; readonly pointer: number; readonly from: Point };

/** How far a pointer goes before it means to move, in pixels. */
const SLACK = { mouse: 3, pen: 5, touch: 8 } as const;
/** How near to a piece still takes it, in pixels. */
const REACH = { mouse: 2, pen: 5, touch: 12 } as const;

export class Gestures {
  #state: State = { name: 'idle' };
  #down = new Map<number, Pointer>();

  constructor(private readonly table: Table) {}

  get state(): State['name'] {
    return this.#state.name;
  }

  /** A piece came off the Rail under this pointer; `grabbed` is the place of the cloth under the pointer. */
  fetch(pointer: number, grabbed: Point): void {
    this.cancel();
    this.#state = { name: 'fetching', pointer, grabbed };
  }

  down(pointer: Pointer): void {
    this.#down.set(pointer.id, pointer);
    if (this.#down.size === 2) {
      this.#abandon();
      const [a, b] = [...this.#down.values()];
      this.#state = { name: 'pinching', a: a!, b: b! };
      return;
    }
    if (this.#state.name !== 'idle') return;
    const { table } = this;
    if (pointer.button !== 0 || table.panning) {
      this.#state = { name: 'panning', pointer: pointer.id, last: pointer };
      return;
    }
    const at = toCloth(table.view, pointer);
    if (table.tool === 'measure') {
      table.measured = { from: at, to: at };
      this.#state = { name: 'measuring', pointer: pointer.id, from: at };
      return;
    }
    const piece = table.pieceAt(at, REACH[pointer.kind] / table.view.scale);
    this.#state = {
      name: 'pointing',
      at: pointer,
      piece,
      wasChosen: piece !== null && table.isChosen(piece)
    };
    // A piece that is not yet chosen is chosen at once, so that a drag moves it.
    if (piece !== null && !table.isChosen(piece)) table.choose(piece, pointer.adds || table.severalAtOnce);
  }

  move(pointer: Pointer): void {
    if (this.#down.has(pointer.id)) this.#down.set(pointer.id, pointer);
    const { table } = this;
    const state = this.#state;
    switch (state.name) {
      case 'idle':
        return;
      case 'pointing':
        if (pointer.id !== state.at.id) return;
        if (Math.hypot(pointer.left - state.at.left, pointer.top - state.at.top) < SLACK[pointer.kind])
          return;
        this.#start(state);
        this.move(pointer);
        return;
      case 'moving':
      case 'fetching': {
        if (pointer.id !== (state.name === 'moving' ? state.at.id : state.pointer)) return;
        const now = toCloth(table.view, pointer);
        table.carry({ x: now.x - state.grabbed.x, y: now.y - state.grabbed.y });
        return;
      }
      case 'bandSelecting':
        if (pointer.id === state.at.id) table.band = { from: state.at, to: pointer };
        return;
      case 'panning':
        if (pointer.id !== state.pointer) return;
        table.view = panned(table.view, pointer.left - state.last.left, pointer.top - state.last.top);
        this.#state = { ...state, last: pointer };
        return;
      case 'pinching': {
        const a = state.a.id === pointer.id ? pointer : state.a;
        const b = state.b.id === pointer.id ? pointer : state.b;
        const before = Math.hypot(state.a.left - state.b.left, state.a.top - state.b.top);
        const after = Math.hypot(a.left - b.left, a.top - b.top);
        const was = { left: (state.a.left + state.b.left) / 2, top: (state.a.top + state.b.top) / 2 };
        const is = { left: (a.left + b.left) / 2, top: (a.top + b.top) / 2 };
        const moved = panned(table.view, is.left - was.left, is.top - was.top);
        table.view = before > 1 && after > 1 ? zoomed(moved, after / before, is) : moved;
        this.#state = { name: 'pinching', a, b };
        return;
      }
      case 'measuring':
        if (pointer.id === state.pointer)
          table.measured = { from: state.from, to: toCloth(table.view, pointer) };
    }
  }

  up(pointer: Pointer): void {
    this.#down.delete(pointer.id);
    const { table } = this;
    const state = this.#state;
    switch (state.name) {
      case 'idle':
        return;
      case 'pointing': {
        if (pointer.id !== state.at.id) return;
        const adds = pointer.adds || table.severalAtOnce;
        if (state.piece === null) {
          if (!adds) table.choose(null, false);
        } else if (state.wasChosen) table.choose(state.piece, adds);
        break;
      }
      case 'moving':
        if (pointer.id !== state.at.id) return;
        table.putDown(pointer);
        break;
      case 'fetching':
        if (pointer.id !== state.pointer) return;
        table.putDown(pointer);
        break;
      case 'bandSelecting':
        if (pointer.id !== state.at.id) return;
        table.band = null;
        table.chooseWithin(state.at, pointer, state.at.adds || table.severalAtOnce);
        break;
      case 'panning':
      case 'measuring':
        if (pointer.id !== state.pointer) return;
        break;
      case 'pinching':
        if (pointer.id !== state.a.id && pointer.id !== state.b.id) return;
        // The finger that stays goes on panning.
        for (const rest of this.#down.values()) {
          this.#state = { name: 'panning', pointer: rest.id, last: rest };
          return;
        }
    }
    this.#state = { name: 'idle' };
  }

  /** Escape, a lost pointer, a window that lost the focus: as if the gesture had never begun. */
  cancel(): void {
    this.#abandon();
    this.#down.clear();
    this.#state = { name: 'idle' };
  }

  #abandon(): void {
    const { name } = this.#state;
    if (name === 'moving' || name === 'fetching') this.table.letGo();
    if (name === 'bandSelecting') this.table.band = null;
    if (name === 'measuring') this.table.measured = null;
  }

  /** What a pointer that has gone beyond its slack means. */
  #start(state: State & { name: 'pointing' }): void {
    const { table } = this;
    const { at, piece } = state;
    if (piece === null) {
      // One finger on bare cloth pans; a mouse or pen draws the rubber band.
      if (at.kind === 'touch' && !table.severalAtOnce)
        this.#state = { name: 'panning', pointer: at.id, last: at };
      else {
        table.band = { from: at, to: at };
        this.#state = { name: 'bandSelecting', at };
      }
      return;
    }
    if (table.readOnly || !table.canMove(piece)) {
      table.say(
        table.readOnly
          ? 'This lay is released: reopen it to move pieces.'
          : 'This piece is locked: unlock it to move it.'
      );
      this.#state = { name: 'panning', pointer: at.id, last: at };
      return;
    }
    if (!table.isChosen(piece)) table.choose(piece, at.adds);
    this.#state = table.lift() ? { name: 'moving', at, grabbed: toCloth(table.view, at) } : { name: 'idle' };
  }
}
