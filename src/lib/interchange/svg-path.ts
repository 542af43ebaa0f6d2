import type { Point } from '$lib/geometry/point';
import type { Path, Segment } from '$lib/pattern/panel';
import { endpointArc } from './arcs';

/** One subpath of path data, in user units. */
export interface Subpath {
  path: Path;
  closed: boolean;
}

/** The last control point of a curve, and the commands that go on from it. */
interface Control {
  point: Point;
  after: 'C' | 'Q';
}

/** How many numbers each command takes. */
const COUNTS: Readonly<Record<string, number>> = {
  M: 2,
  L: 2,
  H: 1,
  V: 1,
  C: 6,
  S: 4,
  Q: 4,
  T: 2,
  A: 7,
  Z: 0
};

const SPACE = /[\s,]*/y;
const COMMAND = /[a-zA-Z]/y;
const NUMBER = /[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?/y;
const FLAG = /[01]/y;

function read(pattern: RegExp, text: string, at: number): string | null {
  pattern.lastIndex = at;
  return pattern.exec(text)?.[0] ?? null;
}

/** A quadratic curve as the same curve of the third degree. */
export function fromQuadratic(from: Point, control: Point, to: Point): Segment {
  const third = (a: Point): Point => ({
    x: a.x + (2 / 3) * (control.x - a.x),
    y: a.y + (2 / 3) * (control.y - a.y)
  });
  return { kind: 'cubic', c1: third(from), c2: third(to), to };
}

/**
 * Path data as subpaths of lines and cubic curves (SVG 2, chapter 9). After an error the rest is left out, as
 * 9.5.4 asks: `error` then says what stood there and where.
 */
export function parsePathData(data: string): { subpaths: Subpath[]; error: string | null } {
  const subpaths: Subpath[] = [];
  let here: Point = { x: 0, y: 0 };
  let start: Point = here;
  let segments: Segment[] = [];
  /** The control point that S or T mirrors, and the command family that left it. */
  let control: Control | null = null;

  const finish = (closed: boolean): void => {
    if (segments.length > 0) subpaths.push({ path: { from: start, segments }, closed });
    segments = [];
  };
  const lineTo = (to: Point): void => {
    segments.push({ kind: 'line', to });
    here = to;
  };

  let at = 0;
  let moved = false;
  let command = '';
  while (true) {
    at += read(SPACE, data, at)?.length ?? 0;
    if (at >= data.length) break;
    const letter = read(COMMAND, data, at);
    if (letter) {
      command = letter;
      at += 1;
    } else if (command === '' || command === 'Z' || command === 'z') {
      finish(false);
      return { subpaths, error: `'${data.slice(at, at + 12)}' at character ${at + 1}` };
    }
    const kind = command.toUpperCase();
    const count = COUNTS[kind];
    if (count === undefined || (!moved && kind !== 'M')) {
      finish(false);
      return { subpaths, error: `'${command}' at character ${at}` };
    }
    const n: number[] = [];
    for (let i = 0; i < count; i += 1) {
      at += read(SPACE, data, at)?.length ?? 0;
      const piece = read(kind === 'A' && (i === 3 || i === 4) ? FLAG : NUMBER, data, at);
      const value = piece === null ? NaN : Number(piece);
      if (!Number.isFinite(value)) {
        finish(false);
        return {
          subpaths,
          error: `'${data.slice(at, at + 12)}' at character ${at + 1}, a number is missing`
        };
      }
      at += piece!.length;
      n.push(value);
    }
    const relative = command !== kind;
    const dx = relative ? here.x : 0;
    const dy = relative ? here.y : 0;
    const point = (i: number): Point => ({ x: n[i]! + dx, y: n[i + 1]! + dy });
    let left: Control | null = null;
    switch (kind) {
      case 'M':
        finish(false);
        here = start = point(0);
        moved = true;
        // Further pairs after a move are lines.
        command = relative ? 'l' : 'L';
        break;
      case 'L':
        lineTo(point(0));
        break;
      case 'H':
        lineTo({ x: n[0]! + dx, y: here.y });
        break;
      case 'V':
        lineTo({ x: here.x, y: n[0]! + dy });
        break;
      case 'C':
      case 'S': {
        const mirrored: Point =
          control?.after === 'C'
            ? { x: 2 * here.x - control.point.x, y: 2 * here.y - control.point.y }
            : here;
        const c1 = kind === 'C' ? point(0) : mirrored;
        const c2 = point(count - 4);
        const to = point(count - 2);
        segments.push({ kind: 'cubic', c1, c2, to });
        left = { point: c2, after: 'C' };
        here = to;
        break;
      }
      case 'Q':
      case 'T': {
        const mirrored: Point =
          control?.after === 'Q'
            ? { x: 2 * here.x - control.point.x, y: 2 * here.y - control.point.y }
            : here;
        const middle = kind === 'Q' ? point(0) : mirrored;
        const to = point(count - 2);
        segments.push(fromQuadratic(here, middle, to));
        left = { point: middle, after: 'Q' };
        here = to;
        break;
      }
      case 'A': {
        const to = point(5);
        segments.push(...endpointArc(here, n[0]!, n[1]!, n[2]!, n[3] === 1, n[4] === 1, to));
        here = to;
        break;
      }
      case 'Z':
        finish(true);
        here = start;
        break;
    }
    control = left;
  }
  finish(false);
  return { subpaths, error: null };
}
