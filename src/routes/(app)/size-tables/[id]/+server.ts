import { publishedTables } from '$lib/drafting/size-tables';
import { api } from '$lib/server/guard';
import { notFound } from '$lib/server/problem';
import * as sizeCharts from '$lib/server/size-charts';

export const GET = api('measurements: see', async (scope, event) => {
  const table = [...publishedTables, ...(await sizeCharts.list(scope))].find(
    ({ id }) => id === event.params.id
  );
  if (!table) throw notFound('size table');
  return new Response(sizeCharts.toCsv(table, event.locals.studio!.lengthUnit), {
    headers: {
      'content-type': 'text/csv; charset=utf-8',
      'content-disposition': `attachment; filename="${table.name.replace(/[^\w-]+/g, '-').slice(0, 60)}.csv"`
    }
  });
});
