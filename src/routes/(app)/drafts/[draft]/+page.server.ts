import { error, redirect } from '@sveltejs/kit';
import { drawDraft } from '$lib/drafting/draft';
import { panelsFigure } from '$lib/drafting/figure';
import { pointOf } from '$lib/drafting/measurement-points';
import { draftById } from '$lib/drafting/registry';
import { publishedTables } from '$lib/drafting/size-tables';
import * as clients from '$lib/server/clients';
import { choiceTexts, readChoiceTexts } from '$lib/server/draft-form';
import * as draftRuns from '$lib/server/draft-runs';
import { refuse, typedValues } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import * as sets from '$lib/server/measurement-sets';
import { Problem } from '$lib/server/problem';
import * as sizeCharts from '$lib/server/size-charts';
import type { Scope } from '$lib/server/scope';
import type { Actions, PageServerLoad } from './$types';

function draftOf(id: string) {
  const draft = draftById(id);
  if (!draft) error(404, 'There is no such draft.');
  return draft;
}

/** 'set:…' or 'size:table:size'. */
function sourceOf(text: string): draftRuns.Source | null {
  const [kind, first, ...rest] = text.split(':');
  if (kind === 'set' && first) return { kind: 'set', set: first };
  if (kind === 'size' && first && rest.length > 0)
    return { kind: 'size', table: first, size: rest.join(':') };
  return null;
}

async function sourcesOf(scope: Scope, clientId: string | null, setId: string | null) {
  const tables = [...publishedTables, ...(await sizeCharts.list(scope))];
  const sizes = tables.flatMap((table) =>
    table.sizes.map(({ size }) => ({ value: `size:${table.id}:${size}`, word: `${table.name}, ${size}` }))
  );
  const client = setId ? (await orErrorPage(sets.read(scope, setId))).clientId : clientId;
  if (!client) return { options: sizes, client: null };
  const { name } = await orErrorPage(clients.read(scope, client));
  const own = (await sets.list(scope, client)).map((set) => ({
    value: `set:${set.id}`,
    word: `${name}, measured ${set.takenOn}`
  }));
  return { options: [...own, ...sizes], client: { id: client, name } };
}

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'measurements: see');
  const draft = draftOf(event.params.draft);
  const params = event.url.searchParams;
  const unit = event.locals.studio!.lengthUnit;
  const { options, client } = await sourcesOf(scope, params.get('client'), params.get('set'));
  const standard = params.get('set') ? `set:${params.get('set')}` : options[client ? 0 : 3]!.value;
  const first = sourceOf(standard);
  const { body } = first ? await orErrorPage(draftRuns.bodyOf(scope, first)) : { body: {} };
  const drawn = drawDraft(draft, body);
  const { draw: _draw, ...words } = draft;
  return {
    draft: { ...words, needs: draft.needs.map((id) => ({ id, label: pointOf(id).label })) },
    picture: drawn.ok ? panelsFigure(drawn.result.panels, draft.name) : null,
    sources: options,
    client,
    values: { source: standard, ...choiceTexts(draft.choices, unit) } as Record<string, string>,
    unit
  };
};

export const actions: Actions = {
  /** Draws for the eye, keeps nothing. */
  preview: async (event) => {
    const scope = allow(event, 'measurements: see');
    const draft = draftOf(event.params.draft);
    const values = typedValues(await event.request.formData());
    const read = await readAll(scope, draft, values, event.locals.studio!.lengthUnit);
    if ('refusal' in read) return read.refusal;
    const { body } = await orErrorPage(draftRuns.bodyOf(scope, read.source));
    const drawn = drawDraft(draft, body, read.choices);
    if (!drawn.ok) {
      const { extra, detail } = draftRuns.refusal(drawn);
      return refuse(values, (extra.fields as Record<string, string>) ?? { '': detail });
    }
    return {
      values,
      errors: {},
      picture: panelsFigure(drawn.result.panels),
      warnings: drawn.result.warnings
    };
  },
  draw: async (event) => {
    const scope = allow(event, 'measurements: see');
    const draft = draftOf(event.params.draft);
    const values = typedValues(await event.request.formData());
    const read = await readAll(scope, draft, values, event.locals.studio!.lengthUnit);
    if ('refusal' in read) return read.refusal;
    let id: string;
    try {
      id = await draftRuns.create(scope, draft.id, read.source, read.choices);
    } catch (refusal) {
      if (!(refusal instanceof Problem) || refusal.status !== 400) {
        if (refusal instanceof Problem) error(refusal.status, refusal.message);
        throw refusal;
      }
      return refuse(values, (refusal.extra.fields as Record<string, string>) ?? { '': refusal.detail });
    }
    redirect(303, `/drafts/runs/${id}`);
  }
};

async function readAll(
  _scope: Scope,
  draft: NonNullable<ReturnType<typeof draftById>>,
  values: Record<string, string>,
  unit: 'cm' | 'in'
) {
  const { values: choices, errors } = readChoiceTexts(draft.choices, values, unit);
  const source = sourceOf(values.source ?? '');
  if (!source) errors.source = 'Choose whose measurements, or a size.';
  return Object.keys(errors).length > 0 || !source
    ? { refusal: refuse(values, errors) }
    : { choices, source };
}
