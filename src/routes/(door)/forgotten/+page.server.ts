import { z } from 'zod';
import { address, readForm, refuse } from '$lib/server/forms';
import { mayAskForMail } from '$lib/server/mail-requests';
import * as resets from '$lib/server/resets';
import type { Actions } from './$types';

export const actions: Actions = {
  default: async ({ request, getClientAddress }) => {
    const read = await readForm(request, z.object({ email: address }));
    if (!read.ok) return read.refusal;
    const asked = await mayAskForMail(getClientAddress(), read.data.email);
    if (asked.wait) return refuse(read.values, { '': asked.wait }, 429);
    if (asked.send) await resets.ask(read.data.email);
    return { sentTo: read.data.email };
  }
};
