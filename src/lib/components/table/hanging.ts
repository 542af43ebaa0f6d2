import type { Placement } from '$lib/geometry/placement';
import type { LayDocument } from '$lib/lay/document';
import type { LoosePiece } from '$lib/lay/needs';
import { panelOf, type LayPanel, type PanelBook } from '$lib/lay/panel-book';
import { flipFor } from '$lib/lay/yields';
import type { PieceShape } from '$lib/pattern/piece-shape';

/*
 * How pieces hang on the Rail: the grain line upright, all to one scale, one hanger a piece.
 */

/** A shape as it hangs: an outline for SVG in millimetres, y downwards, its top at 0 and its middle at x = 0. */
export interface HangingShape {
  readonly outline: string;
  readonly grain: string;
  readonly width: number;
  readonly height: number;
}

const known = new WeakMap<PieceShape, { left: HangingShape; right: HangingShape }>();

function hang(shape: PieceShape, flip: boolean): HangingShape {
  // A quarter turn: the grain line's end (+x) points up.
  const f = flip ? -1 : 1;
  const turned = ({ x, y }: { x: number; y: number }): { x: number; y: number } => ({ x: -y * f, y: -x });
  const points = shape.cut.map(turned);
  const minX = Math.min(...points.map((p) => p.x));
  const maxX = Math.max(...points.map((p) => p.x));
  const minY = Math.min(...points.map((p) => p.y));
  const maxY = Math.max(...points.map((p) => p.y));
  const middle = (minX + maxX) / 2;
  const d = (p: { x: number; y: number }): string =>
    `${(p.x - middle).toFixed(1)} ${(p.y - minY).toFixed(1)}`;
  const holes = shape.cutOuts.map((hole) => `M${hole.map((p) => d(turned(p))).join('L')}Z`).join('');
  const [from, to] = [turned(shape.grain.from), turned(shape.grain.to)];
  return {
    outline: `M${points.map(d).join('L')}Z${holes}`,
    grain: `M${d(from)}L${d(to)}`,
    width: maxX - minX,
    height: maxY - minY
  };
}

/** A panel's shape as it hangs, flipped or not. */
export function hangingShape(shape: PieceShape, flip: boolean): HangingShape {
  let both = known.get(shape);
  if (!both) known.set(shape, (both = { left: hang(shape, false), right: hang(shape, true) }));
  return flip ? both.right : both.left;
}

/** One hanger: the piece, its panel and how it hangs. */
export interface Hanger {
  readonly key: string;
  readonly piece: LoosePiece;
  readonly panel: LayPanel;
  readonly shape: HangingShape;
  readonly flip: Placement['flip'];
}

/** The hangers of one garment. */
export interface HangingGarment {
  readonly id: string;
  readonly label: string;
  /** Which garment of the lay, counted from 0. */
  readonly index: number;
  readonly hangers: readonly Hanger[];
}

/** What hangs on the Rail, by garment, in the order of the lay. */
export function hangingGarments(
  document: LayDocument,
  book: PanelBook,
  loose: readonly LoosePiece[]
): HangingGarment[] {
  return document.garments.flatMap((garment, index) => {
    const counts = new Map<string, number>();
    const hangers = loose.flatMap((piece): Hanger[] => {
      if (piece.garment !== garment.id) return [];
      const panel = panelOf(book, garment, piece.panel);
      if (!panel) return [];
      const base = `${piece.garment}/${piece.panel}/${piece.hand}`;
      const nth = counts.get(base) ?? 0;
      counts.set(base, nth + 1);
      const flip = flipFor(piece.hand, panel, document.strip);
      return [{ key: `${base}/${nth}`, piece, panel, flip, shape: hangingShape(panel.shape, flip) }];
    });
    return hangers.length > 0 ? [{ id: garment.id, label: garment.label, index, hangers }] : [];
  });
}

/** The longest and the widest of all panels of the lay as they hang, in millimetres: what the one scale follows. */
export function largestHanging(book: PanelBook): number {
  return Math.max(1, ...Object.values(book).map(({ shape }) => hangingShape(shape, false).height));
}
