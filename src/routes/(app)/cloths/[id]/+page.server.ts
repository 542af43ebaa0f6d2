import { redirect } from '@sveltejs/kit';
import { formatDecimal, MM_PER } from '$lib/units/length';
import { moneyDigits } from '$lib/units/money';
import { clothForm } from '$lib/server/cloth-form';
import * as clothLengths from '$lib/server/cloth-lengths';
import * as clothWidths from '$lib/server/cloth-widths';
import * as cloths from '$lib/server/cloths';
import { readForm, typedValues } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import { may } from '$lib/server/permissions';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'cloths: see');
  const cloth = await orErrorPage(cloths.read(scope, event.params.id));
  const { lengthUnit, currency } = event.locals.studio!;
  return {
    cloth,
    lengths: await clothLengths.list(scope, cloth.id),
    usedUp: await clothLengths.list(scope, cloth.id, { used: true }),
    widths: await clothWidths.list(scope, cloth.id),
    mayMeasure: may(scope.role, 'cloth lengths: change'),
    uses: await cloths.uses(scope, cloth.id),
    values: {
      name: cloth.name,
      fibre: cloth.fibre,
      fullWidth: cloth.typed.fullWidth,
      usableWidth: cloth.typed.usableWidth,
      sides: cloth.sidesAlike ? 'alike' : 'different',
      nap: cloth.nap,
      colour: cloth.colour,
      treatment: cloth.shrinkage.treatment,
      shrinkWarp: formatDecimal(cloth.shrinkage.warp * 100, 2),
      shrinkWeft: formatDecimal(cloth.shrinkage.weft * 100, 2),
      buyStep:
        lengthUnit === 'cm'
          ? `${formatDecimal(cloth.buyStep / 10, 3)} cm`
          : `${formatDecimal(cloth.buyStep / MM_PER.in, 3)} in`,
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
  addWidth: async (event) => {
    const scope = allow(event, 'cloths: change');
    const form = await readForm(event.request, clothWidths.widthForm(event.locals.studio!));
    if (!form.ok) return form.refusal;
    await orErrorPage(clothWidths.create(scope, event.params.id, form.data));
    redirect(303, `/cloths/${event.params.id}#widths`);
  },
  removeWidth: async (event) => {
    const scope = allow(event, 'cloths: change');
    const values = typedValues(await event.request.formData());
    await orErrorPage(clothWidths.remove(scope, event.params.id, values.width ?? ''));
    redirect(303, `/cloths/${event.params.id}#widths`);
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
