import { endOf, flatten, FLATNESS, pathLength } from '$lib/geometry/path';
import type { Outline, Point } from '$lib/geometry/point';
import { area, isSimple, locate, selfCrossings, withoutRepeats } from '$lib/geometry/polygon';
import { distanceToOutline } from '$lib/geometry/outline-distance';
import { cutLine, sewLineInside } from './allowance';
import { edgePath, flatEdges, outlineOfEdges, type FlatEdge } from './flat-edge';
import { FOLD_OFF_GRAIN, foldDirection, grainDirection } from './grain';
import type { Panel } from './panel';
import type { PanelFaultKind, PanelFinding } from './panel-fault';

const asDrawn = (point: Point): Point => point;

/** Millimetres for a message: two decimals at most. */
const mm = (value: number): string => `${Math.round(value * 100) / 100} mm`;

const stop = (kind: PanelFaultKind, place: Point | null, message: string): PanelFinding => ({
  kind,
  severity: 'stops',
  place,
  message
});
const warn = (kind: PanelFaultKind, place: Point | null, message: string): PanelFinding => ({
  kind,
  severity: 'warns',
  place,
  message
});

/** The middle of a polyline's points, near enough to show where it is. */
const middleOf = (points: readonly Point[]): Point => points[Math.floor(points.length / 2)]!;

/**
 * Everything that is wrong with a panel, what stops first; places in the panel's own coordinates. A panel with no finding that stops can
 * be resolved.
 */
export function panelFindings(panel: Panel): PanelFinding[] {
  const edges = flatEdges(panel, asDrawn);
  const outline = outlineOfEdges(edges);
  const shape = outlineFindings(edges, outline);
  const found = [...shape, ...grainFindings(panel, edges), ...placeFindings(panel)];
  // Allowances and cut-outs can only be judged against an outline that holds.
  if (shape.length === 0) found.push(...cutOutFindings(panel, outline), ...allowanceFindings(panel, edges));
  return [
    ...found.filter(({ severity }) => severity === 'stops'),
    ...found.filter(({ severity }) => severity === 'warns')
  ];
}

function outlineFindings(edges: readonly FlatEdge[], outline: Outline): PanelFinding[] {
  const short = edges.find((edge) => edge.points.length < 2);
  if (short)
    return [stop('edge-without-length', short.points[0]!, `Edge ${short.id} has no length: remove it.`)];
  const crossings = selfCrossings(outline, 20);
  if (crossings.length > 0)
    return crossings.map(({ at }) =>
      stop('crosses-itself', at, `The outline crosses or touches itself at (${mm(at.x)}, ${mm(at.y)}).`)
    );
  const size = area(outline);
  if (withoutRepeats(outline).length < 3 || Math.abs(size) < 1)
    return [
      stop(
        'no-area',
        outline[0] ?? null,
        `The outline encloses ${Math.abs(size).toFixed(2)} mm², next to nothing.`
      )
    ];
  if (size < 0)
    return [stop('clockwise', null, 'The outline runs clockwise; panels are kept counter-clockwise.')];
  return [];
}

function grainFindings(panel: Panel, edges: readonly FlatEdge[]): PanelFinding[] {
  const found: PanelFinding[] = [];
  if (!grainDirection(panel))
    found.push(
      stop('grain-without-length', panel.grain.from, 'The grain line has no length: draw it longer.')
    );
  if (panel.fold === null) return found;
  const edge = edges.find(({ id }) => id === panel.fold)!;
  const [a, b] = [edge.points[0]!, edge.points[edge.points.length - 1]!];
  if (edges.length < 2)
    return [stop('fold-not-straight', a, 'A panel needs more edges than the one on the fold.')];
  const length = Math.hypot(b.x - a.x, b.y - a.y);
  let worst = a;
  let off = length < 0.001 ? Infinity : 0;
  for (const p of edge.points) {
    const away = Math.abs((b.x - a.x) * (p.y - a.y) - (b.y - a.y) * (p.x - a.x)) / length;
    if (away > off) [worst, off] = [p, away];
  }
  if (off > FLATNESS)
    found.push(
      stop(
        'fold-not-straight',
        worst,
        `The edge on the fold leaves the straight line by ${mm(off)}; a fold is straight.`
      )
    );
  const turned = foldDirection(panel);
  if (turned && turned.off > FOLD_OFF_GRAIN)
    found.push(
      stop(
        'fold-off-grain',
        { x: (a.x + b.x) / 2, y: (a.y + b.y) / 2 },
        `The edge on the fold lies ${turned.off.toFixed(2)}° off the grain line; a fold runs along the grain.`
      )
    );
  // The half must lie on one side of its fold, or its two images would overlap.
  const left = (p: Point) => ((b.x - a.x) * (p.y - a.y) - (b.y - a.y) * (p.x - a.x)) / length;
  const beyond = outlineOfEdges(edges).reduce((low, p) => (left(p) < left(low) ? p : low));
  if (off <= FLATNESS && left(beyond) < -FLATNESS)
    found.push(
      stop('fold-crossed', beyond, `The panel reaches ${mm(-left(beyond))} beyond the line of its own fold.`)
    );
  return found;
}

function placeFindings(panel: Panel): PanelFinding[] {
  const lengths = new Map(panel.edges.map((edge) => [edge.id, pathLength(edgePath(edge, asDrawn))]));
  const ends = new Map(panel.edges.map((edge) => [edge.id, endOf(edgePath(edge, asDrawn))]));
  const past = (what: string, kind: PanelFaultKind, edge: string, distance: number) =>
    distance > lengths.get(edge)! + 0.05
      ? [
          stop(
            kind,
            ends.get(edge)!,
            `The ${what} at ${mm(distance)} is past the end of edge ${edge}, which is ${mm(lengths.get(edge)!)} long.`
          )
        ]
      : [];
  return [
    ...panel.notches.flatMap((notch) => past('notch', 'notch-past-end', notch.edge, notch.distance)),
    ...panel.matchPoints.flatMap((point) =>
      past(`match point ${point.name}`, 'match-point-past-end', point.edge, point.distance)
    )
  ];
}

function cutOutFindings(panel: Panel, outline: Outline): PanelFinding[] {
  return panel.cutOuts.flatMap((path): PanelFinding[] => {
    const end = endOf(path);
    const gap = Math.hypot(end.x - path.from.x, end.y - path.from.y);
    if (gap > 0.01)
      return [stop('cut-out-unclosed', end, `A cut-out is not closed: its ends are ${mm(gap)} apart.`)];
    const ring = withoutRepeats(flatten(path));
    if (!isSimple(ring))
      return [
        stop(
          'cut-out-crosses-itself',
          selfCrossings(ring, 1)[0]?.at ?? path.from,
          'A cut-out crosses itself or has no area.'
        )
      ];
    const outside = ring.find(
      (p) => locate(outline, p) === 'outside' && distanceToOutline(outline, p) > FLATNESS
    );
    return outside ? [stop('cut-out-outside', outside, 'A cut-out reaches outside its panel.')] : [];
  });
}

/** A cut line that falls short of an allowance by more than this has lost it; rounding to the grid stays far below. */
const LOST = 0.01;

/** For each straight run of an edge its start, and the place beside its middle at the edge's allowance. */
function middlesBeside({ points, allowance }: FlatEdge): { a: Point; p: Point }[] {
  return points.slice(1).map((b, i) => {
    const a = points[i]!;
    const length = Math.hypot(b.x - a.x, b.y - a.y);
    return {
      a,
      p: {
        x: (a.x + b.x) / 2 + ((b.y - a.y) / length) * allowance,
        y: (a.y + b.y) / 2 - ((b.x - a.x) / length) * allowance
      }
    };
  });
}

function allowanceFindings(panel: Panel, edges: readonly FlatEdge[]): PanelFinding[] {
  if (edges.every(({ allowance }) => allowance === 0)) return [];
  if (panel.drawn === 'cut') {
    if (sewLineInside(edges)) return [];
    return [stop('allowance-eats-panel', null, 'The allowances leave no sew line inside this cut line.')];
  }
  const cut = cutLine(edges);
  return edges.flatMap((edge, e): PanelFinding[] => {
    const middles = middlesBeside(edge);
    // Square and blunt corners only add to the strips; a strip that is not all inside has been lost.
    const onlyAdds = [edge, edges[(e + 1) % edges.length]!].every(
      ({ treatment }) => treatment === 'square' || treatment === 'blunt'
    );
    const lost = onlyAdds
      ? middles
          .filter(({ p }) => locate(cut, p) === 'outside')
          .map(({ a, p }) => ({ a, short: distanceToOutline(cut, p) }))
          .reduce((most, one) => (one.short > most.short ? one : most), { a: edge.points[0]!, short: 0 })
      : null;
    if (lost && lost.short > LOST)
      return [
        stop(
          'allowance-lost',
          lost.a,
          `The allowance of edge ${edge.id} (${mm(edge.allowance)}) can't be drawn here beside those of its neighbours: ${mm(lost.short)} of it would be missing. Make it smaller or choose mitred corners.`
        )
      ];
    const closed = middles.flatMap(({ a, p }) => {
      // The middle of the allowance's own line lies deep in the piece: another allowance runs over it.
      return locate(cut, p) === 'inside' && distanceToOutline(cut, p) > Math.max(1, edge.allowance / 4)
        ? [a]
        : [];
    });
    if (closed.length === 0) return [];
    return [
      warn(
        'allowance-closes-bay',
        middleOf(closed),
        `The allowance of edge ${edge.id} (${mm(edge.allowance)}) runs into that of another edge here; the cut line closes the gap.`
      )
    ];
  });
}
