import { redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { line, readForm } from '$lib/server/forms';
import { allow } from '$lib/server/guard';
import * as studios from '$lib/server/studios';
import type { Actions, PageServerLoad } from './$types';

/** What this machine's time zone data knows, with UTC, which its list leaves out. */
const timeZones = ['UTC', ...Intl.supportedValuesOf('timeZone').filter((zone) => zone !== 'UTC')];
const currencies = Intl.supportedValuesOf('currency');

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'studio: manage');
  const { name, currency, lengthUnit, timeZone } = await studios.read(scope);
  const words = new Intl.DisplayNames('en', { type: 'currency' });
  return {
    settings: { name, currency, lengthUnit, timeZone },
    timeZones,
    currencies: currencies.map((code) => ({ value: code, word: `${code}, ${words.of(code)}` })),
    saved: event.url.searchParams.has('saved')
  };
};

const form = z.object({
  name: line('What is the studio called?', 80),
  currency: z
    .string({ error: 'Choose a currency.' })
    .refine((code) => currencies.includes(code), 'Choose a currency of the list.'),
  lengthUnit: z.enum(['cm', 'in'], { error: 'Choose centimetres or inches.' }),
  timeZone: z
    .string({ error: 'Choose a time zone.' })
    .refine((zone) => timeZones.includes(zone), 'Choose a time zone of the list.')
});

export const actions: Actions = {
  default: async (event) => {
    const scope = allow(event, 'studio: manage');
    const read = await readForm(event.request, form);
    if (!read.ok) return read.refusal;
    await studios.update(scope, read.data);
    redirect(303, '/settings?saved');
  }
};
