import type { LayPanel } from '$lib/lay/panel-book';
import type { Point } from '$lib/geometry/point';
import { openChoice, spreadOf, type SpreadChoice } from '$lib/cloth/spread';
import type { Strip } from '$lib/cloth/strip';
import { panel, strip } from './workroom';

/** Cloth 1000 mm wide (20 mm margin each side) spread so. */
export function spread(choice: Partial<SpreadChoice>, changes: Partial<Strip> = {}): Strip {
  const base = strip({ fullWidth: 1040, ...changes });
  return { ...base, spread: spreadOf(base, { ...openChoice, ...choice }) };
}

/** A back drawn on the fold and opened: 300 along the grain, 200 wide, its fold line at y = 0, a neck cut in at its upper end. */
export const backCut: Point[] = [
  [0, -100],
  [300, -100],
  [300, -40],
  [280, 0],
  [300, 40],
  [300, 100],
  [0, 100]
].map(([x, y]) => ({ x: x!, y: y! }));

export function back(changes: Partial<LayPanel> = {}): LayPanel {
  const whole = panel('back', backCut, { symmetric: true });
  return {
    ...whole,
    ...changes,
    shape: {
      ...whole.shape,
      label: { x: 100, y: 0 },
      foldLine: { from: { x: 0, y: 0 }, to: { x: 280, y: 0 } }
    }
  };
}
