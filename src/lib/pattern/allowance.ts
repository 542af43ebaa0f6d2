import { offsetOutline } from '$lib/geometry/offset';
import type { CornerJoin } from '$lib/geometry/offset-corner';
import type { Point } from '$lib/geometry/point';
import type { FlatEdge } from './flat-edge';

/*
 * Seam allowances: from the sew line to the cut line, and back. What the corner treatments mean here:
 *
 * mitred    Both cut lines run on straight until they meet, at most four allowances from the corner; a sharper corner is cut off
 *           square to its middle there.
 * square    The allowance of the seam that is sewn first runs on along its own sew line and ends square to it, at the cut line of the
 *           other edge: pressed open, it lies even with the other allowance, without ears and without a gap. The seam sewn first is
 *           the one that meets a hem or an opening; between two alike, the shorter one.
 * mirrored  The allowance of the hem is the mirror image of the piece beside it, so that it lies flat once folded up along the sew
 *           line: its ends follow the image of the neighbours' cut lines. The hem is the edge of that role; of two alike, the one with the
 *           larger allowance.
 * blunt     Cut straight across, from the end of one allowance to the start of the other.
 *
 * On inward corners the cut lines simply meet, whatever the treatment; where two edges go on straight with different allowances there
 * is a step.
 */

function lengthOf({ points }: FlatEdge): number {
  return points.slice(1).reduce((sum, b, i) => sum + Math.hypot(b.x - points[i]!.x, b.y - points[i]!.y), 0);
}

/** Which of two edges a treatment concerns; ties go the way the panel was drawn, so that a mirror image comes out as one. */
function chosen(before: FlatEdge, after: FlatEdge, preference: number): 'before' | 'after' {
  if (Math.abs(preference) > 1e-6) return preference > 0 ? 'before' : 'after';
  return after.mirrored && before.mirrored ? 'after' : 'before';
}

function cornerJoin(before: FlatEdge, after: FlatEdge): CornerJoin {
  // The image of a corner starts the edge before it in the drawing: its treatment was carried over when the fold was opened.
  const { treatment } = after;
  const isHem = (edge: FlatEdge) => Number(edge.role === 'hem');
  const isSeam = (edge: FlatEdge) => Number(edge.role === 'seam');
  switch (treatment) {
    case 'mitred':
    case 'blunt':
      return { kind: treatment };
    case 'square': {
      const seam = isSeam(before) - isSeam(after);
      return { kind: 'square', edge: chosen(before, after, seam || lengthOf(after) - lengthOf(before)) };
    }
    case 'mirrored': {
      const hem = isHem(before) - isHem(after);
      return { kind: 'mirrored', edge: chosen(before, after, hem || before.allowance - after.allowance) };
    }
  }
}

/**
 * The cut line round a sew line: simple, counter-clockwise, on the grid. Each edge has its own allowance; bays narrower than the
 * allowances on both sides are closed.
 */
export function cutLine(edges: readonly FlatEdge[]): Point[] {
  const cut = offsetOutline(
    edges.map((edge, i) => ({
      points: edge.points,
      distance: edge.allowance,
      corner: cornerJoin(edges[(i + edges.length - 1) % edges.length]!, edge)
    }))
  );
  if (!cut) throw new Error('A sew line with an area has a cut line');
  return cut;
}

/** The sew line inside a cut line; null when the allowances leave nothing. */
export function sewLineInside(edges: readonly FlatEdge[]): Point[] | null {
  return offsetOutline(
    edges.map(({ points, allowance }) => ({ points, distance: -allowance, corner: { kind: 'mitred' } }))
  );
}
