import { placeOutline } from '$lib/geometry/placement';
import { boundingBox } from '$lib/geometry/polygon';
import type { Box } from '$lib/geometry/point';
import type { LayDocument, LayPlacement } from '$lib/lay/document';
import { panelOfPlacement } from '$lib/lay/needs';
import type { PanelBook } from '$lib/lay/panel-book';

type Fault = (lying: LayPlacement, box: Box) => LayPlacement | null;

/** What went wrong in a hurry, by panel: each the first placement of its panel. */
const faults: Readonly<Record<string, Fault>> = {
  // The wrong hand, turned over where it lies: its pair is now two of a kind.
  front: (lying, box) => ({ ...lying, flip: !lying.flip, y: box.minY + box.maxY - lying.y }),
  // Off grain.
  sleeve: (lying) => ({ ...lying, turn: lying.turn + 2.5 }),
  // Onto its neighbour.
  back: (lying) => ({ ...lying, x: lying.x + 12 }),
  // Forgotten on the Rail.
  cuff: () => null
};

/** A good lay of the demo's blouse, spoilt in five ways, so that the check has something to find. */
export function spoil(document: LayDocument, book: PanelBook): LayDocument {
  const lying = document.placements.map((placement) => ({
    placement,
    box: boundingBox(placeOutline(panelOfPlacement(document, book, placement)!.shape.cut, placement))
  }));
  // The piece nearest to the near selvedge hangs over it.
  const edge = lying
    .filter(({ placement }) => !(placement.panel in faults))
    .reduce((a, b) => (b.box.minY < a.box.minY ? b : a)).placement;
  const waiting = new Map(Object.entries(faults));
  const placements = lying.flatMap(({ placement, box }) => {
    if (placement === edge) return [{ ...placement, y: placement.y - box.minY - 14 }];
    const fault = waiting.get(placement.panel);
    waiting.delete(placement.panel);
    return fault ? (fault(placement, box) ?? []) : [placement];
  });
  return { ...document, placements };
}
