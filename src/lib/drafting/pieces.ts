import { endOf, flatten, pathLength, placeAt, reversed, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { area } from '$lib/geometry/polygon';
import type { ClothRole, Corner, Edge, Hand, Panel, TurnSet } from '$lib/pattern/panel';
import type { Millimetres } from '$lib/units/measure';
import type { Seam, SeamSide } from './seam-walk';

/*
 * From the lines of a construction to panels and the seams between them. Drawn with y down, as on the paper; panels have y up
 * and run counter-clockwise, and turning them round is done here, once.
 */

/** Seam allowance where a draft says nothing else. */
export const SEAM: Millimetres = 10;
/** Cloth left for letting out, at side and centre back. */
export const INLAY: Millimetres = 25;

/** One edge of a piece as it was drawn. */
export interface DrawnEdge {
  readonly id: string;
  readonly path: Path;
  /** The outline runs along the path from its end to its start. */
  readonly backward?: boolean;
  readonly allowance?: Millimetres;
  readonly role?: Edge['role'];
  /** Notches at distances from the start of the path as drawn. */
  readonly notches?: readonly Millimetres[];
  /** How the allowances meet where the outline comes onto this edge. */
  readonly corner?: Corner['treatment'];
}

export interface DrawnPiece {
  readonly id: string;
  readonly name: string;
  /** Around the outline in order; each starts where the one before it ends. */
  readonly edges: readonly DrawnEdge[];
  /** The grain line as drawn. */
  readonly grain: readonly [Point, Point];
  /** The hand of the piece as drawn, right side towards the viewer; only pieces of a pair have one. */
  readonly hand?: Hand;
  /** left and right, one of each; else one piece that is its own mirror image (on the fold, or symmetric as drawn). */
  readonly paired?: boolean;
  readonly fold?: string;
  readonly howMany?: number;
  readonly symmetric?: boolean;
  readonly role?: ClothRole;
  readonly turns?: TurnSet;
  readonly grainTolerance?: number;
  readonly lines?: readonly { readonly path: Path; readonly note: string }[];
  readonly drills?: readonly { readonly at: Point; readonly note: string }[];
  readonly matchPoints?: readonly {
    readonly name: string;
    readonly edge: string;
    readonly distance: Millimetres;
  }[];
  readonly note?: string;
}

/** Ends of edges this near are one corner. */
const SAME = 0.02;

const up = ({ x, y }: Point): Point => ({ x: tidy(x), y: tidy(-y) });
/** Far below the grid of the product, and no −0. */
const tidy = (v: number): number => Math.round(v * 1e6) / 1e6 + 0;

const upPath = (path: Path): Path => ({
  from: up(path.from),
  segments: path.segments.map((segment) =>
    segment.kind === 'line'
      ? { kind: 'line', to: up(segment.to) }
      : { kind: 'cubic', c1: up(segment.c1), c2: up(segment.c2), to: up(segment.to) }
  )
});

/** Collects the pieces of a draft and its seams. */
export class Pieces {
  readonly #drawn = new Map<string, DrawnPiece>();
  readonly #panels = new Map<string, Panel>();
  readonly #backward = new Map<string, boolean>();
  readonly #seams: Seam[] = [];

  /**
   * Adds a piece. @throws RangeError when its edges don't meet: a fault of the draft, never of the measurements.
   */
  piece(drawn: DrawnPiece): Panel {
    const runs = drawn.edges.map((edge) => ({
      edge,
      path: edge.backward ? reversed(edge.path) : edge.path
    }));
    runs.forEach(({ edge, path }, i) => {
      const next = runs[(i + 1) % runs.length]!;
      const gap = Math.hypot(endOf(path).x - next.path.from.x, endOf(path).y - next.path.from.y);
      if (gap > SAME)
        throw new RangeError(
          `${drawn.id}: edge ${edge.id} ends ${gap.toFixed(3)} mm from where ${next.edge.id} starts`
        );
    });
    // Clockwise on the paper is counter-clockwise once y points up.
    const outline = runs.flatMap(({ path }) => flatten(upPath(path)).slice(0, -1));
    const turnRound = area(outline) < 0;
    const ordered = turnRound
      ? runs.map(({ edge, path }) => ({ edge, path: reversed(path) })).reverse()
      : runs;
    const starts = ordered.map(({ path }) => up(path.from));
    const edges: Edge[] = ordered.map(({ edge, path }, i) => {
      const placed = upPath(path);
      const end = starts[(i + 1) % ordered.length]!;
      const segments = placed.segments.map((segment, k) =>
        k === placed.segments.length - 1 ? { ...segment, to: end } : segment
      );
      return {
        id: edge.id,
        from: starts[i]!,
        segments,
        allowance: edge.id === drawn.fold ? 0 : (edge.allowance ?? SEAM),
        role: edge.id === drawn.fold ? 'fold' : (edge.role ?? 'seam')
      };
    });
    for (const { edge } of runs)
      this.#backward.set(`${drawn.id}/${edge.id}`, (edge.backward ?? false) !== turnRound);
    const notchesOf = (edge: DrawnEdge) => {
      const length = pathLength(edge.path);
      const reverse = this.#backward.get(`${drawn.id}/${edge.id}`)!;
      return (edge.notches ?? []).map((distance, k) => ({
        id: `${edge.id}-notch-${k + 1}`,
        edge: edge.id,
        distance: tidy(Math.min(length, Math.max(0, reverse ? length - distance : distance))),
        outward: false,
        count: 1
      }));
    };
    const paired = drawn.paired ?? false;
    const panel: Panel = {
      id: drawn.id,
      name: drawn.name,
      drawn: 'sew',
      edges,
      corners: ordered.map((_, i) => ({
        id: `corner-${i + 1}`,
        treatment: cornerOf(ordered, i, turnRound) ?? 'mitred'
      })),
      cutOuts: [],
      notches: drawn.edges.flatMap(notchesOf),
      drillHoles: (drawn.drills ?? []).map(({ at, note }, k) => ({ id: `drill-${k + 1}`, at: up(at), note })),
      internalLines: (drawn.lines ?? []).map(({ path, note }, k) => ({
        id: `line-${k + 1}`,
        path: upPath(path) as Panel['internalLines'][number]['path'],
        note
      })),
      grain: { from: up(drawn.grain[0]), to: up(drawn.grain[1]), confirmed: true },
      matchPoints: (drawn.matchPoints ?? []).map(({ name, edge, distance }, k) => {
        const path = drawn.edges.find(({ id }) => id === edge)!.path;
        const reverse = this.#backward.get(`${drawn.id}/${edge}`)!;
        return {
          id: `match-${k + 1}`,
          name,
          edge,
          distance: tidy(reverse ? pathLength(path) - distance : distance)
        };
      }),
      howMany: drawn.howMany ?? (paired ? 2 : 1),
      paired,
      hand: drawn.hand ?? 'left',
      symmetric: drawn.fold !== undefined || (drawn.symmetric ?? false),
      fold: drawn.fold ?? null,
      role: drawn.role ?? 'main',
      turns: drawn.turns ?? 'bothWays',
      grainTolerance: drawn.grainTolerance ?? 0,
      note: drawn.note ?? ''
    };
    this.#drawn.set(drawn.id, drawn);
    this.#panels.set(drawn.id, panel);
    return panel;
  }

  /**
   * A seam: edges of one piece against edges of another (or of the same), each list from the same end of the seam, edges
   * taken in the direction in which they were drawn; '-id' takes one against it.
   */
  seam(
    name: string,
    a: readonly [piece: string, ...edges: string[]],
    b: readonly [piece: string, ...edges: string[]],
    more: Partial<Pick<Seam, 'ease' | 'smooth' | 'gathered'>> = {}
  ): void {
    this.#seams.push({
      name,
      a: this.#side(a),
      b: this.#side(b),
      ease: more.ease ?? 0,
      smooth: more.smooth ?? [],
      gathered: more.gathered ?? false
    });
  }

  #side([piece, ...edges]: readonly [string, ...string[]]): SeamSide {
    return {
      panel: piece,
      edges: edges.map((name) => {
        const against = name.startsWith('-');
        const edge = against ? name.slice(1) : name;
        const backward = this.#backward.get(`${piece}/${edge}`);
        if (backward === undefined) throw new RangeError(`There is no edge ${edge} of ${piece}`);
        return { edge, reversed: backward !== against };
      })
    };
  }

  /** The path of an edge as it was drawn. */
  path(piece: string, edge: string): Path {
    return this.#drawn.get(piece)!.edges.find(({ id }) => id === edge)!.path;
  }

  get panels(): readonly Panel[] {
    return [...this.#panels.values()];
  }
  get seams(): readonly Seam[] {
    return this.#seams;
  }
}

/** A corner's treatment stands with the edge that the drawn outline comes onto there; turned round, with the one before. */
function cornerOf(
  ordered: readonly { readonly edge: DrawnEdge }[],
  i: number,
  turnRound: boolean
): Corner['treatment'] | undefined {
  const n = ordered.length;
  return ordered[turnRound ? (i + n - 1) % n : i]!.edge.corner;
}

/** A notch's place on paper, for marks that other pieces share. */
export const placeOn = (path: Path, distance: Millimetres): Point => placeAt(path, distance).point;
