import type { Outline, Point } from '$lib/geometry/point';
import type { Hand } from './panel';

/**
 * A panel resolved for the table: everything flattened, allowances added, the fold opened, turned so that the
 * grain line points along +x and moved nowhere else (the panel's origin stays the piece's origin). Every
 * coordinate is on the 0.001 mm grid. `cut` *is* the piece for table, check, settle, area and guide.
 */
export interface PieceShape {
  readonly panel: string;
  readonly name: string;
  /** The hand of the shape as it stands here, unflipped, right side of the cloth up. */
  readonly hand: Hand;
  /** Whether the mirrored shape is the same piece, so that a flip is free on any cloth. */
  readonly symmetric: boolean;
  readonly cut: Outline;
  readonly sew: Outline;
  /** Outlines inside `cut` that are cut out; counter-clockwise. */
  readonly cutOuts: readonly Outline[];
  /** Each a stroke from the sew line square to the cut edge, `from` on the sew line. */
  readonly notches: readonly { readonly from: Point; readonly to: Point; readonly outward: boolean }[];
  readonly drillHoles: readonly { readonly at: Point; readonly note: string }[];
  readonly internalLines: readonly { readonly points: readonly Point[]; readonly note: string }[];
  /** The grain line in the piece, from → to along +x. */
  readonly grain: { readonly from: Point; readonly to: Point };
  readonly matchPoints: readonly { readonly id: string; readonly name: string; readonly at: Point }[];
  /** A place well inside the piece, for its label. */
  readonly label: Point;
  /** The straight line on which the fold of the panel lay, once opened; null when the panel had none. */
  readonly foldLine: { readonly from: Point; readonly to: Point } | null;
}
