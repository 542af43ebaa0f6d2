import { redirect } from '@sveltejs/kit';
import * as clients from '$lib/server/clients';
import { refuse, typedValues } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import { readMeasurements } from '$lib/server/measurement-form';
import * as sets from '$lib/server/measurement-sets';
import { today } from '$lib/server/studio-day';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'measurements: see');
  const client = await orErrorPage(clients.read(scope, event.params.id));
  const [last] = await sets.list(scope, client.id);
  const set = last ? await sets.read(scope, last.id) : null;
  // A new set starts from the last: the same points, as they were typed.
  const values: Record<string, string> = {
    takenOn: today(event.locals.studio!.timeZone),
    takenBy: event.locals.person.user!.name,
    posture: set?.posture ?? '',
    worn: set?.worn ?? ''
  };
  for (const { point, side, typed } of set?.measured ?? [])
    values[side === 'both' ? point : `${point}.${side}`] = typed;
  return {
    client: { id: client.id, name: client.name },
    values,
    last: set?.takenOn ?? null,
    unit: event.locals.studio!.lengthUnit
  };
};

export const actions: Actions = {
  default: async (event) => {
    const scope = allow(event, 'measurements: see');
    const client = await orErrorPage(clients.read(scope, event.params.id));
    const values = typedValues(await event.request.formData());
    const read = readMeasurements(values, event.locals.studio!.lengthUnit);
    if (!read.ok) {
      // Where there are only doubts, the page offers to keep the numbers as they are.
      return refuse({ ...values, doubtsOnly: read.onlyDoubts ? 'yes' : '' }, read.errors);
    }
    const id = await sets.create(scope, client.id, read.set);
    redirect(303, `/clients/${client.id}/measurements/${id}`);
  }
};
