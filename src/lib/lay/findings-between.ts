import { clearBy, outlineDistance } from '$lib/geometry/distance';
import { BoxIndex } from '$lib/geometry/neighbours';
import { overlapDepth, type Depth } from '$lib/geometry/overlap';
import { overlapRegion } from '$lib/geometry/overlap-region';
import type { Box } from '$lib/geometry/point';
import { boundingBox } from '$lib/geometry/polygon';
import { outlineOf } from '$lib/geometry/prepared';
import { TOUCHING } from '$lib/geometry/tolerance';
import type { LayDocument } from './document';
import type { PanelBook } from './panel-book';
import type { PlacedPiece } from './placed';
import type { Finding } from './verdict';
import { millimetres, nameOf } from './wording';

/** How short of the clearance two pieces may lie before it counts: clearances are exact to this. */
export const CLEARANCE_SLACK = 0.01;

/**
 * So many findings between pieces are listed, no more: a heap of thousands of pieces on one place must not hold up the
 * server, and one finding is enough to stop a release. The next ones show once these are mended.
 */
export const MOST_BETWEEN = 500;

/** What is wrong between two pieces: they overlap, or lie nearer than the clearance. */
export function findingsBetween(
  document: LayDocument,
  book: PanelBook,
  placed: readonly PlacedPiece[]
): Finding[] {
  const { clearance } = document.strip;
  const least = clearance - CLEARANCE_SLACK;
  const findings: Finding[] = [];
  const boxes = placed.map(({ outline }) => outline.box);
  const index = new BoxIndex(boxes);
  for (const [i, a] of placed.entries())
    for (const j of index.near(boxes[i]!, clearance)) {
      if (j <= i) continue;
      const b = placed[j]!;
      if (least > 0 && clearBy(a.outline, b.outline, least)) continue;
      const depth = overlapDepth(a.outline, b.outline);
      if (depth.depth > TOUCHING) findings.push(overlap(document, book, a, b, depth));
      else if (least > 0) findings.push(tooNear(document, book, a, b));
      if (findings.length >= MOST_BETWEEN) return findings;
    }
  return findings;
}

function boxAround(a: PlacedPiece, b: PlacedPiece): Box {
  return boundingBox([a, b].flatMap(({ outline: { box } }) => corners(box)));
}

function corners({ minX, minY, maxX, maxY }: Box): { x: number; y: number }[] {
  return [
    { x: minX, y: minY },
    { x: maxX, y: maxY }
  ];
}

function overlap(
  document: LayDocument,
  book: PanelBook,
  a: PlacedPiece,
  b: PlacedPiece,
  { depth, at }: Depth
): Finding {
  const { region, area } = overlapRegion(outlineOf(a.outline), outlineOf(b.outline));
  return {
    kind: 'overlap',
    severity: 'stops',
    placements: [a.placement.id, b.placement.id],
    subject: null,
    measure: { value: depth, unit: 'mm' },
    place: at,
    region,
    area,
    box: region.length > 0 ? boundingBox(region.flat()) : boxAround(a, b),
    message: `${nameOf(document, book, a.placement)} and ${nameOf(document, book, b.placement)} overlap by ${millimetres(depth)}.`
  };
}

function tooNear(document: LayDocument, book: PanelBook, a: PlacedPiece, b: PlacedPiece): Finding {
  const { clearance } = document.strip;
  const { distance, from, to } = outlineDistance(a.outline, b.outline);
  return {
    kind: 'clearance',
    severity: 'stops',
    placements: [a.placement.id, b.placement.id],
    subject: null,
    measure: { value: clearance - distance, unit: 'mm' },
    place: { x: (from.x + to.x) / 2, y: (from.y + to.y) / 2 },
    region: [],
    area: null,
    box: boundingBox([from, to]),
    message: `${nameOf(document, book, a.placement)} and ${nameOf(document, book, b.placement)} lie ${millimetres(distance)} apart, ${millimetres(clearance - distance)} short of the clearance of ${millimetres(clearance)}.`
  };
}
