import { endTangents, pathLength, reversed, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { edgePath } from '$lib/pattern/flat-edge';
import type { Panel } from '$lib/pattern/panel';
import type { Degrees, Millimetres } from '$lib/units/measure';

/*
 * Walking a seam: both edges followed along their sew lines from one end to the other, as a pattern maker walks paper along paper.
 */

/** One side of a seam: edges of one panel, from the start of the seam to its end. */
export interface SeamSide {
  readonly panel: string;
  readonly edges: readonly {
    readonly edge: string;
    /** The seam follows the edge against the direction of the panel's outline. */
    readonly reversed: boolean;
  }[];
}

export interface Seam {
  readonly name: string;
  readonly a: SeamSide;
  readonly b: SeamSide;
  /** How much longer b is meant to be: eased or gathered into a. */
  readonly ease: Millimetres;
  /** b is gathered: its notches stand in proportion. */
  readonly gathered: boolean;
  /** Ends at which the outlines beside the seam go on without a corner once it is sewn. */
  readonly smooth: readonly ('start' | 'end')[];
}

/**
 * What a seam may differ by: 1/16 inch, to which a pattern maker holds her patterns (Threads Magazine no. 200, 2018/19, "10
 * Patternwork Skills").
 */
export const SEAM_TOLERANCE: Millimetres = 1.6;
/** A quarter inch off is a fault in the trade (fashion-incubator, 2013): from here on a seam does not go together. */
export const SEAM_FAULT: Millimetres = 6;
/** How far from straight an outline may run on across a seam. Our own measure: a corner less than this can't be seen. */
export const SMOOTH_TOLERANCE: Degrees = 3;

export interface WalkedNotch {
  /** Distances from the start of the seam. */
  readonly a: Millimetres;
  readonly b: Millimetres;
  /** How far apart they come to lie, ease taken off. */
  readonly off: Millimetres;
}

export interface SeamWalk {
  readonly seam: Seam;
  readonly lengthA: Millimetres;
  readonly lengthB: Millimetres;
  /** How much longer b is than it should be beside a; negative: shorter. */
  readonly difference: Millimetres;
  readonly notches: readonly WalkedNotch[];
  /** How many notches one side has that the other has not; positive: more on a. */
  readonly unmatchedNotches: number;
  /** Angle of the finished outline at each end: 180 is straight on; null where a fold or no corner is. */
  readonly angles: { readonly start: Degrees | null; readonly end: Degrees | null };
  readonly findings: readonly SeamFinding[];
}

export interface SeamFinding {
  readonly kind: 'length' | 'notch' | 'notch-count' | 'corner';
  /** `fault`: it will not go together; `look`: worth a look. */
  readonly weight: 'fault' | 'look';
  readonly measure: number;
  readonly message: string;
}

/**
 * The sew lines of one side in order, from the start of the seam to its end; between them lie darts, closed when it is sewn.
 * @throws RangeError for an edge that is not there.
 */
export function sidePaths(panels: readonly Panel[], side: SeamSide): Path[] {
  if (side.edges.length === 0) throw new RangeError(`A seam of ${side.panel} has no edges`);
  return side.edges.map(({ edge, reversed: against }) => {
    const path = edgePath(edgeOf(panelOf(panels, side.panel), edge), (p) => p);
    return against ? reversed(path) : path;
  });
}

/** How long one side of a seam is. */
export function sideLength(panels: readonly Panel[], side: SeamSide): Millimetres {
  return sidePaths(panels, side).reduce((sum, path) => sum + pathLength(path), 0);
}

/** Walks one seam of `panels`. */
export function walkSeam(panels: readonly Panel[], seam: Seam): SeamWalk {
  const lengthA = sideLength(panels, seam.a);
  const lengthB = sideLength(panels, seam.b);
  const difference = lengthB - lengthA - seam.ease;
  const onA = notchesOf(panels, seam.a);
  const onB = notchesOf(panels, seam.b);
  const notches = onA.slice(0, onB.length).map((a, i): WalkedNotch => {
    const b = onB[i]!;
    // Eased in somewhere between two notches, up to all of it; gathered evenly.
    const off = seam.gathered
      ? (b * lengthA) / lengthB - a
      : seam.ease >= 0
        ? Math.max(0, b - a - seam.ease) || Math.min(0, b - a)
        : Math.min(0, b - a - seam.ease) || Math.max(0, b - a);
    return { a, b, off };
  });
  const unmatchedNotches = onA.length - onB.length;
  const angles = {
    start: cornerSum(panels, seam, 'start'),
    end: cornerSum(panels, seam, 'end')
  };
  return {
    seam,
    lengthA,
    lengthB,
    difference,
    notches,
    unmatchedNotches,
    angles,
    findings: [
      ...lengthFindings(seam, difference),
      ...notches.filter(({ off }) => Math.abs(off) > SEAM_TOLERANCE).map((one) => notchFinding(seam, one)),
      ...(unmatchedNotches === 0 || onA.length === 0 || onB.length === 0
        ? []
        : [
            {
              kind: 'notch-count' as const,
              weight: 'look' as const,
              measure: unmatchedNotches,
              message: `${seam.name}: ${onA.length} notches on one side, ${onB.length} on the other.`
            }
          ]),
      ...seam.smooth.flatMap((end) => cornerFindings(seam, end, angles[end]))
    ]
  };
}

function lengthFindings(seam: Seam, difference: number): SeamFinding[] {
  const off = Math.abs(difference);
  if (off <= SEAM_TOLERANCE) return [];
  return [
    {
      kind: 'length',
      weight: off > SEAM_FAULT ? 'fault' : 'look',
      measure: difference,
      message: `${seam.name}: ${seam.b.panel} is ${both(off)} ${difference > 0 ? 'longer' : 'shorter'} than ${seam.a.panel}${seam.ease === 0 ? '' : ` with its ease of ${both(seam.ease)}`}.`
    }
  ];
}

const notchFinding = (seam: Seam, { off }: WalkedNotch): SeamFinding => ({
  kind: 'notch',
  weight: Math.abs(off) > SEAM_FAULT ? 'fault' : 'look',
  measure: off,
  message: `${seam.name}: two notches miss each other by ${both(Math.abs(off))}.`
});

function cornerFindings(seam: Seam, end: 'start' | 'end', angle: Degrees | null): SeamFinding[] {
  if (angle === null || Math.abs(angle - 180) <= SMOOTH_TOLERANCE) return [];
  return [
    {
      kind: 'corner',
      weight: 'look',
      measure: angle - 180,
      message: `${seam.name}: at its ${end} the sewn edge makes a corner of ${angle.toFixed(1)}° instead of running straight on.`
    }
  ];
}

/** 3.2 mm (1/8 in) */
const both = (mm: number): string => {
  const sixteenths = Math.round((Math.abs(mm) / 25.4) * 16);
  const divisor = [16, 8, 4, 2].find((k) => sixteenths % k === 0) ?? 1;
  const inches =
    sixteenths === 0
      ? 'under 1/16 in'
      : sixteenths % 16 === 0
        ? `${sixteenths / 16} in`
        : `${sixteenths > 16 ? `${Math.floor(sixteenths / 16)} ` : ''}${(sixteenths % 16) / divisor}/${16 / divisor} in`;
  return `${mm.toFixed(1)} mm (${inches})`;
};

function panelOf(panels: readonly Panel[], id: string): Panel {
  const panel = panels.find((one) => one.id === id);
  if (!panel) throw new RangeError(`There is no panel ${id}`);
  return panel;
}

function edgeOf(panel: Panel, id: string): Panel['edges'][number] {
  const edge = panel.edges.find((one) => one.id === id);
  if (!edge) throw new RangeError(`There is no edge ${id} of ${panel.name}`);
  return edge;
}

/** Notches along a side, as distances from the start of the seam. */
function notchesOf(panels: readonly Panel[], side: SeamSide): Millimetres[] {
  const panel = panelOf(panels, side.panel);
  const found: Millimetres[] = [];
  let before = 0;
  for (const { edge, reversed: against } of side.edges) {
    const length = pathLength(edgePath(edgeOf(panel, edge), (p) => p));
    for (const notch of panel.notches)
      if (notch.edge === edge) found.push(before + (against ? length - notch.distance : notch.distance));
    before += length;
  }
  return found.sort((a, b) => a - b);
}

/** The angles of both panels at one end of the seam, added up: what the outline does there once it is sewn. */
function cornerSum(panels: readonly Panel[], seam: Seam, end: 'start' | 'end'): Degrees | null {
  const a = cornerAngle(panels, seam.a, end);
  const b = cornerAngle(panels, seam.b, end);
  return a === null || b === null ? null : a + b;
}

/** The angle inside the panel between the seam and the edge beside it; null beside a fold. */
function cornerAngle(panels: readonly Panel[], side: SeamSide, end: 'start' | 'end'): Degrees | null {
  const panel = panelOf(panels, side.panel);
  const one = side.edges[end === 'start' ? 0 : side.edges.length - 1]!;
  const index = panel.edges.findIndex(({ id }) => id === one.edge);
  const n = panel.edges.length;
  // The corner lies at the start of the panel's edge where the seam starts with it, or ends against it.
  const atStart = (end === 'start') !== one.reversed;
  const into = panel.edges[atStart ? (index + n - 1) % n : index]!;
  const out = panel.edges[atStart ? index : (index + 1) % n]!;
  if (n < 2 || into.role === 'fold' || out.role === 'fold') return null;
  const arriving = endTangents(edgePath(into, (p) => p)).end;
  const leaving = endTangents(edgePath(out, (p) => p)).start;
  return 180 - turnOf(arriving, leaving);
}

/** Left turn from one direction to the other, degrees. */
function turnOf(a: Point, b: Point): Degrees {
  return (Math.atan2(a.x * b.y - a.y * b.x, a.x * b.x + a.y * b.y) * 180) / Math.PI;
}
