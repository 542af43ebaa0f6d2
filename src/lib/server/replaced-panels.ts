import { database } from './database';
import { rowOf } from './lay-current';
import type { Scope } from './scope';

/*
 * A released lay never changes by itself. Where its order's line has since been moved to another version of the style, the lay's
 * panels are replaced: it must not be cut until the line is put back to the version that it was released with (kept), or the lay
 * is reopened and released again (replaced).
 */

/**
 * Of the released lays in `layIds`, those that hold panels of a version which their order's line no longer asks for. Compared is
 * what the released revision keeps, not the working copy. Asks no studio: the ids must come from a scoped query, or from the code
 * on a ticket, whose answer names nothing.
 */
export async function replacedAmong(layIds: readonly string[]): Promise<Set<string>> {
  if (layIds.length === 0) return new Set();
  const rows = (await database()('lays')
    .join('lay_revisions', 'lay_revisions.id', 'lays.released_revision_id')
    .joinRaw("join json_each(cast(lay_revisions.bytes as text), '$.document.garments') as garment")
    .joinRaw(
      "join order_items on order_items.studio_id = lays.studio_id and order_items.id = json_extract(garment.value, '$.orderItem')"
    )
    .where('lays.state', 'released')
    .whereIn('lays.id', layIds)
    .whereRaw("order_items.style_version_id <> json_extract(garment.value, '$.styleVersion')")
    .distinct('lays.id')) as { id: string }[];
  return new Set(rows.map(({ id }) => id));
}

/** Whether a lay of this studio waits to be cut on replaced panels; 404 for any other lay. */
export async function isReplaced(scope: Scope, layId: string): Promise<boolean> {
  const { id } = await rowOf(scope, layId);
  return (await replacedAmong([id])).has(id);
}
