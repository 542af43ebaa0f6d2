import { error } from '@sveltejs/kit';
import { allow, orErrorPage } from '$lib/server/guard';
import * as layRevisions from '$lib/server/lay-revisions';
import * as lays from '$lib/server/lays';
import type { PageServerLoad } from './$types';

/** Two revisions of a lay: `?r=2&r=5`; one named is compared with the newest, none compares the two newest. */
export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'lays: see');
  const { id } = event.params;
  const lay = await orErrorPage(lays.read(scope, id));
  const revisions = await orErrorPage(layRevisions.list(scope, id));
  const named = event.url.searchParams.getAll('r').map(Number);
  if (named.some((number) => !Number.isInteger(number) || number < 1)) error(400, 'A revision has a number.');
  const numbers = [...new Set([...named, ...revisions.map(({ number }) => number)])]
    .slice(0, 2)
    .sort((a, b) => a - b);
  const two = await Promise.all(numbers.map((number) => orErrorPage(layRevisions.read(scope, id, number))));
  return {
    lay: {
      id: lay.id,
      name: lay.name,
      order: lay.order,
      cloth: { name: lay.cloth.name, colour: lay.cloth.colour }
    },
    revisions: revisions.map(({ number, name }) => ({ number, name })),
    two: two.map(({ revision, document, panels, verdict }) => ({ revision, document, panels, verdict })),
    unit: event.locals.studio!.lengthUnit,
    timeZone: event.locals.studio!.timeZone
  };
};
