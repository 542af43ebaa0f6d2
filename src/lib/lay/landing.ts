import type { Point } from '$lib/geometry/point';
import type { LayDocument, LayPlacement } from './document';
import { matched } from './matching';
import { foldUnder, ontoFold } from './on-fold';
import { panelOfPlacement } from './needs';
import type { PanelBook } from './panel-book';

/*
 * Where a piece that is moved by hand comes to lie: on the fold where its fold line is near it, and on the next place at which its
 * match points match.
 */

/** `placement` where it comes to lie. `moving`: the pieces that move with it. */
export function landing(
  document: LayDocument,
  book: PanelBook,
  placement: LayPlacement,
  moving: ReadonlySet<string>
): LayPlacement {
  const panel = panelOfPlacement(document, book, placement);
  if (!panel) return placement;
  const near = ontoFold(panel, placement, document.strip);
  const fold = foldUnder(panel, near, document.strip);
  const next = matched(document, book, near, moving);
  if (!fold) return next;
  // On a fold a piece may only slide along it.
  return fold.side === 'start' ? { ...next, x: near.x } : { ...next, y: near.y };
}

/**
 * The same for a step of the keys: where the next matching place is the old one, it goes on to the one beyond, in the direction of the step.
 */
export function steppedLanding(
  document: LayDocument,
  book: PanelBook,
  before: LayPlacement,
  step: Point,
  moving: ReadonlySet<string>
): LayPlacement {
  const at = (dx: number, dy: number): LayPlacement =>
    landing(document, book, { ...before, x: before.x + dx, y: before.y + dy }, moving);
  const first = at(step.x, step.y);
  if (first.x !== before.x || first.y !== before.y) return first;
  const { along, across } = document.strip.repeat;
  const beyond = (by: number, size: number | undefined): number =>
    by === 0 || size === undefined ? by : Math.sign(by) * Math.max(Math.abs(by), size * 0.75);
  return at(beyond(step.x, along?.size), beyond(step.y, across?.size));
}
