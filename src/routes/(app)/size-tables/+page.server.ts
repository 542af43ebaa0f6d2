import { error, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { pointOf, pointIds } from '$lib/drafting/measurement-points';
import { publishedTables } from '$lib/drafting/size-tables';
import { line, orRefusal, refuse, typedValues } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import * as sizeCharts from '$lib/server/size-charts';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'measurements: see');
  const tables = [...publishedTables, ...(await sizeCharts.list(scope))];
  const chosen = tables.find(({ id }) => id === event.url.searchParams.get('table')) ?? tables[0]!;
  return {
    tables: tables.map(({ id, name, mark }) => ({ id, name, mark })),
    table: {
      ...chosen,
      own: chosen.mark === 'the studio’s own',
      points: pointIds
        .filter((id) => chosen.sizes.some(({ body }) => body[id] !== undefined))
        .map((id) => ({ id, label: pointOf(id).label, filled: chosen.filled.includes(id) }))
    },
    unit: event.locals.studio!.lengthUnit,
    done: event.url.searchParams.get('done')
  };
};

export const actions: Actions = {
  bringIn: async (event) => {
    const scope = allow(event, 'measurements: see');
    const form = await event.request.formData();
    const values = typedValues(form);
    const name = line('What is the table called?', 80).safeParse(values.name ?? '');
    if (!name.success) return refuse(values, { name: name.error.issues[0]!.message });
    const file = form.get('file');
    if (!(file instanceof File) || file.size === 0) return refuse(values, { file: 'Choose a CSV file.' });
    if (file.size > 200_000)
      return refuse(values, { file: 'The file is larger than 200 kB: a size table is far smaller.' });
    const text = await file.text();
    let id = '';
    const refused = await orRefusal(values, async () => {
      id = await sizeCharts.create(scope, name.data, sizeCharts.readCsv(text));
    });
    if (refused) return refused;
    redirect(303, `/size-tables?table=${id}&done=brought-in`);
  },
  remove: async (event) => {
    const scope = allow(event, 'measurements: see');
    const read = z.object({ id: z.string() }).safeParse(Object.fromEntries(await event.request.formData()));
    if (!read.success) error(400, 'No table is named.');
    await orErrorPage(sizeCharts.remove(scope, read.data.id));
    redirect(303, '/size-tables?done=removed');
  }
};
