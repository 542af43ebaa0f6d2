import { z } from 'zod';
import type { Share, SquareMillimetres } from '$lib/units/measure';
import { database } from './database';
import type { Scope } from './scope';

/*
 * What lays of this studio reached before: for estimates, before there is a lay.
 */

/**
 * What single made-to-measure lays commonly reach, 60 to 75 %: from memory, no published source. Taken, at its middle, only
 * while the studio has released no lay.
 */
export const COMMON_EFFICIENCY: Share = 0.67;

export interface PastEfficiency {
  readonly efficiency: Share;
  readonly lays: number;
  /** Of what: lays of the same kinds of garment, all of the studio's, or common practice. */
  readonly of: 'kind' | 'studio' | 'practice';
}

const kept = z.object({
  readings: z.object({ area: z.number(), efficiency: z.number().nullable() })
});

/** The efficiency of the studio's released and cut lays: of garments of `kinds` where there are any, else of all. */
export async function pastEfficiency(scope: Scope, kinds: readonly string[]): Promise<PastEfficiency> {
  const lays = () =>
    database()('lays')
      .where({ 'lays.studio_id': scope.studio })
      .whereIn('lays.state', ['released', 'cut'])
      .whereNotNull('lays.verdict')
      .orderBy('lays.updated_at', 'desc')
      .limit(100);
  const alike = await lays()
    .join('lay_items', 'lay_items.lay_id', 'lays.id')
    .join('order_items', 'order_items.id', 'lay_items.order_item_id')
    .join('style_versions', 'style_versions.id', 'order_items.style_version_id')
    .join('styles', 'styles.id', 'style_versions.style_id')
    .whereIn('styles.kind', kinds)
    .whereNot({ 'styles.kind': '' })
    .distinct<{ id: string; verdict: string }[]>('lays.id', 'lays.verdict', 'lays.updated_at');
  const ofKind = mean(alike);
  if (ofKind) return { ...ofKind, of: 'kind' };
  const ofAll = mean(await lays().select<{ verdict: string }[]>('lays.verdict'));
  if (ofAll) return { ...ofAll, of: 'studio' };
  return { efficiency: COMMON_EFFICIENCY, lays: 0, of: 'practice' };
}

/** All their pieces ÷ all the cloth that they lay on: a long lay counts more than a short one. Null without a lay. */
function mean(rows: readonly { verdict: string }[]): { efficiency: Share; lays: number } | null {
  let pieces: SquareMillimetres = 0;
  let cloth: SquareMillimetres = 0;
  let lays = 0;
  for (const { verdict } of rows) {
    const { area, efficiency } = kept.parse(JSON.parse(verdict)).readings;
    if (!efficiency) continue;
    pieces += area;
    cloth += area / efficiency;
    lays++;
  }
  return lays > 0 ? { efficiency: pieces / cloth, lays } : null;
}

/** The kinds of garment that an order has. */
export async function kindsOf(scope: Scope, orderId: string): Promise<string[]> {
  const rows = await database()('order_items')
    .join('style_versions', 'style_versions.id', 'order_items.style_version_id')
    .join('styles', 'styles.id', 'style_versions.style_id')
    .where({ 'order_items.studio_id': scope.studio, 'order_items.order_id': orderId })
    .distinct<{ kind: string }[]>('styles.kind');
  return rows.map(({ kind }) => kind);
}
