import type { Outline } from '$lib/geometry/point';
import { placeOutline } from '$lib/geometry/placement';
import { Clipper64, ClipType, FillRule, type Path64, type Paths64 } from 'clipper2-ts';
import type { Ring } from './no-fit';
import type { Way } from './problem';

/**
 * An outline in one of its ways, on whole quanta, its box centred on (0, 0). Pieces whose ways look alike share a
 * form, so that a no-fit region is computed once.
 */
export interface Form {
  readonly ring: Ring;
  /** Half the box. */
  readonly hx: number;
  readonly hy: number;
  readonly area: number;
}

/** Where in quanta the box of `outline`, laid in `way`, has its centre, and its ring around that centre. */
export function centredRing(
  outline: Outline,
  way: Way,
  scale: number
): { ring: Ring; cx: number; cy: number } | null {
  const placed = placeOutline(outline, { x: 0, y: 0, turn: way.turn, flip: way.flip });
  // Even numbers, so that the centre of the box is whole.
  const xs = placed.map((p) => 2 * Math.round((p.x * scale) / 2));
  const ys = placed.map((p) => 2 * Math.round((p.y * scale) / 2));
  const minX = Math.min(...xs);
  const maxX = Math.max(...xs);
  const minY = Math.min(...ys);
  const maxY = Math.max(...ys);
  const cx = (minX + maxX) / 2;
  const cy = (minY + maxY) / 2;
  const ring = cleaned(
    xs.map((x) => x - cx),
    ys.map((y) => y - cy)
  );
  return ring && { ring, cx, cy };
}

/** Without repeated corners, corners in line and spikes; null if nothing is left. */
export function cleaned(xs: number[], ys: number[]): Ring | null {
  for (let i = 0; xs.length >= 3 && i < xs.length;) {
    const n = xs.length;
    const p = (i + n - 1) % n;
    const q = (i + 1) % n;
    const cross = (xs[i]! - xs[p]!) * (ys[q]! - ys[i]!) - (ys[i]! - ys[p]!) * (xs[q]! - xs[i]!);
    if (cross !== 0) {
      i++;
      continue;
    }
    xs.splice(i, 1);
    ys.splice(i, 1);
    i = Math.max(0, i - 2);
  }
  return xs.length < 3 ? null : { xs: Float64Array.from(xs), ys: Float64Array.from(ys) };
}

export function formOf(ring: Ring): Form {
  let hx = 0;
  let hy = 0;
  for (let i = 0; i < ring.xs.length; i++) {
    hx = Math.max(hx, Math.abs(ring.xs[i]!));
    hy = Math.max(hy, Math.abs(ring.ys[i]!));
  }
  return { ring, hx, hy, area: ringArea(ring) };
}

export function ringArea({ xs, ys }: Ring): number {
  let twice = 0;
  for (let i = 0, j = xs.length - 1; i < xs.length; j = i++) twice += xs[j]! * ys[i]! - xs[i]! * ys[j]!;
  return twice / 2;
}

/** `ring` turned by 180°. */
export function opposite(ring: Ring): Ring {
  return { xs: ring.xs.map((x) => 0 - x), ys: ring.ys.map((y) => 0 - y) };
}

/** A name that two rings share if and only if they are the same closed line. */
export function ringKey({ xs, ys }: Ring): string {
  let first = 0;
  for (let i = 1; i < xs.length; i++)
    if (xs[i]! < xs[first]! || (xs[i] === xs[first] && ys[i]! < ys[first]!)) first = i;
  const parts: number[] = [];
  for (let k = 0; k < xs.length; k++) {
    const i = (first + k) % xs.length;
    parts.push(xs[i]! + 0, ys[i]! + 0);
  }
  return parts.join();
}

/**
 * A ring that keeps at least `distance` from `ring`: edges moved out by exactly that, corners rounded by short
 * chords outside the arc. Pockets that close up are filled.
 */
export function inflated(ring: Ring, distance: number): Ring {
  const { xs, ys } = ring;
  const n = xs.length;
  const path: Path64 = [];
  const push = (x: number, y: number) => path.push({ x: Math.round(x), y: Math.round(y) });
  for (let i = 0; i < n; i++) {
    const p = (i + n - 1) % n;
    const q = (i + 1) % n;
    const inX = xs[i]! - xs[p]!;
    const inY = ys[i]! - ys[p]!;
    const outX = xs[q]! - xs[i]!;
    const outY = ys[q]! - ys[i]!;
    const inLength = Math.sqrt(inX * inX + inY * inY);
    const outLength = Math.sqrt(outX * outX + outY * outY);
    const turn = Math.atan2(inX * outY - inY * outX, inX * outX + inY * outY);
    if (turn <= 0) {
      push(xs[i]! + (distance * inY) / inLength, ys[i]! - (distance * inX) / inLength);
      push(xs[i]!, ys[i]!);
      push(xs[i]! + (distance * outY) / outLength, ys[i]! - (distance * outX) / outLength);
      continue;
    }
    const chords = Math.max(1, Math.ceil(turn / CHORD));
    const half = turn / chords / 2;
    const start = Math.atan2(-inX, inY);
    for (let k = 0; k < chords; k++) {
      const angle = start + (2 * k + 1) * half;
      const reach = distance / Math.cos(half);
      push(xs[i]! + reach * Math.cos(angle), ys[i]! + reach * Math.sin(angle));
    }
  }
  const clipper = new Clipper64();
  clipper.preserveCollinear = false;
  clipper.addSubject([path]);
  const solution: Paths64 = [];
  clipper.execute(ClipType.Union, FillRule.Positive, solution);
  let best: Ring | null = null;
  for (const found of solution) {
    const candidate = cleaned(
      found.map((p) => p.x),
      found.map((p) => p.y)
    );
    if (candidate && (!best || ringArea(candidate) > ringArea(best))) best = candidate;
  }
  if (!best) throw new Error(`An outline of ${n} corners vanished when moved out by ${distance}`);
  return best;
}

/** The most that one chord of a rounded corner turns: the corner lies 1.5 % of the clearance too far out. */
const CHORD = Math.PI / 9;
