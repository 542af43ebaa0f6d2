import type { Knex } from 'knex';

/** Where an owner lets an order be cut although its deposit has not come in: who, when, and why. */
export async function up(knex: Knex): Promise<void> {
  await knex.schema.createTable('deposit_waivers', (t) => {
    t.text('order_id').primary();
    t.text('studio_id').notNullable();
    t.text('note').notNullable();
    t.text('by').notNullable();
    t.integer('at').notNullable();
    t.foreign(['studio_id', 'order_id'])
      .references(['studio_id', 'id'])
      .inTable('orders')
      .onDelete('CASCADE');
  });
}

export async function down(): Promise<void> {
  throw new Error('Migrations only go forward: restore a backup instead.');
}
