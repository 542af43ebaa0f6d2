import Papa from 'papaparse';
import { layDxf, laySvg, panelsDxf, placementRows } from '$lib/guide/lay-files';
import { api } from '$lib/server/guard';
import * as layRevisions from '$lib/server/lay-revisions';
import { notFound } from '$lib/server/problem';

/** A kept revision as a file: `svg`, `dxf` (the lay), `panels` (DXF of the panels), `csv` (placements). Always an attachment. */
export const GET = api('guides: print', async (scope, { params }) => {
  const { revision, document, panels, labels } = await layRevisions.readById(scope, params.id!);
  const name = `order-${labels.order.number}-revision-${revision.number}`;
  const answer = (body: string, type: string, file: string) =>
    new Response(body, {
      headers: { 'content-type': type, 'content-disposition': `attachment; filename="${file}"` }
    });
  switch (params.kind) {
    case 'svg':
      return answer(
        laySvg(document, panels, `Order ${labels.order.number}, revision ${revision.number}`),
        'image/svg+xml',
        `${name}.svg`
      );
    case 'dxf':
      return answer(layDxf(document, panels), 'application/dxf', `${name}.dxf`);
    case 'panels':
      return answer(
        panelsDxf(document, panels, `Order ${labels.order.number}`),
        'application/dxf',
        `${name}-panels.dxf`
      );
    case 'csv':
      return answer(
        Papa.unparse(placementRows(document, panels), { escapeFormulae: true }),
        'text/csv; charset=utf-8',
        `${name}.csv`
      );
    default:
      throw notFound('file of this kind');
  }
});
