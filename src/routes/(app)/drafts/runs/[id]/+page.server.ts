import { redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { totalOff } from '$lib/drafting/draft';
import { panelsFigure, sheetFigure } from '$lib/drafting/figure';
import { draftById } from '$lib/drafting/registry';
import * as clients from '$lib/server/clients';
import * as draftRuns from '$lib/server/draft-runs';
import { line, orRefusal, readForm, refuse } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import * as sets from '$lib/server/measurement-sets';
import { database } from '$lib/server/database';
import * as styles from '$lib/server/styles';
import type { Scope } from '$lib/server/scope';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'measurements: see');
  const run = await orErrorPage(draftRuns.read(scope, event.params.id));
  const drawn = await orErrorPage(Promise.resolve().then(() => draftRuns.drawn(run)));
  const set = run.setId ? await sets.read(scope, run.setId) : null;
  const client = run.clientId ? await clients.read(scope, run.clientId) : null;
  const name = draftById(run.draft)?.name ?? run.draft;
  const style = run.styleVersionId ? await styleOf(scope, run.styleVersionId) : null;
  return {
    run: { id: run.id, draft: run.draft, name, size: run.size, setId: run.setId },
    client: client && { id: client.id, name: client.name },
    measuredOn: set?.takenOn ?? null,
    style,
    styles: style ? [] : await choicesOf(scope),
    unit: event.locals.studio!.lengthUnit,
    result: drawn.ok
      ? {
          picture: panelsFigure(drawn.result.panels, name),
          panels: drawn.result.panels.map((panel) => ({
            id: panel.id,
            name: panel.name,
            howMany: panel.howMany,
            paired: panel.paired,
            role: panel.role,
            note: panel.note
          })),
          sheet: {
            names: drawn.result.sheet.names,
            steps: drawn.result.sheet.steps.map((step) => ({
              number: step.number,
              title: step.title,
              formula: step.formula,
              value: step.value,
              ourReading: step.ourReading,
              // Only steps that draw something have a figure of their own.
              figure:
                step.marks.length > 0
                  ? sheetFigure(drawn.result.sheet, step.number, `After step ${step.number}`)
                  : null
            })),
            figure: sheetFigure(drawn.result.sheet)
          },
          walks: drawn.result.walks.map(({ seam, lengthA, lengthB, difference, findings }) => ({
            name: seam.name,
            ease: seam.ease,
            lengthA,
            lengthB,
            difference,
            findings: findings.map(({ message, weight }) => ({ message, weight }))
          })),
          totals: drawn.result.totals.map((total) => ({ ...total, off: totalOff(total) })),
          bones: drawn.result.bones,
          supplies: drawn.result.supplies,
          warnings: drawn.result.warnings,
          cautions: drawn.result.cautions
        }
      : null
  };
};

async function styleOf(scope: Scope, versionId: string) {
  const version = await styles.readVersion(scope, versionId);
  const { name } = await styles.read(scope, version.styleId);
  return { id: version.styleId, name, number: version.number };
}

/** Styles that a run may become the next version of, each with the number of its newest. */
async function choicesOf(scope: Scope): Promise<{ value: string; word: string }[]> {
  const rows = await database()('styles')
    .join('style_versions', 'style_versions.style_id', 'styles.id')
    .where('styles.studio_id', scope.studio)
    .whereNull('styles.archived_at')
    .groupBy('styles.id')
    .orderBy('styles.name')
    .select<{ id: string; name: string; number: number }[]>(
      'styles.id',
      'styles.name',
      database().raw('max(number) as number')
    );
  return rows.map(({ id, name, number }) => ({
    value: `${id}:${number}`,
    word: `${name}, next version (${Number(number) + 1})`
  }));
}

const keepForm = z.object({
  style: z.string().max(100).default(''),
  name: z.string().trim().max(80, 'At most 80 characters, please.').default('')
});

export const actions: Actions = {
  keep: async (event) => {
    const scope = allow(event, 'styles: change');
    allow(event, 'measurements: see');
    const form = await readForm(event.request, keepForm);
    if (!form.ok) return form.refusal;
    const [style, number] = form.data.style.split(':');
    const named = z.object({ name: line('What shall the style be called?', 80) }).safeParse(form.data);
    if (!style && !named.success) return refuse(form.values, { name: 'What shall the style be called?' });
    let to = '';
    const refused = await orRefusal(form.values, async () => {
      const kept = await draftRuns.keep(
        scope,
        event.params.id,
        style ? { style, basedOn: Number(number) } : { name: form.data.name }
      );
      to = kept.styleId;
    });
    if (refused) return refused;
    redirect(303, `/styles/${to}`);
  }
};
