import * as audit from './audit';
import { database } from './database';
import { newId } from './ids';
import { containing, pageOf, type Listing, type Page } from './listing';
import { notFound, Problem } from './problem';
import type { Scope } from './scope';

/*
 * Clients on file: name, contact, notes. Only for who may see contacts; others read the name that stands on the order.
 */

export interface ClientWords {
  readonly name: string;
  readonly email: string;
  readonly phone: string;
  readonly note: string;
}

export interface Client extends ClientWords {
  readonly id: string;
  readonly version: number;
  readonly erased: boolean;
  readonly createdAt: number;
  readonly updatedAt: number;
}

export interface ListedClient {
  readonly id: string;
  readonly name: string;
  readonly email: string;
  readonly phone: string;
  readonly erased: boolean;
  readonly orders: number;
  /** The newest set of measurements, a plain date. */
  readonly measuredOn: string | null;
}

interface Row extends ClientWords {
  id: string;
  version: number;
  erased_at: number | null;
  created_at: number;
  updated_at: number;
}

export const clientSorts = ['name', 'measured'] as const;
export type ClientSort = (typeof clientSorts)[number];

export async function list(scope: Scope, listing: Listing<ClientSort>): Promise<Page<ListedClient>> {
  const db = database();
  const counted = db('clients')
    .where({ studio_id: scope.studio })
    .select('id', 'name', 'email', 'phone', 'erased_at')
    .select(
      db.raw(
        '(select count(*) from orders where orders.studio_id = clients.studio_id and orders.client_id = clients.id) as orders'
      ),
      db.raw(
        '(select max(taken_on) from measurement_sets where measurement_sets.studio_id = clients.studio_id and measurement_sets.client_id = clients.id) as measured_on'
      )
    );
  const query = db.from(counted.as('listed')).select('*');
  containing(query, ['name', 'email', 'phone'], listing.search);
  const page = await pageOf<
    {
      id: string;
      name: string;
      email: string;
      phone: string;
      erased_at: number | null;
      orders: number;
      measured_on: string | null;
    },
    ClientSort
  >(query, listing, { name: 'name', measured: 'measured_on' }, 'id');
  return {
    ...page,
    rows: page.rows.map(({ erased_at, orders, measured_on, ...row }) => ({
      ...row,
      erased: erased_at !== null,
      orders: Number(orders),
      measuredOn: measured_on
    }))
  };
}

/** Every client by name, for choosing one. */
export async function choices(scope: Scope): Promise<{ id: string; name: string }[]> {
  return database()('clients')
    .where({ studio_id: scope.studio })
    .whereNull('erased_at')
    .orderBy('name')
    .select('id', 'name');
}

export async function read(scope: Scope, id: string): Promise<Client> {
  const row = await database()('clients').where({ studio_id: scope.studio, id }).first<Row | undefined>();
  if (!row) throw notFound('client');
  return {
    id: row.id,
    name: row.name,
    email: row.email,
    phone: row.phone,
    note: row.note,
    version: row.version,
    erased: row.erased_at !== null,
    createdAt: row.created_at,
    updatedAt: row.updated_at
  };
}

export async function create(scope: Scope, words: ClientWords, now = Date.now()): Promise<string> {
  const id = newId(now);
  await database()('clients').insert({
    id,
    studio_id: scope.studio,
    ...wordsOf(words),
    version: 1,
    created_at: now,
    updated_at: now
  });
  return id;
}

/** @throws Problem 409 when somebody changed the client since, or the data was erased. */
export async function update(
  scope: Scope,
  id: string,
  version: number,
  words: ClientWords,
  now = Date.now()
): Promise<void> {
  const changed = await database()('clients')
    .where({ studio_id: scope.studio, id, version })
    .whereNull('erased_at')
    .update({ ...wordsOf(words), version: version + 1, updated_at: now });
  if (changed === 1) return;
  await read(scope, id);
  throw new Problem(
    409,
    'client-out-of-date',
    'Somebody changed this client since you opened the page',
    'Your typing is kept. Look at what is there now, then save again.'
  );
}

const wordsOf = ({ name, email, phone, note }: ClientWords): ClientWords => ({ name, email, phone, note });

/** Orders of a client, newest first. */
export async function ordersOf(
  scope: Scope,
  id: string
): Promise<{ id: string; number: number; stage: string; dueDate: string | null }[]> {
  return database()('orders')
    .where({ studio_id: scope.studio, client_id: id })
    .orderBy('number', 'desc')
    .select({ id: 'id', number: 'number', stage: 'stage', dueDate: 'due_date' });
}

/**
 * Erases what is known of a person, at their wish: name, contact, notes, every measurement, and the body behind each draft. Kept, under
 * a neutral name, because accounts have to be: orders with their numbers, prices and payments, and the outlines of panels, which name
 * nobody.
 */
export async function erase(scope: Scope, id: string, now = Date.now()): Promise<void> {
  const client = await read(scope, id);
  const neutral = `Former client ${id.slice(-6)}`;
  await database().transaction(async (trx) => {
    await trx('draft_runs')
      .where({ studio_id: scope.studio, client_id: id })
      .update({ body: '{"schema":1,"body":{}}', choices: '{"schema":1,"choices":{}}', set_id: null });
    await trx('measurement_sets').where({ studio_id: scope.studio, client_id: id }).delete();
    await trx('orders')
      .where({ studio_id: scope.studio, client_id: id })
      .update({ client_name: neutral, note: '' });
    await trx('clients')
      .where({ studio_id: scope.studio, id })
      .update({
        name: neutral,
        email: '',
        phone: '',
        note: '',
        erased_at: now,
        version: client.version + 1,
        updated_at: now
      });
    await audit.recordBy(scope, 'client: data erased', id, {}, trx);
  });
}
