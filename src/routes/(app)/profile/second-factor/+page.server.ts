import { redirect } from '@sveltejs/kit';
import QRCode from 'qrcode';
import { z } from 'zod';
import { readForm, refuse } from '$lib/server/forms';
import { signedIn } from '$lib/server/guard';
import * as passwordChanges from '$lib/server/password-changes';
import { Problem } from '$lib/server/problem';
import * as secondFactor from '$lib/server/second-factor';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const { user } = signedIn(event);
  const on = await secondFactor.has(user.id);
  const started = on ? null : await secondFactor.begin(user);
  return {
    on,
    due: event.locals.secondFactorDue === true,
    codesLeft: on ? await secondFactor.codesLeft(user.id) : 0,
    secret: started?.secret ?? null,
    picture: started ? await QRCode.toDataURL(started.uri, { margin: 1, width: 352 }) : null,
    done: event.url.searchParams.get('done')
  };
};

const password = z
  .string({ error: 'Type your present password.' })
  .min(1, 'Type your present password.')
  .max(1000);
const code = z
  .string({ error: 'Type the code.' })
  .trim()
  .min(1, 'Type the code.')
  .max(60, 'No code is as long.');

export const actions: Actions = {
  turnOn: async (event) => {
    const { user } = signedIn(event);
    const read = await readForm(event.request, z.object({ password, code }));
    if (!read.ok) return read.refusal;
    const wrong = await refusalOf(() => passwordChanges.confirm(user.id, read.data.password));
    if (wrong) return refuse(read.values, { password: wrong.message }, wrong.status);
    let codes: string[] = [];
    const no = await refusalOf(async () => {
      codes = await secondFactor.confirm(user, read.data.code);
    });
    return no ? refuse(read.values, { code: no.message }, no.status) : { codes };
  },
  renewCodes: async (event) => {
    const { user } = signedIn(event);
    const read = await readForm(event.request, z.object({ password, code }));
    if (!read.ok) return read.refusal;
    const refused = await bothRight(user, read.data, read.values);
    return refused ?? { codes: await secondFactor.renewCodes(user.id) };
  },
  turnOff: async (event) => {
    const { user } = signedIn(event);
    const read = await readForm(event.request, z.object({ password, code }));
    if (!read.ok) return read.refusal;
    const refused = await bothRight(user, read.data, read.values);
    if (refused) return refused;
    await secondFactor.turnOff(user.id);
    redirect(303, '/profile/second-factor?done=off');
  }
};

/** Password and code, both asked again before the factor changes; null when both are right. */
async function bothRight(
  user: { id: string; email: string },
  given: { password: string; code: string },
  values: Record<string, string>
) {
  const wrong = await refusalOf(() => passwordChanges.confirm(user.id, given.password));
  if (wrong) return refuse(values, { password: wrong.message }, wrong.status);
  const no = await refusalOf(() => secondFactor.take(user, given.code));
  return no ? refuse(values, { code: no.message }, no.status) : null;
}

async function refusalOf(work: () => Promise<unknown>): Promise<Problem | null> {
  try {
    await work();
    return null;
  } catch (refusal) {
    if (refusal instanceof Problem) return refusal;
    throw refusal;
  }
}
