import { redirect, type ActionFailure } from '@sveltejs/kit';
import { clothCost } from '$lib/cloth/cost';
import { estimatedLength, matchingExtra } from '$lib/cloth/what-to-buy';
import { leastLength, neededArea } from '$lib/lay/least-length';
import { clothToBuy } from '$lib/lay/readings';
import { newLay } from '$lib/lay/stored-lay';
import { bestLengthFirst, cheapest, fits, type Tried } from '$lib/lay/trial';
import { layeredWidth } from '$lib/lay/yields';
import { parseLength } from '$lib/units/length';
import * as clothLengths from '$lib/server/cloth-lengths';
import * as clothTrials from '$lib/server/cloth-trials';
import * as clothWidths from '$lib/server/cloth-widths';
import { refuse, typedValues, type Refused } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import * as jobs from '$lib/server/jobs';
import * as layFacts from '$lib/server/lay-facts';
import { kindsOf, pastEfficiency } from '$lib/server/past-efficiency';
import * as orders from '$lib/server/orders';
import { may } from '$lib/server/permissions';
import { Problem } from '$lib/server/problem';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'lays: see');
  const { id, cloth: clothId } = event.params;
  const order = await orErrorPage(orders.read(scope, id));
  const facts = await orErrorPage(layFacts.read(scope, [id], clothId));
  const { lengthUnit, currency } = event.locals.studio!;
  const strip = layFacts.stripOf(facts.cloth);
  const empty = newLay({ strip, garments: facts.garments, book: facts.book, takes: facts.takes });
  const area = neededArea(empty, facts.book);
  const past = await pastEfficiency(scope, await kindsOf(scope, id));

  const asked = event.url.searchParams;
  const typed = { repeat: asked.get('repeat') ?? '', matched: asked.get('matched') ?? '' };
  const repeat = typed.repeat === '' ? 0 : (parseLength(typed.repeat, lengthUnit, { most: 5000 }).mm ?? 0);
  const matched = Math.min(100, Math.max(0, Math.floor(Number(typed.matched) || 0)));
  const extra = matchingExtra(repeat, matched);
  const lengthUsed = estimatedLength({
    area,
    width: layeredWidth(strip),
    efficiency: past.efficiency,
    matchingExtra: extra
  });
  const toBuy = clothToBuy(strip, lengthUsed);

  const lengths = await clothLengths.list(scope, clothId);
  const widths = await clothWidths.list(scope, clothId);
  const onLengths = await clothTrials.read(scope, id, clothId, 'lengths');
  const onWidths = await clothTrials.read(scope, id, clothId, 'widths');
  const { price } = facts.cloth;
  const priceOf = (width: string) =>
    width === 'own' ? (price ?? null) : (widths.find((one) => one.id === width)?.price ?? null);
  const costOf = (one: Tried): number | null => {
    const its = priceOf(one.id);
    return its && fits(one) ? clothCost(one.toBuy.total, its.minor, its.unit) : null;
  };
  // Said once all are tried: until then a cheaper one may come.
  const compared = onWidths?.state === 'done' && onWidths.tried.length > 1 ? onWidths.tried : [];
  const best = cheapest(compared, costOf);
  return {
    order: { id: order.id, number: order.number, clientName: order.clientName },
    cloth: { id: facts.cloth.id, name: facts.cloth.name, colour: facts.cloth.colour },
    pieces: empty.needs.reduce((sum, { count }) => sum + count, 0),
    area,
    least: leastLength(empty, facts.book),
    panels: Object.fromEntries(Object.entries(facts.book).map(([key, { shape }]) => [key, shape.name])),
    estimate: {
      past,
      extra,
      toBuy,
      typed,
      cost: price ? clothCost(toBuy.total, price.minor, price.unit) : null
    },
    atHand: lengths
      .filter((length) => length.order === null || length.order.id === id)
      .map(({ id: length, name, kind, length: long, usableWidth, outline, batch, order: held }) => ({
        id: length,
        name,
        kind,
        length: long,
        usableWidth,
        odd: outline !== null,
        batch,
        reserved: held !== null
      })),
    onLengths: onLengths && {
      ...bare(onLengths),
      tried: onLengths.tried.toSorted(bestLengthFirst).map(shown)
    },
    widths: [
      { id: 'own', usableWidth: facts.cloth.usableWidth, fullWidth: facts.cloth.fullWidth, seller: '' },
      ...widths
    ].map(({ id: width, usableWidth, fullWidth, seller }) => ({ id: width, usableWidth, fullWidth, seller })),
    onWidths: onWidths && {
      ...bare(onWidths),
      tried: onWidths.tried.map((one) => ({
        ...shown(one),
        cost: costOf(one),
        cheapest: one.id === best?.id
      }))
    },
    tries: [...clothTrials.TRY_SECONDS],
    mayTry: may(scope.role, 'lays: change'),
    seesPrices: may(scope.role, 'prices: see'),
    lengthUnit,
    currency
  };
};

/** A trial without its tries. */
const bare = ({ job, state, seconds, error, of }: clothTrials.Trial) => ({ job, state, seconds, error, of });
/** A try without its placements: the page does not draw them. */
const shown = ({
  id,
  needed,
  leftOver,
  lengthUsed,
  efficiency,
  leastLength: least,
  toBuy,
  hopeless
}: Tried) => ({
  id,
  needed,
  leftOver,
  lengthUsed,
  efficiency,
  least,
  total: toBuy.total,
  hopeless,
  fits: fits({ hopeless, leftOver })
});

/** Runs a change: a refusal is told on the page; a thing of another studio is an error page. */
async function told(
  values: Record<string, string>,
  work: () => Promise<unknown>
): Promise<ActionFailure<Refused> | undefined> {
  try {
    await work();
    return undefined;
  } catch (refusal) {
    if (!(refusal instanceof Problem) || refusal.status === 404) return orErrorPage(Promise.reject(refusal));
    return refuse(values, { '': refusal.detail }, refusal.status);
  }
}

export const actions: Actions = {
  try: async (event) => {
    const scope = allow(event, 'lays: change');
    const { id: order, cloth } = event.params;
    await orErrorPage(layFacts.read(scope, [order], cloth));
    const values = typedValues(await event.request.formData());
    const question = clothTrials.questions.find((one) => one === values.question);
    if (!question) return refuse(values, { '': 'Choose what to try the pieces on.' });
    const seconds = clothTrials.TRY_SECONDS.find((one) => String(one) === values.seconds) ?? 5;
    const refused = await told(values, () => clothTrials.create(scope, { order, cloth, question, seconds }));
    return refused ?? redirect(303, `/orders/${order}/cloth/${cloth}#${question}`);
  },
  stop: async (event) => {
    const scope = allow(event, 'lays: change');
    const { id: order, cloth } = event.params;
    await orErrorPage(layFacts.read(scope, [order], cloth));
    const values = typedValues(await event.request.formData());
    const refused = await told(values, () => jobs.stop(scope, values.job ?? ''));
    return refused ?? redirect(303, `/orders/${order}/cloth/${cloth}`);
  },
  take: async (event) => {
    const scope = allow(event, 'lays: change');
    const { id: order, cloth } = event.params;
    await orErrorPage(layFacts.read(scope, [order], cloth));
    const values = typedValues(await event.request.formData());
    let lay = '';
    const refused = await told(values, async () => {
      lay = (await clothTrials.takeLength(scope, { order, cloth }, values.length ?? '')).id;
    });
    return refused ?? redirect(303, `/lays/${lay}`);
  }
};
