import { valueWords } from '$lib/drafting/choices';
import { draftById } from '$lib/drafting/registry';
import { draftingSheetPdf } from '$lib/guide/drafting-sheet';
import * as clients from '$lib/server/clients';
import * as draftRuns from '$lib/server/draft-runs';
import { api } from '$lib/server/guard';
import { guideFonts } from '$lib/server/guide-fonts';
import * as sets from '$lib/server/measurement-sets';
import type { RequestEvent } from './$types';

/** The drafting sheet of a run as a PDF. */
export const GET = api<RequestEvent>('measurements: see', async (scope, { params, locals }) => {
  const run = await draftRuns.read(scope, params.id);
  const drawn = draftRuns.drawn(run);
  if (!drawn.ok) throw draftRuns.refusal(drawn);
  const set = run.setId ? await sets.read(scope, run.setId) : null;
  const client = run.clientId ? await clients.read(scope, run.clientId) : null;
  const draft = draftById(run.draft);
  const unit = locals.studio!.lengthUnit;
  const pdf = await draftingSheetPdf(
    {
      studio: locals.studio!.name,
      draft: draft?.name ?? run.draft,
      body: client?.name ?? run.size,
      measured: set?.takenOn ?? null,
      unit,
      at: run.createdAt,
      choices: (draft?.choices ?? []).map((choice) => ({
        label: choice.label,
        value: valueWords(
          choice,
          (run.choices[choice.id] ?? choice.default) as number | string | boolean,
          unit
        )
      })),
      result: drawn.result
    },
    await guideFonts()
  );
  return new Response(pdf as Uint8Array<ArrayBuffer>, {
    headers: {
      'content-type': 'application/pdf',
      'content-disposition': 'attachment; filename="drafting-sheet.pdf"',
      'cache-control': 'private, no-store'
    }
  });
});
