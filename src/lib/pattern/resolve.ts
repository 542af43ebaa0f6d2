import { innermost } from '$lib/geometry/label';
import { flatten, mapPath, pathLength, placeAt, type Path } from '$lib/geometry/path';
import { snapPoint, type Outline, type Point } from '$lib/geometry/point';
import { counterClockwise, withoutRepeats } from '$lib/geometry/polygon';
import { cutLine, sewLineInside } from './allowance';
import { edgePath, flatEdges, outlineOfEdges, type FlatEdge } from './flat-edge';
import { across, layFold, openFold, openOutline, type FoldLine } from './fold';
import { ontoGrain } from './grain';
import { notchStrokes } from './notch';
import type { Panel } from './panel';
import { panelFindings } from './panel-check';
import { PanelFault } from './panel-fault';
import type { PieceShape } from './piece-shape';

/** Two marks nearer than this are one: a mark on the fold and its image. */
const SAME_PLACE = 0.01;

const apart = (a: Point, b: Point): number => Math.hypot(a.x - b.x, a.y - b.y);

/**
 * The piece that a panel gives: grain along +x, fold opened, curves flattened within 0.05 mm, allowances added, all on the 0.001 mm grid.
 * Throws PanelFault with the place and measure of what makes it impossible (`panelFindings` lists all of it beforehand).
 */
export function resolvePanel(panel: Panel): PieceShape {
  const fault = panelFindings(panel).find(({ severity }) => severity === 'stops');
  if (fault) throw new PanelFault(panel.name, fault);
  const move = ontoGrain(panel);
  const half = flatEdges(panel, move);
  const laid = panel.fold === null ? null : layFold(half, panel.fold);
  const fold = laid?.fold ?? null;
  const edges = laid ? openFold(laid.edges, panel.fold!, laid.fold) : half;

  const drawn = outlineOfEdges(edges);
  const cut = panel.drawn === 'cut' ? drawn : cutLineOf(edges, drawn);
  const sew = panel.drawn === 'sew' ? drawn : sewLineOf(panel, edges, drawn);
  const cutOuts = panel.cutOuts.flatMap((path) => openedRings(mapPath(path, move), fold));
  const label = snapPoint(innermost(cut, cutOuts));
  const grain = grainOf(panel, move);
  return {
    panel: panel.id,
    name: panel.name,
    hand: panel.hand,
    symmetric: panel.symmetric,
    cut,
    sew,
    cutOuts,
    notches: both(
      notchesOf(panel, move, cut),
      fold,
      (notch) => notch.from,
      (notch, image) => ({
        ...notch,
        from: image(notch.from),
        to: image(notch.to)
      })
    ),
    drillHoles: both(
      panel.drillHoles.map(({ at, note }) => ({ at: snapPoint(move(at)), note })),
      fold,
      (hole) => hole.at,
      (hole, image) => ({ ...hole, at: image(hole.at) })
    ),
    internalLines: both(
      panel.internalLines.map(({ path, note }) => ({
        points: flatten(mapPath(path, move)).map(snapPoint),
        note
      })),
      fold,
      // A line is on the fold as a whole only; its farthest point says so.
      (line) => farthest(line.points, fold),
      (line, image) => ({ ...line, points: line.points.map(image) })
    ),
    grain,
    matchPoints: both(
      matchPointsOf(panel, move),
      fold,
      (point) => point.at,
      (point, image) => ({ ...point, id: `${point.id}-mirrored`, at: image(point.at) })
    ),
    label,
    foldLine: fold && { from: fold.from, to: fold.to }
  };
}

function cutLineOf(edges: readonly FlatEdge[], sew: Outline): Outline {
  return edges.every(({ allowance }) => allowance === 0) ? sew : cutLine(edges);
}

function sewLineOf(panel: Panel, edges: readonly FlatEdge[], cut: Outline): Outline {
  if (edges.every(({ allowance }) => allowance === 0)) return cut;
  const sew = sewLineInside(edges);
  if (sew) return sew;
  throw new PanelFault(panel.name, {
    kind: 'allowance-eats-panel',
    severity: 'stops',
    place: null,
    message: 'The allowances leave no sew line inside this cut line.'
  });
}

/** Marks of the half and, across a fold, their images; a mark on the fold has none. */
function both<Mark>(
  marks: readonly Mark[],
  fold: FoldLine | null,
  placeOf: (mark: Mark) => Point,
  mirror: (mark: Mark, image: (point: Point) => Point) => Mark
): Mark[] {
  if (!fold) return [...marks];
  const image = (point: Point) => across(fold, point);
  return marks.flatMap((mark) => {
    const place = placeOf(mark);
    return apart(place, image(place)) < SAME_PLACE ? [mark] : [mark, mirror(mark, image)];
  });
}

function farthest(points: readonly Point[], fold: FoldLine | null): Point {
  const off = (point: Point) => Math.abs(point.y - (fold?.y ?? 0));
  return points.reduce((most, point) => (off(point) > off(most) ? point : most));
}

function openedRings(path: Path, fold: FoldLine | null): Outline[] {
  const ring = withoutRepeats(flatten(path).map(snapPoint));
  const rings = fold ? openOutline(ring, fold) : [ring];
  return rings.map((one) => counterClockwise(one));
}

function notchesOf(panel: Panel, move: (point: Point) => Point, cut: Outline): PieceShape['notches'] {
  const edges = new Map(panel.edges.map((edge) => [edge.id, edge]));
  return panel.notches.flatMap((notch) => {
    const edge = edges.get(notch.edge)!;
    return notchStrokes(edgePath(edge, move), notch, edge.allowance, panel.drawn, cut);
  });
}

function matchPointsOf(panel: Panel, move: (point: Point) => Point): PieceShape['matchPoints'] {
  const edges = new Map(panel.edges.map((edge) => [edge.id, edge]));
  return panel.matchPoints.map(({ id, name, edge, distance }) => {
    const path = edgePath(edges.get(edge)!, move);
    return { id, name, at: snapPoint(placeAt(path, Math.min(distance, pathLength(path))).point) };
  });
}

/** The grain line, exactly level: on a panel turned by its fold it may be drawn a hundredth of a degree off. */
function grainOf(panel: Panel, move: (point: Point) => Point): PieceShape['grain'] {
  const from = snapPoint(move(panel.grain.from));
  const to = snapPoint(move(panel.grain.to));
  return { from, to: { x: to.x, y: from.y } };
}
