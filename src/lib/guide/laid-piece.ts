import { place, placeOutline, type Placement } from '$lib/geometry/placement';
import type { Box, Outline, Point } from '$lib/geometry/point';
import { boundingBox } from '$lib/geometry/polygon';
import type { LayDocument } from '$lib/lay/document';
import { panelOf, type LayPanel, type PanelBook } from '$lib/lay/panel-book';
import { foldUnder, laidShape } from '$lib/lay/on-fold';
import { laidHand, yieldCount, type LaidHand } from '$lib/lay/yields';
import { halfShape } from '$lib/pattern/half';
import type { PieceShape } from '$lib/pattern/piece-shape';
import type { Millimetres } from '$lib/units/measure';

/*
 * The pieces of a revision as they lie on the cloth, with everything that the cutter marks on them.
 */

/** A notch: where it stands on the sew line, where it meets the cut edge, and how far the snip goes. */
export interface LaidNotch {
  readonly sew: Point;
  readonly edge: Point;
  /** Where the snip ends, from the cut edge: inside, or outside for an outward notch. */
  readonly tip: Point;
  readonly outward: boolean;
}

export interface LaidPiece {
  /** Counts the pieces of the overview from 1. */
  readonly number: number;
  readonly panel: string;
  readonly garment: string;
  readonly hand: LaidHand;
  /** How many pieces the placement gives on this spread. */
  readonly copies: number;
  readonly placement: Placement;
  readonly cut: Outline;
  /** Null where sew and cut line are the same. */
  readonly sew: Outline | null;
  readonly cutOuts: readonly Outline[];
  readonly notches: readonly LaidNotch[];
  readonly drillHoles: readonly { readonly at: Point; readonly note: string }[];
  readonly internalLines: readonly { readonly points: readonly Point[]; readonly note: string }[];
  readonly foldLine: { readonly from: Point; readonly to: Point } | null;
  /** Whether it is cut as a half, its fold line on a fold of the cloth. */
  readonly onFold: boolean;
  readonly grain: { readonly from: Point; readonly to: Point };
  readonly label: Point;
  readonly box: Box;
}

/** A snip is never deeper: half the allowance, and at most 3 mm. */
const DEEPEST_SNIP: Millimetres = 3;

/** Length of an outward notch, and of the tick of a notch on an edge that has no allowance. */
const OUTWARD_NOTCH: Millimetres = 3;

/** How long the snip of a notch may be when the allowance there is `allowance`. */
export function snipDepth(allowance: Millimetres): Millimetres {
  return Math.min(DEEPEST_SNIP, allowance / 2);
}

/** A notch of the shape with the end of its snip, still in the piece's own coordinates. */
function withTip(notch: PieceShape['notches'][number], shape: PieceShape): Omit<LaidNotch, 'outward'> {
  const { from: sew, to: edge } = notch;
  const allowance = Math.hypot(edge.x - sew.x, edge.y - sew.y);
  const out =
    allowance > 0.01
      ? { x: (edge.x - sew.x) / allowance, y: (edge.y - sew.y) / allowance }
      : outwardAt(shape.cut, edge);
  // Without an allowance nothing may be snipped: the mark stands outside, on the waste.
  const reach = notch.outward || allowance <= 0.01 ? OUTWARD_NOTCH : -snipDepth(allowance);
  return { sew, edge, tip: { x: edge.x + out.x * reach, y: edge.y + out.y * reach } };
}

/** The direction square out of a counter-clockwise outline at the edge nearest to `point`. */
function outwardAt(outline: Outline, point: Point): Point {
  let nearest = Infinity;
  let out = { x: 0, y: 1 };
  outline.forEach((a, i) => {
    const b = outline[(i + 1) % outline.length]!;
    const length = Math.hypot(b.x - a.x, b.y - a.y);
    if (length === 0) return;
    const t = Math.min(
      Math.max(((point.x - a.x) * (b.x - a.x) + (point.y - a.y) * (b.y - a.y)) / length ** 2, 0),
      1
    );
    const distance = Math.hypot(a.x + t * (b.x - a.x) - point.x, a.y + t * (b.y - a.y) - point.y);
    if (distance >= nearest) return;
    nearest = distance;
    out = { x: (b.y - a.y) / length, y: -(b.x - a.x) / length };
  });
  return out;
}

function sameOutline(a: Outline, b: Outline): boolean {
  return a.length === b.length && a.every((p, i) => p.x === b[i]!.x && p.y === b[i]!.y);
}

/** `shape`, a whole piece or its half, laid at `placement`; what it gives and for whom is said by the caller. */
export function layPiece(
  shape: PieceShape,
  placement: Placement,
  about: Pick<LaidPiece, 'number' | 'garment' | 'hand' | 'copies' | 'onFold'>
): LaidPiece {
  const at = (point: Point): Point => place(point, placement);
  const cut = placeOutline(shape.cut, placement);
  return {
    ...about,
    panel: shape.name,
    placement,
    cut,
    sew: sameOutline(shape.sew, shape.cut) ? null : placeOutline(shape.sew, placement),
    cutOuts: shape.cutOuts.map((outline) => placeOutline(outline, placement)),
    notches: shape.notches.map((notch) => {
      const { sew, edge, tip } = withTip(notch, shape);
      return { sew: at(sew), edge: at(edge), tip: at(tip), outward: notch.outward };
    }),
    drillHoles: shape.drillHoles.map((hole) => ({ at: at(hole.at), note: hole.note })),
    internalLines: shape.internalLines.map(({ points, note }) => ({ points: points.map(at), note })),
    foldLine: shape.foldLine && { from: at(shape.foldLine.from), to: at(shape.foldLine.to) },
    grain: { from: at(shape.grain.from), to: at(shape.grain.to) },
    label: at(shape.label),
    box: boundingBox(cut)
  };
}

/** What a placement gives, in one: the hand ('pair' where both come of it), the count, and whether it lies on the fold. */
function giving(document: LayDocument, panel: LayPanel, placement: LayDocument['placements'][number]) {
  return {
    hand: laidHand(placement, panel, document.strip),
    copies: yieldCount(placement, panel, document.strip),
    onFold: foldUnder(panel, placement, document.strip) !== null
  };
}

/**
 * Every placed piece, numbered from the cloth's start and from the near selvedge up. A placement of a panel that the
 * revision lacks is an error: nothing is left off the paper quietly.
 */
export function layPieces(document: LayDocument, panels: PanelBook): LaidPiece[] {
  const garments = new Map(document.garments.map((garment) => [garment.id, garment]));
  const laid = document.placements.map((placement) => {
    const garment = garments.get(placement.garment);
    const panel = panelOf(panels, garment, placement.panel);
    if (!garment || !panel)
      throw new Error(`The revision lacks panel ${placement.panel} of garment ${placement.garment}`);
    return layPiece(laidShape(panel, placement, document.strip), placement, {
      number: 0,
      garment: garment.label,
      ...giving(document, panel, placement)
    });
  });
  return laid
    .sort((a, b) => a.box.minX - b.box.minX || a.box.minY - b.box.minY)
    .map((piece, i) => ({ ...piece, number: i + 1 }));
}

/** A panel to be drawn once, and the pieces that are cut by it. */
export interface LonePanel {
  readonly piece: LaidPiece;
  readonly cuts: readonly { readonly garment: string; readonly copies: number }[];
}

/**
 * Each panel once for each way up that it is laid, grain along x, its box starting at (0, 0); with what is cut by it.
 */
export function lonePanels(document: LayDocument, panels: PanelBook): LonePanel[] {
  const found = new Map<
    string,
    { shape: PieceShape; flip: boolean; hand: LaidHand; onFold: boolean; cuts: Map<string, number> }
  >();
  const garments = new Map(document.garments.map((garment) => [garment.id, garment]));
  for (const placement of document.placements) {
    const garment = garments.get(placement.garment);
    const panel = panelOf(panels, garment, placement.panel);
    if (!garment || !panel)
      throw new Error(`The revision lacks panel ${placement.panel} of garment ${placement.garment}`);
    const { hand, copies, onFold } = giving(document, panel, placement);
    // A mirrored copy of a piece that is its own mirror image is the same drawing.
    const flip = placement.flip && !panel.shape.symmetric;
    const key = `${garment.styleVersion}/${placement.panel}/${flip}/${onFold}`;
    const entry = found.get(key) ?? {
      // Every half is drawn the same way up.
      shape: onFold ? halfShape(panel.shape, 1) : panel.shape,
      flip,
      hand,
      onFold,
      cuts: new Map<string, number>()
    };
    entry.cuts.set(garment.label, (entry.cuts.get(garment.label) ?? 0) + copies);
    found.set(key, entry);
  }
  return [...found.values()].map(({ shape, flip, hand, onFold, cuts }, i) => {
    const lying = boundingBox(placeOutline(shape.cut, { x: 0, y: 0, turn: 0, flip }));
    const copies = [...cuts.values()].reduce((sum, n) => sum + n, 0);
    return {
      piece: layPiece(
        shape,
        { x: -lying.minX, y: -lying.minY, turn: 0, flip },
        { number: i + 1, garment: [...cuts.keys()].join(', '), hand, copies, onFold }
      ),
      cuts: [...cuts].map(([garment, n]) => ({ garment, copies: n }))
    };
  });
}
