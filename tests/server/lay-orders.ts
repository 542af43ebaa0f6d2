import type { Point } from '$lib/geometry/point';
import type { LayDocument, LayPlacement } from '$lib/lay/document';
import { panelSetSchema, type Panel } from '$lib/pattern/panel';
import { database } from '$lib/server/database';
import { newId } from '$lib/server/ids';
import type { Scope } from '$lib/server/scope';

/*
 * A style, cloths and an order, written straight into the rows, for the tests of lays.
 */

/** A panel drawn as its cut line with straight edges; grain along x, confirmed. */
export function cutPanel(id: string, points: readonly Point[], changes: Partial<Panel> = {}): Panel {
  return {
    id,
    name: id[0]!.toUpperCase() + id.slice(1),
    drawn: 'cut',
    edges: points.map((from, i) => ({
      id: `e${i}`,
      from,
      segments: [{ kind: 'line', to: points[(i + 1) % points.length]! }],
      allowance: 0,
      role: 'seam'
    })),
    corners: points.map((_, i) => ({ id: `c${i}`, treatment: 'mitred' })),
    cutOuts: [],
    notches: [],
    drillHoles: [],
    internalLines: [],
    grain: { from: { x: 20, y: 20 }, to: { x: 60, y: 20 }, confirmed: true },
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
    ...changes
  };
}

const points = (...pairs: [number, number][]): Point[] => pairs.map(([x, y]) => ({ x, y }));

/** A pair of fronts (300 × 200 with a bay), a yoke (400 × 150) and a lining (200 × 100). */
export const panels: Panel[] = [
  cutPanel('front', points([0, 0], [300, 0], [300, 80], [120, 80], [120, 200], [0, 200]), {
    paired: true,
    howMany: 2
  }),
  cutPanel('yoke', points([0, 0], [400, 0], [400, 150], [0, 150]), { symmetric: true }),
  cutPanel('inside', points([0, 0], [200, 0], [200, 100], [0, 100]), { symmetric: true, role: 'lining' })
];

export interface OrderRows {
  readonly order: string;
  readonly item: string;
  readonly styleVersion: string;
  /** Wool: right and wrong side, 1000 mm usable, 12.34 a metre. */
  readonly main: string;
  readonly lining: string;
}

/** One order of a studio: one garment, wool for the main panels, silk for the lining. */
export async function makeOrder(
  scope: Scope,
  changes: { quantity?: number; number?: number; style?: readonly Panel[] } = {}
): Promise<OrderRows> {
  const db = database();
  const [style, styleVersion, order, item, main, lining] = Array.from({ length: 6 }, () => newId()) as [
    string,
    string,
    string,
    string,
    string,
    string
  ];
  const now = 1_790_000_000_000;
  const own = { studio_id: scope.studio };
  const stamps = { created_at: now, updated_at: now };
  const set = panelSetSchema.parse({ schema: 1, panels: changes.style ?? panels });
  await db('styles').insert({ ...own, id: style, name: 'Bodice', ...stamps });
  await db('style_versions').insert({
    ...own,
    id: styleVersion,
    style_id: style,
    number: 1,
    panels: JSON.stringify(set),
    panel_count: set.panels.length,
    created_by: scope.user,
    created_at: now
  });
  for (const [id, name, price] of [
    [main, 'Wool', 1234],
    [lining, 'Silk', 5678]
  ] as const)
    await db('cloths').insert({
      ...own,
      id,
      name,
      fibre: name.toLowerCase(),
      full_width: 1040,
      usable_width: 1000,
      price,
      price_unit: 'metre',
      supplier_note: 'Mill by the weir',
      ...stamps
    });
  await db('orders').insert({
    ...own,
    id: order,
    number: changes.number ?? 7,
    client_name: 'Ada Lund',
    stage: 'enquiry',
    ...stamps
  });
  await db('order_items').insert({
    ...own,
    id: item,
    order_id: order,
    position: 1,
    style_version_id: styleVersion,
    label: '38',
    quantity: changes.quantity ?? 1
  });
  for (const [role, cloth] of [
    ['main', main],
    ['lining', lining]
  ])
    await db('order_item_cloths').insert({
      ...own,
      id: newId(),
      order_item_id: item,
      role,
      cloth_id: cloth
    });
  return { order, item, styleVersion, main, lining };
}

/** Placements that make a good lay of one garment on the wool. */
export function goodPlacements(document: LayDocument): LayPlacement[] {
  const garment = document.garments[0]!.id;
  const at = (id: string, panel: string, x: number, y: number, flip = false): LayPlacement => ({
    id,
    panel,
    garment,
    x,
    y,
    turn: 0,
    flip,
    locked: false
  });
  return [at('p1', 'front', 0, 0), at('p2', 'front', 420, 200, true), at('p3', 'yoke', 0, 250)];
}

export function good(document: LayDocument): LayDocument {
  return { ...document, placements: goodPlacements(document) };
}
