import { createServer } from 'vite';
import type { Knex } from 'knex';
import { PANEL_SET_SCHEMA, type Panel } from '../../src/lib/pattern/panel';
import type { LayDocument } from '../../src/lib/lay/document';
import { madeUpLay } from './made-up-lay';

/*
 * A database with the demo and one large lay in it, made through the product's own repositories.
 */

interface Repositories {
  readonly database: {
    openDatabase(file: string): Knex;
    migrate(db: Knex): Promise<void>;
    useDatabase(db: Knex | null): void;
  };
  readonly demo: { seed(): Promise<unknown> };
  readonly lays: {
    create(
      scope: unknown,
      input: { orderId: string; clothId: string; name: string }
    ): Promise<{ id: string }>;
    read(scope: unknown, id: string): Promise<{ version: number; document: LayDocument }>;
    save(
      scope: unknown,
      id: string,
      save: { version: number; saveId: string; document: unknown }
    ): Promise<unknown>;
  };
}

/** A made-up shape as a panel of a style, drawn as its cut line. */
function panelOf(shape: ReturnType<typeof madeUpLay>['panels'][string]['shape']): Panel {
  const [first, ...rest] = shape.cut;
  return {
    id: shape.panel,
    name: shape.name,
    drawn: 'cut',
    edges: [
      {
        id: 'around',
        from: first!,
        segments: [...rest, first!].map((to) => ({ kind: 'line' as const, to })),
        allowance: 0,
        role: 'seam'
      }
    ],
    corners: [{ id: 'start', treatment: 'square' }],
    cutOuts: [],
    notches: [],
    drillHoles: [],
    internalLines: [],
    grain: { ...shape.grain, confirmed: true },
    matchPoints: [],
    howMany: 1,
    paired: false,
    hand: 'left',
    symmetric: false,
    fold: null,
    role: 'main',
    turns: 'bothWays',
    grainTolerance: 2,
    note: ''
  };
}

/** Makes `file` and gives the id of a lay of `pieces` pieces of `points` points each, all on the cloth. */
export async function prepareLay(file: string, pieces: number, points: number): Promise<string> {
  const vite = await createServer({
    server: { middlewareMode: true, watch: null },
    appType: 'custom',
    mode: 'test',
    logLevel: 'error'
  });
  try {
    const load = (name: string): Promise<unknown> => vite.ssrLoadModule(`/src/lib/server/${name}.ts`);
    const { database, demo, lays } = {
      database: await load('database'),
      demo: await load('demo'),
      lays: await load('lays')
    } as Repositories;
    const db = database.openDatabase(file);
    await database.migrate(db);
    database.useDatabase(db);
    await demo.seed();
    const { studio_id: studio, user_id: user } = await db('memberships').where({ role: 'owner' }).first();
    const scope = { studio, user, role: 'owner' };
    const made = madeUpLay(pieces, points);
    const now = Date.now();
    const panels = Object.values(made.panels).map(({ shape }) => panelOf(shape));
    const { id: clothId } = await db('cloths')
      .where({ studio_id: studio })
      .orderBy('usable_width', 'desc')
      .first();
    await db('styles').insert({
      id: 'bench-style',
      studio_id: studio,
      name: 'Bench',
      created_at: now,
      updated_at: now
    });
    await db('style_versions').insert({
      id: 'bench-version',
      studio_id: studio,
      style_id: 'bench-style',
      number: 1,
      panels: JSON.stringify({ schema: PANEL_SET_SCHEMA, panels }),
      panel_count: panels.length,
      created_by: user,
      created_at: now
    });
    await db('orders').insert({
      id: 'bench-order',
      studio_id: studio,
      number: 9000,
      client_name: 'Bench',
      stage: 'enquiry',
      created_at: now,
      updated_at: now
    });
    await db('order_items').insert({
      id: 'bench-item',
      studio_id: studio,
      order_id: 'bench-order',
      position: 1,
      style_version_id: 'bench-version',
      label: 'Bodice',
      quantity: Math.ceil(pieces / panels.length)
    });
    await db('order_item_cloths').insert({
      id: 'bench-item-cloth',
      studio_id: studio,
      order_item_id: 'bench-item',
      role: 'main',
      cloth_id: clothId
    });
    const { id } = await lays.create(scope, { orderId: 'bench-order', clothId, name: 'Frames' });
    const { version, document } = await lays.read(scope, id);
    const garments = document.garments.map((garment) => garment.id);
    const placements = made.document.placements.map((placement) => ({
      ...placement,
      garment: garments[Number(placement.garment.split('-')[1])]!
    }));
    await lays.save(scope, id, {
      version,
      saveId: crypto.randomUUID(),
      document: { ...document, placements }
    });
    database.useDatabase(null);
    await db.destroy();
    return id;
  } finally {
    await vite.close();
  }
}
