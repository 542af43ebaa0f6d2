import type { Strip } from '$lib/cloth/strip';
import { boundingBox } from '$lib/geometry/polygon';
import { placeOutline, snapPlacement, type Placement } from '$lib/geometry/placement';
import type { Box, Point } from '$lib/geometry/point';
import type { LayDocument, LayPlacement } from './document';
import { panelOfPlacement } from './needs';
import { laidShape } from './on-fold';
import type { LayPanel, PanelBook } from './panel-book';
import { nameOf, pieces } from './wording';

/*
 * What every command works with: what it gives, what is chosen, and where pieces lie.
 */

/** A new document with what was done in words, or why it was refused. */
export type Edit =
  | { readonly document: LayDocument; readonly said: string; readonly refused?: undefined }
  | { readonly refused: string; readonly document?: undefined; readonly said?: undefined };

/** Ids of the chosen placements. */
export type Ids = readonly string[];

/** Chosen placements with their panels, apart from the locked ones. */
export interface Chosen {
  readonly free: readonly { readonly placement: LayPlacement; readonly panel: LayPanel }[];
  readonly locked: number;
}

/** The chosen placements that may be changed; refused when there is none. */
export function chosen(document: LayDocument, book: PanelBook, ids: Ids): Chosen | { refused: string } {
  const wanted = new Set(ids);
  const all = document.placements.filter(({ id }) => wanted.has(id));
  if (all.length === 0) return { refused: 'No piece is chosen.' };
  const unlocked = all.filter(({ locked }) => !locked);
  const free = unlocked.flatMap((placement) => {
    const panel = panelOfPlacement(document, book, placement);
    return panel ? [{ placement, panel }] : [];
  });
  if (free.length === 0)
    return {
      refused:
        unlocked.length > 0
          ? 'The outline of this piece is not known here. Put it back on the Rail.'
          : all.length === 1
            ? `${nameOf(document, book, all[0]!)} is locked. Unlock it first.`
            : `All ${all.length} chosen pieces are locked. Unlock them first.`
    };
  return { free, locked: all.length - unlocked.length };
}

/** The document with some placements replaced. */
export function replaced(document: LayDocument, changed: readonly LayPlacement[]): LayDocument {
  const byId = new Map(changed.map((placement) => [placement.id, placement]));
  return { ...document, placements: document.placements.map((old) => byId.get(old.id) ?? old) };
}

/** 'Front (left) of Ada' or '4 pieces', with what stayed because it is locked. */
export function subject(document: LayDocument, book: PanelBook, { free, locked }: Chosen): string {
  const what = free.length === 1 ? nameOf(document, book, free[0]!.placement) : pieces(free.length);
  return locked > 0 ? `${what} (${locked} locked, left alone)` : what;
}

/** The box of a panel where `placement` lays it; of the whole piece where no strip is given, else of what is cut there. */
export function boxOf(panel: LayPanel, placement: Placement, strip?: Pick<Strip, 'spread'>): Box {
  const shape = strip ? laidShape(panel, placement, strip) : panel.shape;
  return boundingBox(placeOutline(shape.cut, placement));
}

/** The middle of the box around `boxes`. */
export function middleOf(boxes: readonly Box[]): Point {
  const minX = Math.min(...boxes.map((box) => box.minX));
  const maxX = Math.max(...boxes.map((box) => box.maxX));
  const minY = Math.min(...boxes.map((box) => box.minY));
  const maxY = Math.max(...boxes.map((box) => box.maxY));
  return { x: (minX + maxX) / 2, y: (minY + maxY) / 2 };
}

/** `next` moved so that the middle of its box lies at `middle`, on the grid. */
export function centred<T extends Placement>(panel: LayPanel, next: T, middle: Point): T {
  const { x, y } = middleOf([boxOf(panel, next)]);
  return { ...next, ...snapPlacement({ ...next, x: next.x + middle.x - x, y: next.y + middle.y - y }) };
}
