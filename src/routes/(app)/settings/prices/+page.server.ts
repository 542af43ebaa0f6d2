import { redirect } from '@sveltejs/kit';
import { moneyDigits } from '$lib/units/money';
import { shareDigits } from '$lib/units/share';
import { readForm } from '$lib/server/forms';
import { allow } from '$lib/server/guard';
import { LAW_NOTICE, moneyDefaults, moneyForm, saveMoneyDefaults } from '$lib/server/money-defaults';
import * as studios from '$lib/server/studios';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'studio: manage');
  const { currency } = await studios.read(scope);
  const money = await moneyDefaults(scope);
  return {
    currency,
    values: {
      hourly: moneyDigits(money.hourly, currency),
      overhead: shareDigits(money.overhead),
      margin: shareDigits(money.margin),
      taxMode: money.tax.mode as string,
      taxRate: shareDigits(money.tax.rate),
      depositShare: shareDigits(money.depositShare),
      roundTo: moneyDigits(money.roundTo, currency),
      validDays: String(money.validDays),
      fittings: String(money.fittings),
      terms: money.terms,
      alterations: money.alterations,
      exclusions: money.exclusions,
      letterhead: money.letterhead
    },
    law: LAW_NOTICE,
    saved: event.url.searchParams.has('saved')
  };
};

export const actions: Actions = {
  default: async (event) => {
    const scope = allow(event, 'studio: manage');
    const { currency } = await studios.read(scope);
    const form = await readForm(event.request, moneyForm(currency));
    if (!form.ok) return form.refusal;
    await saveMoneyDefaults(scope, form.data);
    redirect(303, '/settings/prices?saved');
  }
};
