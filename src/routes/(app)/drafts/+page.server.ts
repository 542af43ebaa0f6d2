import { drafts } from '$lib/drafting/registry';
import { drawDraft } from '$lib/drafting/draft';
import { panelsFigure } from '$lib/drafting/figure';
import { publishedTables } from '$lib/drafting/size-tables';
import * as draftRuns from '$lib/server/draft-runs';
import { allow } from '$lib/server/guard';
import type { PageServerLoad } from './$types';

/** Each draft in a middle size, for the eye. */
const pictures = new Map<string, string>();
function pictureOf(id: string): string {
  let picture = pictures.get(id);
  if (picture === undefined) {
    const draft = drafts.find((one) => one.id === id)!;
    const drawn = drawDraft(draft, publishedTables[0]!.sizes[3]!.body);
    picture = drawn.ok
      ? panelsFigure(
          drawn.result.panels.filter(({ role }) => role === 'main'),
          draft.name
        )
      : '';
    pictures.set(id, picture);
  }
  return picture;
}

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'measurements: see');
  const params = event.url.searchParams;
  const kept = new URLSearchParams();
  for (const name of ['set', 'client']) {
    const value = params.get(name);
    if (value) kept.set(name, value);
  }
  return {
    drafts: drafts.map(({ id, name, about }) => ({ id, name, about, picture: pictureOf(id) })),
    runs: await draftRuns.latest(scope),
    query: kept.size > 0 ? `?${kept}` : ''
  };
};
