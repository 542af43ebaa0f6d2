import type { Knex } from 'knex';

/**
 * The cloth at hand: rolls and remnants with their flaws, the widths that a cloth is sold in, how a cloth shrinks and is sold,
 * which length a lay is made on, and which further orders a joint lay serves.
 */
export async function up(knex: Knex): Promise<void> {
  await knex.schema.alterTable('cloths', (t) => {
    /** none, enlarged, shrunkFirst or boughtShrunk; shares of one along warp and weft. */
    t.text('shrink_treatment').notNullable().defaultTo('none');
    t.float('shrink_warp').notNullable().defaultTo(0);
    t.float('shrink_weft').notNullable().defaultTo(0);
    /** What it is sold in whole multiples of, mm. */
    t.float('buy_step').notNullable().defaultTo(100);
  });

  await knex.schema.createTable('cloth_lengths', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable();
    t.text('cloth_id').notNullable();
    /** roll, remnant or client (the client's own). */
    t.text('kind').notNullable();
    t.text('name').notNullable();
    t.float('length').notNullable();
    t.float('usable_width').notNullable();
    /** As typed: {"length":"3 yd","usableWidth":"57 in"}. */
    t.text('typed').notNullable().defaultTo('{}');
    /** The edge of an odd remnant as JSON {schema, points}, x from its start, y from its near side; null for whole width. */
    t.text('outline');
    t.text('batch').notNullable().defaultTo('');
    t.text('place').notNullable().defaultTo('');
    t.text('note').notNullable().defaultTo('');
    /** Minor units for one price_unit; null: the price of the cloth. */
    t.integer('price');
    t.text('price_unit').notNullable().defaultTo('metre');
    t.text('photo_file_id');
    /** When the last of it was used; null while there is some. */
    t.integer('used_at');
    /** The order that it is reserved for. */
    t.text('order_id').references('orders.id').onDelete('SET NULL');
    /** Who signed the flaws of the client's own cloth off, and when. */
    t.text('signed_by');
    t.integer('signed_at');
    /** The length that it was left over from. */
    t.text('left_from');
    t.integer('version').notNullable().defaultTo(1);
    t.integer('created_at').notNullable();
    t.integer('updated_at').notNullable();
    t.unique(['studio_id', 'id']);
    t.index(['studio_id', 'cloth_id', 'used_at']);
    t.index(['studio_id', 'order_id']);
    t.foreign(['studio_id', 'cloth_id'])
      .references(['studio_id', 'id'])
      .inTable('cloths')
      .onDelete('CASCADE');
    t.foreign(['studio_id', 'photo_file_id']).references(['studio_id', 'id']).inTable('files');
  });

  await knex.schema.createTable('cloth_flaws', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable();
    t.text('length_id').notNullable();
    /** Middle of the flaw from the start of the length, and from where the usable width begins at the near selvedge. */
    t.float('from_end').notNullable();
    t.float('from_selvedge').notNullable();
    t.float('along').notNullable();
    t.float('across').notNullable();
    t.integer('hole').notNullable().defaultTo(0);
    t.text('note').notNullable().defaultTo('');
    t.index(['studio_id', 'length_id']);
    t.foreign(['studio_id', 'length_id'])
      .references(['studio_id', 'id'])
      .inTable('cloth_lengths')
      .onDelete('CASCADE');
  });

  /** The widths that a cloth is sold in, with what each costs. */
  await knex.schema.createTable('cloth_widths', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable();
    t.text('cloth_id').notNullable();
    t.text('seller').notNullable().defaultTo('');
    t.float('full_width').notNullable();
    t.float('usable_width').notNullable();
    t.integer('price');
    t.text('price_unit').notNullable().defaultTo('metre');
    t.float('buy_step').notNullable().defaultTo(100);
    t.unique(['studio_id', 'id']);
    t.index(['studio_id', 'cloth_id']);
    t.foreign(['studio_id', 'cloth_id'])
      .references(['studio_id', 'id'])
      .inTable('cloths')
      .onDelete('CASCADE');
  });

  /** The length that a lay is made on. */
  await knex.schema.createTable('lay_lengths', (t) => {
    t.text('lay_id').primary();
    t.text('studio_id').notNullable();
    t.text('length_id').notNullable();
    t.index(['studio_id', 'length_id']);
    t.foreign(['studio_id', 'lay_id']).references(['studio_id', 'id']).inTable('lays').onDelete('CASCADE');
    t.foreign(['studio_id', 'length_id']).references(['studio_id', 'id']).inTable('cloth_lengths');
  });

  /** The orders that a joint lay serves beside its first. */
  await knex.schema.createTable('lay_orders', (t) => {
    t.text('studio_id').notNullable();
    t.text('lay_id').notNullable();
    t.text('order_id').notNullable();
    t.primary(['lay_id', 'order_id']);
    t.index(['studio_id', 'order_id']);
    t.foreign(['studio_id', 'lay_id']).references(['studio_id', 'id']).inTable('lays').onDelete('CASCADE');
    t.foreign(['studio_id', 'order_id'])
      .references(['studio_id', 'id'])
      .inTable('orders')
      .onDelete('CASCADE');
  });
}

export async function down(): Promise<void> {
  throw new Error('Migrations only go forward: restore a backup instead.');
}
