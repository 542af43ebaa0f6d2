import { createHash } from 'node:crypto';
import type { Knex } from 'knex';
import { dayAt } from '$lib/units/days';
import type { LayDocument } from '$lib/lay/document';
import { PANEL_SET_SCHEMA, panelSetSchema } from '$lib/pattern/panel';
import * as accounts from './accounts';
import * as audit from './audit';
import * as clothLengths from './cloth-lengths';
import * as clothWidths from './cloth-widths';
import * as clientLinks from './client-links';
import * as cloths from './cloths';
import { database } from './database';
import * as shelf from './demo/cloth-shelf';
import * as content from './demo/content';
import * as money from './demo/money';
import { placeAll } from './demo/first-fit';
import { spoil } from './demo/spoil';
import * as layRelease from './lay-release';
import * as lays from './lays';
import { moneyDefaults, saveMoneyDefaults } from './money-defaults';
import * as orderQuestions from './order-questions';
import * as orders from './orders';
import { hashPassword } from './passwords';
import * as payments from './payments';
import { emptySheet } from './price-sheet';
import * as prices from './prices';
import * as quotes from './quotes';
import { studioScope, type Scope } from './scope';
import * as studios from './studios';

/*
 * The demo: an invented workroom with styles, cloths and orders to walk through. It can be filled into any studio and
 * cleared again. Its rows have ids made from their studio and key, so that filling twice changes nothing and clearing
 * finds exactly what filling made.
 */

/** The id of a thing of the demo in a studio: a UUIDv8 (RFC 9562) of the SHA-256 of both. */
export function demoId(studio: string, key: string): string {
  const bytes = createHash('sha256').update(`warpwise demo\n${studio}\n${key}`).digest().subarray(0, 16);
  bytes[6] = 0x80 | (bytes[6]! & 0x0f);
  bytes[8] = 0x80 | (bytes[8]! & 0x3f);
  const hex = bytes.toString('hex');
  return `${hex.slice(0, 8)}-${hex.slice(8, 12)}-${hex.slice(12, 16)}-${hex.slice(16, 20)}-${hex.slice(20)}`;
}

/** The order to begin with, if the demo is in this studio. */
export async function firstOrder(scope: Scope): Promise<string | null> {
  const id = demoId(scope.studio, `order ${content.firstOrder}`);
  const row = await database()('orders').where({ studio_id: scope.studio, id }).first('id');
  return row ? id : null;
}

/** Whether anything of the demo is in this studio. */
export async function isFilled(scope: Scope): Promise<boolean> {
  const ids = content.orders.map(({ key }) => demoId(scope.studio, `order ${key}`));
  return (
    (await database()('orders').where({ studio_id: scope.studio }).whereIn('id', ids).first('id')) !==
    undefined
  );
}

/**
 * Fills a studio with the demo's styles, cloths, orders and lays; what is there already stays as it is. Gives the id of
 * the order to begin with.
 */
export async function fill(scope: Scope, now: number = Date.now()): Promise<string> {
  await addStyles(scope, now);
  for (const { key, cloth } of content.cloths) {
    const id = demoId(scope.studio, `cloth ${key}`);
    if (!(await has('cloths', scope, id))) await cloths.create(scope, cloth, { id, now });
  }
  await fillShelf(scope, now);
  const studio = await studios.read(scope);
  const today = Date.parse(`${dayAt(now, studio.timeZone)}T00:00:00Z`);
  let added = false;
  for (const order of content.orders) {
    const id = demoId(scope.studio, `order ${order.key}`);
    if (await has('orders', scope, id)) continue;
    added = true;
    const dueDate =
      order.dueIn === null ? null : new Date(today + order.dueIn * 86_400_000).toISOString().slice(0, 10);
    await orders.create(
      scope,
      { clientName: order.clientName, stage: order.stage, note: order.note, dueDate },
      order.lines.map((line) => ({
        styleVersionId: demoId(scope.studio, `style ${line.style} 1`),
        label: line.label,
        quantity: line.quantity,
        cloths: Object.fromEntries(
          Object.entries(line.cloths).map(([role, key]) => [role, demoId(scope.studio, `cloth ${key}`)])
        )
      })),
      { id, now }
    );
    for (const lay of order.lays) await addLay(scope, id, lay, now);
  }
  if (added) await audit.recordBy(scope, 'demo: filled', scope.studio);
  return demoId(scope.studio, `order ${content.firstOrder}`);
}

/** Rolls, remnants and the widths that cloths are sold in. */
async function fillShelf(scope: Scope, now: number): Promise<void> {
  for (const { key, cloth, input, flaws } of shelf.lengths) {
    const id = demoId(scope.studio, `length ${key}`);
    if (await has('cloth_lengths', scope, id)) continue;
    await clothLengths.create(scope, demoId(scope.studio, `cloth ${cloth}`), input, { id, now });
    for (const flaw of flaws) await clothLengths.addFlaw(scope, id, flaw, now);
  }
  for (const { key, cloth, width } of shelf.widths) {
    const id = demoId(scope.studio, `width ${key}`);
    if (await has('cloth_widths', scope, id)) continue;
    await clothWidths.create(scope, demoId(scope.studio, `cloth ${cloth}`), width, { id });
  }
}

async function has(table: string, scope: Scope, id: string): Promise<boolean> {
  return (await database()(table).where({ studio_id: scope.studio, id }).first('id')) !== undefined;
}

async function addStyles(scope: Scope, now: number): Promise<void> {
  for (const style of content.styles) {
    const id = demoId(scope.studio, `style ${style.key}`);
    if (await has('styles', scope, id)) continue;
    const panels = panelSetSchema.parse({ schema: PANEL_SET_SCHEMA, panels: style.panels });
    await database().transaction(async (trx) => {
      await trx('styles').insert({
        id,
        studio_id: scope.studio,
        name: style.name,
        kind: style.kind,
        note: style.note,
        created_at: now,
        updated_at: now
      });
      await trx('style_versions').insert({
        id: demoId(scope.studio, `style ${style.key} 1`),
        studio_id: scope.studio,
        style_id: id,
        number: 1,
        panels: JSON.stringify(panels),
        panel_count: panels.panels.length,
        note: 'Drawn for the demo',
        created_by: scope.user,
        created_at: now
      });
    });
  }
}

/** Makes a lay the way people do: through creating, saving, checking and, where it is to be, releasing. */
async function addLay(
  scope: Scope,
  orderId: string,
  lay: (typeof content.orders)[number]['lays'][number],
  now: number
): Promise<void> {
  const clothId = demoId(scope.studio, `cloth ${lay.cloth}`);
  const { id } = await lays.create(scope, { orderId, clothId, name: lay.name }, now);
  const made = await lays.read(scope, id);
  const placed = placeAll(made.document, made.panels);
  const document: LayDocument = lay.as === 'faulty' ? spoil(placed, made.panels) : placed;
  const saveId = demoId(scope.studio, `save ${orderId} ${lay.cloth}`);
  const { version } = await lays.save(scope, id, { version: made.version, saveId, document }, now);
  await lays.check(scope, id, version);
  await lays.choose(scope, id);
  if (lay.as === 'released') await layRelease.release(scope, id, { version, name: 'For cutting' }, now);
}

/**
 * Takes the demo out of a studio: its orders with their lays, and its styles and cloths unless an order of the studio's own
 * takes them. When no own order was opened, numbers begin again. Gives what had to stay.
 */
export async function clear(scope: Scope): Promise<{ kept: string[] }> {
  const ids = (kind: string, items: readonly { key: string }[]) =>
    items.map(({ key }) => demoId(scope.studio, `${kind} ${key}`));
  const kept = await database().transaction(async (trx) => {
    await trx('orders')
      .where({ studio_id: scope.studio })
      .whereIn('id', ids('order', content.orders))
      .delete();
    const left = [
      ...(await removeUnused(trx, scope, 'styles', ids('style', content.styles), (style) =>
        trx('order_items')
          .join('style_versions', 'style_versions.id', 'order_items.style_version_id')
          .where({ 'order_items.studio_id': scope.studio, 'style_versions.style_id': style })
          .first('order_items.id')
      )),
      ...(await removeUnused(
        trx,
        scope,
        'cloths',
        ids('cloth', content.cloths),
        async (cloth) =>
          (await trx('order_item_cloths').where({ studio_id: scope.studio, cloth_id: cloth }).first('id')) ??
          (await trx('lays').where({ studio_id: scope.studio, cloth_id: cloth }).first('id'))
      ))
    ];
    const [highest] = await trx('orders')
      .where({ studio_id: scope.studio })
      .max<{ number: number | null }[]>({ number: 'number' });
    await trx('studios')
      .where({ id: scope.studio })
      .update({ last_order_number: highest?.number ?? 0 });
    return left;
  });
  await audit.recordBy(scope, 'demo: cleared', scope.studio, { kept });
  return { kept };
}

/** Deletes rows that nothing of the studio's own takes; gives the names of the others. */
async function removeUnused(
  trx: Knex,
  scope: Scope,
  table: 'styles' | 'cloths',
  ids: readonly string[],
  use: (id: string) => PromiseLike<unknown>
): Promise<string[]> {
  const kept: string[] = [];
  for (const id of ids) {
    const row = await trx(table)
      .where({ studio_id: scope.studio, id })
      .first<{ name: string } | undefined>('name');
    if (!row) continue;
    if ((await use(id)) === undefined) await trx(table).where({ studio_id: scope.studio, id }).delete();
    else kept.push(row.name);
  }
  return kept;
}

/**
 * The demo installation: the invented workroom with its people, filled. Idempotent; passwords and names that were changed
 * stay changed. Never run it where real studios live: its sign-ins are printed.
 */
export async function seed(
  now: number = Date.now()
): Promise<{ studio: string; signIns: typeof content.people }> {
  const ids: { id: string; role: (typeof content.people)[number]['role'] }[] = [];
  for (const person of content.people) {
    const known = await accounts.findByEmail(person.email);
    const id =
      known?.id ??
      (await accounts.create(
        { ...person, passwordHash: await hashPassword(person.password) },
        undefined,
        now
      ));
    ids.push({ id, role: person.role });
  }
  const owner = ids[0]!.id;
  const home = await database()('studios')
    .join('memberships', 'memberships.studio_id', 'studios.id')
    .where({ 'studios.is_demo': 1, 'memberships.user_id': owner })
    .first<{ id: string } | undefined>('studios.id');
  const studio =
    home?.id ??
    (await studios.create({ name: content.studioName, owner, timeZone: 'Europe/Vienna' }, undefined, now));
  if (!home) {
    await database()('studios').where({ id: studio }).update({ is_demo: 1 });
    for (const { id, role } of ids.slice(1)) await studios.join(studio, id, role, undefined, now);
  }
  // The application lays, not the owner: the owner's first sign-in still begins at the demo order.
  await fill(studioScope(studio), now);
  await seedMoney(studioScope(studio), now);
  return { studio, signIns: content.people };
}

/**
 * Prices and quotes of the demo installation. They are mailed like real ones, so `fill` leaves them out: it may be called in the
 * studio of somebody whose mail server would send them.
 */
async function seedMoney(scope: Scope, now: number): Promise<void> {
  if (await database()('quotes').where({ studio_id: scope.studio }).first('id')) return;
  const before = await moneyDefaults(scope);
  if (before.hourly === 0) await saveMoneyDefaults(scope, { ...before, ...money.defaults });
  const { validDays, fittings, alterations, exclusions, terms } = await moneyDefaults(scope);
  const { timeZone } = await studios.read(scope);
  const day = dayAt(now, timeZone);
  const validUntil = dayAt(Date.parse(`${day}T12:00:00Z`) + validDays * 86_400_000, 'UTC');
  for (const quote of money.quotes) {
    const order = demoId(scope.studio, `order ${quote.order}`);
    if (!(await has('orders', scope, order))) continue;
    const cloths = Object.entries(quote.byHand).map(([key, byHand]) => [
      demoId(scope.studio, `cloth ${key}`),
      { byHand, own: false }
    ]);
    await prices.save(
      scope,
      order,
      0,
      { ...emptySheet, ...quote.sheet, cloths: Object.fromEntries(cloths) },
      now
    );
    const words = { validUntil, fittings, dates: '', alterations, exclusions, terms };
    const number = await quotes.create(scope, order, words, now);
    await quotes.send(scope, order, number, quote.address, now);
    const { hash, document, deposit } = await quotes.read(scope, order, number, now);
    if (quote.agreed) {
      const answer = { number, hash, name: document.client, place: '192.0.2.7' };
      await quotes.agree(scope, order, answer, quote.address, now);
      const paid = { kind: 'deposit', method: 'transfer', amount: deposit, day, note: '' } as const;
      const id = demoId(scope.studio, `payment ${quote.order}`);
      await payments.recordByHand(scope, order, { ...paid, id, receiptTo: quote.address }, now);
    }
    const [link] = await clientLinks.list(scope, order);
    if (quote.question)
      await orderQuestions.ask(
        { id: link!.id, studio: scope.studio, order, sentTo: quote.address },
        demoId(scope.studio, `question ${quote.order}`),
        quote.question,
        now
      );
  }
}
