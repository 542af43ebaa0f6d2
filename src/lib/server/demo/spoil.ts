import type { LayDocument, LayPlacement } from '$lib/lay/document';

/** What went wrong in a hurry, by panel: each the first placement of its panel. */
const faults: Readonly<Record<string, (lying: LayPlacement) => LayPlacement | null>> = {
  // Over the near selvedge, wherever it lay.
  back: (lying) => ({ ...lying, y: lying.y - 14 }),
  // The wrong hand: its pair is now two of a kind.
  front: (lying) => ({ ...lying, flip: !lying.flip }),
  // Off grain.
  sleeve: (lying) => ({ ...lying, turn: lying.turn + 2.5 }),
  // Onto its neighbour.
  yoke: (lying) => ({ ...lying, x: lying.x - 12 }),
  // Forgotten on the Rail.
  cuff: () => null
};

/** A good lay of the demo's blouse, spoilt in five ways, so that the check has something to find. */
export function spoil(document: LayDocument): LayDocument {
  const waiting = new Map(Object.entries(faults));
  const placements = document.placements.flatMap((lying) => {
    const fault = waiting.get(lying.panel);
    if (!fault) return [lying];
    waiting.delete(lying.panel);
    return fault(lying) ?? [];
  });
  return { ...document, placements };
}
