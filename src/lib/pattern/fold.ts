import { snap, type Point } from '$lib/geometry/point';
import type { FlatEdge } from './flat-edge';

/** The fold of a panel once its grain runs along x: a level line. */
export interface FoldLine {
  readonly y: number;
  readonly from: Point;
  readonly to: Point;
}

/** The mirror image of `point` across the fold. */
export function across(fold: FoldLine, { x, y }: Point): Point {
  return { x, y: snap(2 * fold.y - y) };
}

/** Where the fold lies, from its edge, and the edges with both its ends exactly on it. */
export function layFold(edges: readonly FlatEdge[], id: string): { fold: FoldLine; edges: FlatEdge[] } {
  const index = edges.findIndex((edge) => edge.id === id);
  const own = edges[index]!.points;
  const [start, end] = [own[0]!, own[own.length - 1]!];
  const y = snap((start.y + end.y) / 2);
  const count = edges.length;
  const fold = { y, from: { x: start.x, y }, to: { x: end.x, y } };
  return {
    fold,
    edges: edges.map((edge, i) => {
      if (i === index) return { ...edge, points: [fold.from, fold.to] };
      const points = [...edge.points];
      if (i === (index + 1) % count) points[0] = fold.to;
      if (i === (index + count - 1) % count) points[points.length - 1] = fold.from;
      return { ...edge, points };
    })
  };
}

/**
 * The edges of the whole piece, counter-clockwise: those of the half without its fold, then their images. The two corners on the fold are
 * mitred, so that both halves run into each other.
 */
export function openFold(edges: readonly FlatEdge[], id: string, fold: FoldLine): FlatEdge[] {
  const index = edges.findIndex((edge) => edge.id === id);
  const half = [...edges.slice(index + 1), ...edges.slice(0, index)].map((edge, i): FlatEdge =>
    i === 0 ? { ...edge, treatment: 'mitred' } : edge
  );
  const images = half.map((edge, i): FlatEdge => ({
    ...edge,
    points: edge.points.map((point) => across(fold, point)).reverse(),
    // The corner where an image starts is that where the edge after it started.
    treatment: half[i + 1]?.treatment ?? 'mitred',
    mirrored: true
  }));
  return [...half, ...images.reverse()];
}

/**
 * A closed outline beside or astride the fold, opened: itself and its image, or one outline where a stretch of it lies on the fold.
 */
export function openOutline(outline: readonly Point[], fold: FoldLine): Point[][] {
  const on = (point: Point) => Math.abs(point.y - fold.y) < 0.0015;
  const count = outline.length;
  const at = (i: number) => outline[((i % count) + count) % count]!;
  const start = outline.findIndex((point, i) => on(point) && !on(at(i + 1)));
  const half = outline.map((point) => (on(point) ? { x: point.x, y: fold.y } : point));
  const image = half.map((point) => across(fold, point)).reverse();
  const resting = outline.filter(on).length;
  if (start < 0 || resting < 2) return [half, image];
  // From where it leaves the fold round to where it comes back, then the image of the same.
  const ring = Array.from({ length: count }, (_, i) => half[(start + i) % count]!);
  const away = ring.slice(0, count - resting + 2);
  return [
    [
      ...away,
      ...away
        .slice(1, -1)
        .map((point) => across(fold, point))
        .reverse()
    ]
  ];
}
