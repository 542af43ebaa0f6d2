import type { Point } from '$lib/geometry/point';
import type { Edge, Hand, Panel, Path, Segment } from '$lib/pattern/panel';

/*
 * A short way to write the demo's panels down in code: millimetres, y up, counter-clockwise, as worn seen from outside
 * (so a front half with its centre at x = 0 is the wearer's left, a back half the wearer's right).
 */

export const at = (x: number, y: number): Point => ({ x, y });

/** A straight stretch to (x, y). */
export const to = (x: number, y: number): Segment => ({ kind: 'line', to: at(x, y) });

/** A curve to (x, y) with its two handles. */
export const curve = (x1: number, y1: number, x2: number, y2: number, x: number, y: number): Segment => ({
  kind: 'cubic',
  c1: at(x1, y1),
  c2: at(x2, y2),
  to: at(x, y)
});

interface DrawnEdge {
  readonly id: string;
  readonly role: Edge['role'];
  readonly allowance: number;
  readonly segments: Segment[];
}

const edge =
  (role: Edge['role'], usual: number) =>
  (id: string, segments: Segment[], allowance = usual): DrawnEdge => ({ id, role, allowance, segments });

export const seam = edge('seam', 15);
export const hem = edge('hem', 40);
export const opening = edge('opening', 20);
export const fold = edge('fold', 0);

/** A path from the first point through the others in straight lines. */
export function stroke(from: Point, ...points: Point[]): Path {
  return { from, segments: points.map((point) => ({ kind: 'line', to: point })) };
}

interface Drawing extends Partial<
  Omit<Panel, 'id' | 'edges' | 'corners' | 'notches' | 'grain' | 'internalLines' | 'drillHoles'>
> {
  readonly id: string;
  readonly name: string;
  readonly start: Point;
  readonly edges: readonly DrawnEdge[];
  /** From the top of the garment downwards, the way the nap runs. */
  readonly grain: readonly [Point, Point];
  /** Edge and distance along its sew line; the third says how many side by side. */
  readonly notches?: readonly (readonly [string, number, number?])[];
  readonly lines?: readonly { readonly path: Path; readonly note: string }[];
  readonly holes?: readonly { readonly at: Point; readonly note: string }[];
  /** Corners that are not square, by the edge that starts there. */
  readonly treat?: Readonly<Record<string, Panel['corners'][number]['treatment']>>;
}

/** The panel of a drawing: one piece unless it says otherwise. */
export function panel(drawing: Drawing): Panel {
  const { start, edges, notches = [], lines = [], holes = [], treat = {}, grain, ...given } = drawing;
  let from = start;
  const drawn: Edge[] = edges.map((one) => {
    const started = from;
    from = one.segments[one.segments.length - 1]!.to;
    return { ...one, from: started };
  });
  const folded = drawn.find((one) => one.role === 'fold');
  return {
    drawn: 'sew',
    cutOuts: [],
    matchPoints: [],
    howMany: 1,
    paired: false,
    hand: 'left',
    symmetric: folded !== undefined,
    fold: folded?.id ?? null,
    role: 'main',
    turns: 'bothWays',
    grainTolerance: 0,
    note: '',
    ...given,
    edges: drawn,
    corners: drawn.map(({ id }) => ({ id: `at ${id}`, treatment: treat[id] ?? 'square' })),
    notches: notches.map(([on, distance, count = 1], i) => ({
      id: `n${i + 1}`,
      edge: on,
      distance,
      outward: false,
      count
    })),
    internalLines: lines.map((line, i) => ({ id: `l${i + 1}`, ...line })),
    drillHoles: holes.map((hole, i) => ({ id: `d${i + 1}`, ...hole })),
    grain: { from: grain[0], to: grain[1], confirmed: true }
  };
}

/** Left and right: half of the pieces each. */
export const pair = (hand: Hand, howMany = 2) => ({ howMany, paired: true, hand });

/** A rectangle with its lower left corner at the origin; grain along its length (y). */
export function strip(
  id: string,
  name: string,
  width: number,
  length: number,
  more: Partial<Drawing> = {}
): Panel {
  return panel({
    id,
    name,
    symmetric: true,
    start: at(0, 0),
    edges: [
      seam('foot', [to(width, 0)]),
      seam('side', [to(width, length)]),
      seam('head', [to(0, length)]),
      seam('other side', [to(0, 0)])
    ],
    grain: [at(width / 2, length * 0.85), at(width / 2, length * 0.15)],
    ...more
  });
}
