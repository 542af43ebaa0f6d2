import type { Knex } from 'knex';

/**
 * Clients, their dated sets of measurements, the studio's own size tables, and what was drafted from them. Sets are never changed:
 * a new measuring is a new set.
 */
export async function up(knex: Knex): Promise<void> {
  await knex.schema.createTable('clients', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable().references('studios.id').onDelete('CASCADE');
    t.text('name').notNullable();
    t.text('email').notNullable().defaultTo('');
    t.text('phone').notNullable().defaultTo('');
    t.text('note').notNullable().defaultTo('');
    t.integer('version').notNullable().defaultTo(1);
    /** Set when the personal data was erased on request; the name is a neutral one then. */
    t.integer('erased_at');
    t.integer('created_at').notNullable();
    t.integer('updated_at').notNullable();
    t.unique(['studio_id', 'id']);
    t.index(['studio_id', 'name']);
  });

  await knex.schema.createTable('measurement_sets', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable();
    t.text('client_id').notNullable();
    /** Plain date in the studio's zone. */
    t.text('taken_on').notNullable();
    t.text('taken_by').notNullable();
    t.text('posture').notNullable().defaultTo('');
    /** bra, none, corset, heels …, in the measurer's words. */
    t.text('worn').notNullable().defaultTo('');
    t.integer('created_at').notNullable();
    t.unique(['studio_id', 'id']);
    t.index(['studio_id', 'client_id', 'taken_on']);
    t.foreign(['studio_id', 'client_id'])
      .references(['studio_id', 'id'])
      .inTable('clients')
      .onDelete('CASCADE');
  });

  await knex.schema.createTable('measurements', (t) => {
    t.text('set_id').notNullable();
    t.text('studio_id').notNullable();
    t.text('point').notNullable();
    /** both, or left and right where they differ. */
    t.text('side').notNullable().defaultTo('both');
    /** Millimetres, and the text as typed; the second reading of a girth beside it. */
    t.float('mm').notNullable();
    t.text('typed').notNullable();
    t.float('second_mm');
    t.text('second_typed').notNullable().defaultTo('');
    t.primary(['set_id', 'point', 'side']);
    t.foreign(['studio_id', 'set_id'])
      .references(['studio_id', 'id'])
      .inTable('measurement_sets')
      .onDelete('CASCADE');
  });

  await knex.schema.createTable('size_charts', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable().references('studios.id').onDelete('CASCADE');
    t.text('name').notNullable();
    /** Numbered JSON: sizes with their millimetres. */
    t.text('sizes').notNullable();
    t.integer('created_at').notNullable();
    t.integer('updated_at').notNullable();
    t.unique(['studio_id', 'id']);
  });

  await knex.schema.createTable('draft_runs', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable().references('studios.id').onDelete('CASCADE');
    t.text('draft').notNullable();
    t.integer('draft_version').notNullable();
    t.text('client_id');
    t.text('set_id');
    /** The size of a table, where it was not drafted for a client: 'name of the table, size'. */
    t.text('size').notNullable().defaultTo('');
    /** Numbered JSON: the body, the choices. Emptied when the client's data is erased. */
    t.text('body').notNullable();
    t.text('choices').notNullable();
    /** The version that it became; its outlines are kept there. */
    t.text('style_version_id');
    t.integer('created_at').notNullable();
    t.text('created_by').notNullable();
    t.unique(['studio_id', 'id']);
    t.index(['studio_id', 'created_at']);
    t.index(['studio_id', 'style_version_id']);
    t.foreign(['studio_id', 'client_id']).references(['studio_id', 'id']).inTable('clients');
    t.foreign(['studio_id', 'set_id']).references(['studio_id', 'id']).inTable('measurement_sets');
    t.foreign(['studio_id', 'style_version_id']).references(['studio_id', 'id']).inTable('style_versions');
  });

  await knex.schema.alterTable('orders', (t) => {
    /** The client on file; orders may also name a client only in words. */
    t.text('client_id');
    t.index(['studio_id', 'client_id']);
  });
}

export async function down(): Promise<void> {
  throw new Error('Migrations only go forward: restore a backup instead.');
}
