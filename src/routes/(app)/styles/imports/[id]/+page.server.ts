import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { defaultChoices } from '$lib/interchange/choices';
import { allow, orErrorPage } from '$lib/server/guard';
import * as imports from '$lib/server/imports';
import { Problem } from '$lib/server/problem';
import { choicesOf, draftOf, readDraft } from './choice-form';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'styles: change');
  await orErrorPage(imports.readFile(scope, event.params.id));
  const found = await orErrorPage(imports.read(scope, event.params.id));
  const { lengthUnit } = event.locals.studio!;
  return {
    upload: {
      id: found.id,
      state: found.state,
      fileName: found.fileName,
      fileId: found.fileId,
      error: found.error,
      style: found.style
    },
    reading: found.reading,
    draft: found.reading ? draftOf(defaultChoices(found.reading), lengthUnit) : null,
    lengthUnit
  };
};

const wordsSchema = z.object({
  styleName: z.string().trim().min(1, 'Give the style a name.').max(120, 'At most 120 characters.'),
  kind: z.string().trim().max(60, 'At most 60 characters.'),
  note: z.string().trim().max(2000, 'At most 2000 characters.'),
  versionNote: z.string().trim().max(500, 'At most 500 characters.'),
  mode: z.enum(['replace', 'add']).catch('replace')
});

export const actions: Actions = {
  save: async (event) => {
    const scope = allow(event, 'styles: change');
    const { lengthUnit } = event.locals.studio!;
    const found = await orErrorPage(imports.read(scope, event.params.id));
    const form = await event.request.formData();
    const typed = (name: string): string => String(form.get(name) ?? '');
    const words = {
      styleName: found.style ? found.style.name : typed('styleName'),
      kind: typed('kind'),
      note: typed('note'),
      versionNote: typed('versionNote'),
      mode: typed('mode')
    };
    if (!found.reading)
      return fail(409, {
        draft: null,
        words,
        errors: {
          '': found.state === 'saved' ? 'This upload was saved already.' : 'This upload was not read.'
        } as Record<string, string>
      });
    const first = draftOf(defaultChoices(found.reading), lengthUnit);
    const draft = readDraft(form, first, found.reading);
    const checked = wordsSchema.safeParse(words);
    const read = choicesOf(draft, lengthUnit);
    const errors: Record<string, string> = { ...read.errors };
    for (const issue of checked.error?.issues ?? []) errors[String(issue.path[0])] ??= issue.message;
    if (!read.choices || !checked.success) return fail(400, { draft, words, errors });
    let confirmed: imports.Confirmed;
    try {
      confirmed = await imports.confirm(scope, event.params.id, {
        choices: read.choices,
        words: { name: checked.data.styleName, kind: checked.data.kind, note: checked.data.note },
        versionNote: checked.data.versionNote,
        mode: checked.data.mode
      });
    } catch (refusal) {
      if (!(refusal instanceof Problem)) throw refusal;
      return fail(refusal.status, { draft, words, errors: { '': refusal.detail } as Record<string, string> });
    }
    if (!confirmed.ok) {
      for (const { outline, field, message } of confirmed.problems) {
        const i = draft.panels.findIndex((panel) => panel.outline === outline);
        const key = i < 0 ? '' : `p${i}.${field}`;
        errors[key] = errors[key] ? `${errors[key]} ${message}` : message;
      }
      return fail(400, { draft, words, errors });
    }
    redirect(303, `/styles/${confirmed.styleId}?saved`);
  },

  leaveOut: async (event) => {
    const scope = allow(event, 'styles: change');
    const form = await event.request.formData();
    await orErrorPage(imports.leaveOut(scope, event.params.id, String(form.get('outline') ?? '')));
    redirect(303, `/styles/imports/${event.params.id}`);
  },

  remove: async (event) => {
    const scope = allow(event, 'styles: change');
    await orErrorPage(imports.remove(scope, event.params.id));
    redirect(303, '/styles');
  }
};
