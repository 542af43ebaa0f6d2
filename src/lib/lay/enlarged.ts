import { enlargement, type Shrinkage } from '$lib/cloth/shrinkage';
import { enlargedShape } from '$lib/pattern/enlarge';
import type { LayPanel } from './panel-book';

/*
 * The one place where panels are enlarged for cloth that shrinks after cutting: the panel book of a lay is made with it, and
 * so the Rail, table, check, settle run, area and guide all have the enlarged cut outline.
 *
 * The cloth shrinks along its warp and weft, whichever way a piece is turned, so a piece is enlarged after turning. A panel that
 * lies along the grain (0° or 180°) is stretched by the warp's share along its grain, one that lies across it by the weft's.
 * Where warp and weft shrink unequally this holds at exactly these turns: such a panel loses its grain tolerance, and one that
 * might be turned at will is laid along the grain. A bias panel would be sheared, another way at each of its turns: it is left
 * as it is and the check refuses it (findings-counts.ts), because such a cloth is to be shrunk first.
 */

const made = new WeakMap<LayPanel, Map<string, LayPanel>>();

/** What a lay has to know of `panel` on cloth that shrinks so. The panel itself where nothing is enlarged. */
export function enlargedPanel(panel: LayPanel, shrinkage: Shrinkage): LayPanel {
  const { warp, weft } = enlargement(shrinkage);
  if ((warp === 1 && weft === 1) || (warp !== weft && panel.turns === 'bias')) return panel;
  const key = `${warp}/${weft}`;
  let known = made.get(panel);
  if (!known) made.set(panel, (known = new Map()));
  let found = known.get(key);
  if (!found) {
    const across = panel.turns === 'across';
    const shape = enlargedShape(panel.shape, across ? weft : warp, across ? warp : weft);
    found =
      warp === weft
        ? { ...panel, shape }
        : { ...panel, shape, grainTolerance: 0, turns: panel.turns === 'free' ? 'bothWays' : panel.turns };
    known.set(key, found);
  }
  return found;
}
