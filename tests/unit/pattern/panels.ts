import type { Corner, Edge, Panel } from '$lib/pattern/panel';
import type { Point } from '$lib/geometry/point';

/* Panels for the tests of this folder. */

export interface Plan {
  readonly allowances?: readonly number[];
  readonly roles?: readonly Edge['role'][];
  readonly treatments?: readonly Corner['treatment'][];
  readonly more?: Partial<Panel>;
}

/** A panel of straight edges named e0, e1 … along `outline`; grain along +x unless said otherwise. */
export function straightPanel(outline: readonly Point[], plan: Plan = {}): Panel {
  return {
    id: 'panel',
    name: 'Panel',
    drawn: 'sew',
    edges: outline.map((from, i) => ({
      id: `e${i}`,
      from,
      segments: [{ kind: 'line', to: outline[(i + 1) % outline.length]! }],
      allowance: plan.allowances?.[i] ?? 10,
      role: plan.roles?.[i] ?? 'seam'
    })),
    corners: outline.map((_, i) => ({ id: `c${i}`, treatment: plan.treatments?.[i] ?? 'mitred' })),
    cutOuts: [],
    notches: [],
    drillHoles: [],
    internalLines: [],
    grain: { from: { x: 20, y: 20 }, to: { x: 80, y: 20 }, confirmed: true },
    matchPoints: [],
    howMany: 1,
    paired: false,
    hand: 'left',
    symmetric: false,
    fold: null,
    role: 'main',
    turns: 'bothWays',
    grainTolerance: 0,
    note: '',
    ...plan.more
  };
}
