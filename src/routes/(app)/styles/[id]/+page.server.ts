import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import type { PieceShape } from '$lib/pattern/piece-shape';
import type { Panel } from '$lib/pattern/panel';
import { PanelFault } from '$lib/pattern/panel-fault';
import { resolvePanel } from '$lib/pattern/resolve';
import { allow, orErrorPage } from '$lib/server/guard';
import { may } from '$lib/server/permissions';
import { Problem } from '$lib/server/problem';
import * as styles from '$lib/server/styles';
import { draftsOf, panelsOf, readDrafts } from './panel-form';
import type { Actions, PageServerLoad } from './$types';

/** A panel as it will be laid, or why it can't be. */
function shapeOf(panel: Panel): { shape: PieceShape; fault: null } | { shape: null; fault: string } {
  try {
    return { shape: resolvePanel(panel), fault: null };
  } catch (fault) {
    if (fault instanceof PanelFault) return { shape: null, fault: fault.finding.message };
    throw fault;
  }
}

function askedVersion(url: URL): number | undefined {
  const number = Number(url.searchParams.get('version') ?? NaN);
  return Number.isInteger(number) && number > 0 ? number : undefined;
}

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'styles: see');
  const style = await orErrorPage(styles.read(scope, event.params.id));
  const version = await orErrorPage(styles.versionOf(scope, style.id, askedVersion(event.url)));
  const { lengthUnit, timeZone } = event.locals.studio!;
  return {
    style,
    version,
    shapes: version.panels.map(shapeOf),
    drafts: draftsOf(version.panels, lengthUnit),
    orders: await styles.uses(scope, style.id),
    mayChange: may(scope.role, 'styles: change'),
    saved: event.url.searchParams.has('saved'),
    lengthUnit,
    timeZone
  };
};

const wordsSchema = z.object({
  name: z.string().trim().min(1, 'Give the style a name.').max(120, 'At most 120 characters.'),
  kind: z.string().trim().max(60, 'At most 60 characters.'),
  note: z.string().trim().max(2000, 'At most 2000 characters.')
});

export const actions: Actions = {
  words: async (event) => {
    const scope = allow(event, 'styles: change');
    const form = await event.request.formData();
    const words = {
      name: String(form.get('name') ?? ''),
      kind: String(form.get('kind') ?? ''),
      note: String(form.get('note') ?? '')
    };
    const read = wordsSchema.safeParse(words);
    if (!read.success) {
      const errors: Record<string, string> = {};
      for (const issue of read.error.issues) errors[String(issue.path[0])] ??= issue.message;
      return fail(400, { words, wordErrors: errors });
    }
    await orErrorPage(styles.update(scope, event.params.id, read.data));
    redirect(303, `/styles/${event.params.id}?saved`);
  },

  /** Changed attributes of the panels make the next version. */
  version: async (event) => {
    const scope = allow(event, 'styles: change');
    const { lengthUnit } = event.locals.studio!;
    const form = await event.request.formData();
    const basedOn = Number(form.get('basedOn'));
    const base = await orErrorPage(
      styles.versionOf(scope, event.params.id, Number.isInteger(basedOn) && basedOn > 0 ? basedOn : undefined)
    );
    const drafts = readDrafts(form, base.panels);
    const versionNote = String(form.get('versionNote') ?? '').slice(0, 500);
    const read = panelsOf(base.panels, drafts, lengthUnit);
    if (!read.panels) return fail(400, { drafts, versionNote, errors: read.errors });
    try {
      await styles.addVersion(
        scope,
        event.params.id,
        { panels: read.panels, note: versionNote, sourceFile: base.source?.fileId ?? null },
        base.number
      );
    } catch (refusal) {
      if (!(refusal instanceof Problem)) throw refusal;
      return fail(refusal.status, {
        drafts,
        versionNote,
        errors: { '': refusal.detail } as Record<string, string>
      });
    }
    redirect(303, `/styles/${event.params.id}?saved`);
  },

  archive: async (event) => {
    const scope = allow(event, 'styles: change');
    await orErrorPage(styles.archive(scope, event.params.id, true));
    redirect(303, `/styles/${event.params.id}?saved`);
  },

  putBack: async (event) => {
    const scope = allow(event, 'styles: change');
    await orErrorPage(styles.archive(scope, event.params.id, false));
    redirect(303, `/styles/${event.params.id}?saved`);
  }
};
