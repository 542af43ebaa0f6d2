import { redirect } from '@sveltejs/kit';
import { readForm } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import { guideForm } from '$lib/server/guide-form';
import * as guides from '$lib/server/guides';
import * as jobs from '$lib/server/jobs';
import * as layRevisions from '$lib/server/lay-revisions';
import * as lays from '$lib/server/lays';
import { isReplaced } from '$lib/server/replaced-panels';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'guides: print');
  const { name, state, order } = await orErrorPage(lays.read(scope, event.params.id));
  const revisions = await layRevisions.list(scope, event.params.id);
  const asked = Number(event.url.searchParams.get('revision'));
  const chosen =
    revisions.find((one) => one.number === asked) ??
    revisions.find((one) => one.releasedAt !== null && one.withdrawnAt === null) ??
    revisions[0];
  return {
    lay: { id: event.params.id, name, state, orderId: order.id, orderNumber: order.number },
    replaced: await isReplaced(scope, event.params.id),
    revisions: revisions.map((one) => ({
      id: one.id,
      number: one.number,
      name: one.name,
      released: one.releasedAt !== null && one.withdrawnAt === null
    })),
    chosen: chosen?.id ?? '',
    guides: await guides.list(scope, event.params.id),
    lengthUnit: event.locals.studio!.lengthUnit,
    timeZone: event.locals.studio!.timeZone
  };
};

export const actions: Actions = {
  make: async (event) => {
    const scope = allow(event, 'guides: print');
    await orErrorPage(lays.read(scope, event.params.id));
    const form = await readForm(event.request, guideForm(event.locals.studio!.lengthUnit));
    if (!form.ok) return form.refusal;
    await orErrorPage(guides.create(scope, form.data.revision, form.data.choice));
    redirect(303, `/lays/${event.params.id}/guides`);
  },
  stop: async (event) => {
    const scope = allow(event, 'guides: print');
    await orErrorPage(lays.read(scope, event.params.id));
    const job = String((await event.request.formData()).get('job') ?? '');
    await orErrorPage(jobs.stop(scope, job));
    redirect(303, `/lays/${event.params.id}/guides`);
  }
};
