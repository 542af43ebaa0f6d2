import type { Knex } from 'knex';

/*
 * Prices, quotes, the client's link, payments and questions. Money is minor units; a payment's amount is positive, its
 * kind says which way it went.
 */
export async function up(knex: Knex): Promise<void> {
  const ofOrder = (t: Knex.CreateTableBuilder) => {
    t.text('studio_id').notNullable();
    t.text('order_id').notNullable();
    t.foreign(['studio_id', 'order_id'])
      .references(['studio_id', 'id'])
      .inTable('orders')
      .onDelete('CASCADE');
  };

  /** What a person wrote about an order's price; the rest is computed. */
  await knex.schema.createTable('price_sheets', (t) => {
    ofOrder(t);
    t.integer('version').notNullable();
    t.text('document').notNullable();
    t.integer('updated_at').notNullable();
    t.primary(['studio_id', 'order_id']);
  });

  await knex.schema.createTable('quotes', (t) => {
    t.text('id').primary();
    ofOrder(t);
    /** 1, 2, 3 within the order. */
    t.integer('number').notNullable();
    /** draft, sent, agreed, superseded, declined or withdrawn. That it has run out follows from valid_until. */
    t.text('state').notNullable();
    /** Immutable: the quote as the client reads it, exactly these bytes. */
    t.binary('bytes').notNullable();
    /** SHA-256 over the bytes, hex. */
    t.text('hash').notNullable();
    t.text('currency').notNullable();
    t.integer('total').notNullable();
    t.integer('deposit').notNullable();
    t.text('valid_until').notNullable();
    /** What the order was when it was quoted: another fingerprint asks for a new quote. */
    t.text('fingerprint').notNullable();
    t.text('sent_to');
    t.integer('sent_at');
    t.text('agreed_name');
    t.integer('agreed_at');
    t.text('agreed_place');
    t.text('created_by').notNullable();
    t.integer('created_at').notNullable();
    t.unique(['studio_id', 'id']);
    t.unique(['order_id', 'number']);
    t.index(['studio_id', 'state', 'valid_until']);
  });

  /** The client's way in: the token itself is never stored. */
  await knex.schema.createTable('client_links', (t) => {
    t.text('id').primary();
    ofOrder(t);
    t.text('token_hash').notNullable().unique();
    t.text('sent_to').notNullable();
    t.integer('expires_at').notNullable();
    t.integer('revoked_at');
    t.integer('opened_at');
    t.text('created_by').notNullable();
    t.integer('created_at').notNullable();
    t.unique(['studio_id', 'id']);
    t.index(['studio_id', 'order_id']);
  });

  await knex.schema.createTable('payments', (t) => {
    t.text('id').primary();
    ofOrder(t);
    t.text('quote_id');
    /** deposit, balance, other or refund. */
    t.text('kind').notNullable();
    /** card, cash or transfer. */
    t.text('method').notNullable();
    /** waiting, settled, failed or expired. */
    t.text('state').notNullable();
    t.integer('amount').notNullable();
    t.text('currency').notNullable();
    /** The card host's names: its checkout session, and its payment (of a refund: the refund). */
    t.text('provider_session').unique();
    t.text('provider_payment').unique();
    /** Of a refund: what it gives back. */
    t.text('refund_of');
    t.text('receipt_to');
    t.text('note').notNullable().defaultTo('');
    t.text('error');
    /** The day of a payment by hand as it was written; of a card payment the day it was settled. */
    t.text('day');
    t.integer('settled_at');
    t.text('created_by').notNullable();
    t.integer('created_at').notNullable();
    t.unique(['studio_id', 'id']);
    t.index(['studio_id', 'order_id']);
    t.index(['state', 'method', 'created_at']);
    t.foreign(['studio_id', 'quote_id']).references(['studio_id', 'id']).inTable('quotes');
    t.foreign(['studio_id', 'refund_of']).references(['studio_id', 'id']).inTable('payments');
  });

  /** What the card host told, each event once. */
  await knex.schema.createTable('payment_events', (t) => {
    /** The card host's own id. */
    t.text('id').primary();
    t.text('type').notNullable();
    t.text('payment_id').references('payments.id').onDelete('CASCADE');
    /** What came of it. */
    t.text('outcome').notNullable();
    t.integer('received_at').notNullable();
  });

  await knex.schema.createTable('order_questions', (t) => {
    t.text('id').primary();
    ofOrder(t);
    t.text('link_id').notNullable();
    t.text('words').notNullable();
    t.integer('asked_at').notNullable();
    t.integer('answered_at');
    t.text('answered_by');
    t.unique(['studio_id', 'id']);
    t.index(['studio_id', 'order_id', 'asked_at']);
    t.foreign(['studio_id', 'link_id'])
      .references(['studio_id', 'id'])
      .inTable('client_links')
      .onDelete('CASCADE');
  });
}

export async function down(): Promise<void> {
  throw new Error('Migrations only go forward: restore a backup instead.');
}
