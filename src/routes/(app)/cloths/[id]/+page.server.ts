import { redirect } from '@sveltejs/kit';
import { moneyDigits } from '$lib/units/money';
import { clothForm } from '$lib/server/cloth-form';
import * as cloths from '$lib/server/cloths';
import { readForm } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import { may } from '$lib/server/permissions';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'cloths: see');
  const cloth = await orErrorPage(cloths.read(scope, event.params.id));
  const { lengthUnit, currency } = event.locals.studio!;
  return {
    cloth,
    uses: await cloths.uses(scope, cloth.id),
    values: {
      name: cloth.name,
      fibre: cloth.fibre,
      fullWidth: cloth.typed.fullWidth,
      usableWidth: cloth.typed.usableWidth,
      sides: cloth.sidesAlike ? 'alike' : 'different',
      nap: cloth.nap,
      colour: cloth.colour,
      ...(cloth.price
        ? { price: moneyDigits(cloth.price.minor, currency), priceUnit: cloth.price.unit }
        : {}),
      ...(cloth.supplierNote === undefined ? {} : { supplierNote: cloth.supplierNote })
    } as Record<string, string>,
    mayChange: may(scope.role, 'cloths: change'),
    lengthUnit,
    currency,
    saved: event.url.searchParams.has('saved')
  };
};

export const actions: Actions = {
  save: async (event) => {
    const scope = allow(event, 'cloths: change');
    const form = await readForm(event.request, clothForm(event.locals.studio!));
    if (!form.ok) return form.refusal;
    await orErrorPage(cloths.update(scope, event.params.id, form.data));
    redirect(303, `/cloths/${event.params.id}?saved`);
  },
  archive: async (event) => {
    const scope = allow(event, 'cloths: change');
    await orErrorPage(cloths.archive(scope, event.params.id, true));
    redirect(303, '/cloths');
  },
  putBack: async (event) => {
    const scope = allow(event, 'cloths: change');
    await orErrorPage(cloths.archive(scope, event.params.id, false));
    redirect(303, `/cloths/${event.params.id}`);
  }
};
