import { beforeEach, describe, expect, it } from 'vitest';
import { Gestures, type Pointer, type Table } from '$lib/client/gestures';
import type { Point } from '$lib/geometry/point';
import { toCloth, type ScreenPoint, type Viewport } from '$lib/client/viewport';

/** A table with one piece on the left half of the canvas, that writes down what is done to it. */
class WrittenTable implements Table {
  view: Viewport = { lie: 'across', scale: 1, originX: 0, originY: 500, width: 1000, height: 500 };
  tool: 'hand' | 'measure' = 'hand';
  readOnly = false;
  panning = false;
  severalAtOnce = false;
  band: Table['band'] = null;
  measured: Table['measured'] = null;
  locked = false;
  chosen = new Set<string>();
  done: string[] = [];
  step: Point = { x: 0, y: 0 };
  pieceAt = (point: Point): string | null => (point.x < 500 ? 'front' : null);
  isChosen = (id: string): boolean => this.chosen.has(id);
  canMove = (): boolean => !this.locked;
  choose(id: string | null, adds: boolean): void {
    if (!adds) this.chosen.clear();
    if (id !== null) {
      if (adds && this.chosen.has(id)) this.chosen.delete(id);
      else this.chosen.add(id);
    }
  }
  chooseWithin(from: ScreenPoint, to: ScreenPoint): void {
    this.done.push(`within ${from.left},${from.top} ${to.left},${to.top}`);
  }
  lift(): boolean {
    this.done.push('lift');
    return true;
  }
  carry(step: Point): void {
    this.step = step;
  }
  putDown(): void {
    this.done.push(`put down ${this.step.x},${this.step.y}`);
  }
  letGo(): void {
    this.done.push('let go');
  }
  say(words: string): void {
    this.done.push(words);
  }
}

let table: WrittenTable;
let gestures: Gestures;
beforeEach(() => {
  table = new WrittenTable();
  gestures = new Gestures(table);
});

function at(left: number, top: number, more: Partial<Pointer> = {}): Pointer {
  return { id: 1, kind: 'mouse', button: 0, adds: false, left, top, ...more };
}

describe('gestures on the cloth', () => {
  it('pick with a click, and nothing moves', () => {
    gestures.down(at(100, 100));
    expect(gestures.state).toBe('pointing');
    gestures.move(at(101, 101));
    gestures.up(at(101, 101));
    expect([...table.chosen]).toEqual(['front']);
    expect(table.done).toEqual([]);
    gestures.down(at(800, 100));
    gestures.up(at(800, 100));
    expect([...table.chosen]).toEqual([]);
  });

  it('lift a piece only once the pointer has really moved, and put it down where it was carried', () => {
    gestures.down(at(100, 100));
    gestures.move(at(102, 100));
    expect(gestures.state).toBe('pointing');
    gestures.move(at(140, 80));
    expect(gestures.state).toBe('moving');
    gestures.move(at(150, 70));
    gestures.up(at(150, 70));
    // Pixels count downwards, the cloth upwards.
    expect(table.done).toEqual(['lift', 'put down 50,30']);
    expect(gestures.state).toBe('idle');
  });

  it('let go on Escape as if nothing had happened', () => {
    gestures.down(at(100, 100));
    gestures.move(at(200, 100));
    gestures.cancel();
    expect(table.done).toEqual(['lift', 'let go']);
    gestures.move(at(300, 100));
    gestures.up(at(300, 100));
    expect(table.done).toEqual(['lift', 'let go']);
  });

  it('draw the rubber band from bare cloth with a mouse, and pan there with a finger', () => {
    gestures.down(at(800, 100));
    gestures.move(at(900, 200));
    expect(gestures.state).toBe('bandSelecting');
    expect(table.band).not.toBeNull();
    gestures.up(at(900, 200));
    expect(table.done).toEqual(['within 800,100 900,200']);
    expect(table.band).toBeNull();

    gestures.down(at(800, 100, { kind: 'touch' }));
    gestures.move(at(830, 110, { kind: 'touch' }));
    gestures.move(at(850, 120, { kind: 'touch' }));
    expect(gestures.state).toBe('panning');
    gestures.up(at(850, 120, { kind: 'touch' }));
    expect(table.view.originX).toBe(50);
    expect(table.view.originY).toBe(520);
  });

  it('pinch with two fingers about the place between them, and put the piece of the first finger back', () => {
    gestures.down(at(100, 100, { kind: 'touch', id: 1 }));
    gestures.move(at(130, 100, { kind: 'touch', id: 1 }));
    expect(gestures.state).toBe('moving');
    gestures.down(at(230, 100, { kind: 'touch', id: 2 }));
    expect(gestures.state).toBe('pinching');
    expect(table.done).toEqual(['lift', 'let go']);
    const before = toCloth(table.view, { left: 180, top: 100 });
    gestures.move(at(80, 100, { kind: 'touch', id: 1 }));
    gestures.move(at(280, 100, { kind: 'touch', id: 2 }));
    expect(table.view.scale).toBeCloseTo(2);
    const after = toCloth(table.view, { left: 180, top: 100 });
    expect(after.x).toBeCloseTo(before.x);
    expect(after.y).toBeCloseTo(before.y);
    gestures.up(at(280, 100, { kind: 'touch', id: 2 }));
    expect(gestures.state).toBe('panning');
    gestures.up(at(80, 100, { kind: 'touch', id: 1 }));
    expect(gestures.state).toBe('idle');
  });

  it('refuse to move locked pieces and pieces of a released lay, and say why', () => {
    table.locked = true;
    gestures.down(at(100, 100));
    gestures.move(at(200, 100));
    expect(table.done).toEqual(['This piece is locked: unlock it to move it.']);
    gestures.up(at(200, 100));
    table.readOnly = true;
    gestures.down(at(100, 100));
    gestures.move(at(200, 100));
    expect(table.done[1]).toContain('released');
  });

  it('keep several picked when one of them is pressed, and leave only it when it is clicked', () => {
    table.chosen = new Set(['front', 'back']);
    gestures.down(at(100, 100));
    expect([...table.chosen]).toEqual(['front', 'back']);
    gestures.up(at(100, 100));
    expect([...table.chosen]).toEqual(['front']);
  });

  it('measure between two places of the cloth', () => {
    table.tool = 'measure';
    gestures.down(at(100, 400));
    gestures.move(at(400, 100));
    gestures.up(at(400, 100));
    expect(table.measured).toEqual({ from: { x: 100, y: 100 }, to: { x: 400, y: 400 } });
    expect(table.done).toEqual([]);
  });

  it('carry a piece that comes off the Rail with the pointer that took it', () => {
    gestures.fetch(7, { x: 10, y: 10 });
    expect(gestures.state).toBe('fetching');
    gestures.move(at(60, 400, { id: 7 }));
    gestures.move(at(300, 300, { id: 8 }));
    gestures.up(at(60, 400, { id: 7 }));
    expect(table.done).toEqual(['put down 50,90']);
  });
});
