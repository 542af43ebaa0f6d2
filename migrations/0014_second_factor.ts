import type { Knex } from 'knex';

/** One-time codes as a second factor, the codes that replace a lost device, and sign-ins that wait for a code. */
export async function up(knex: Knex): Promise<void> {
  await knex.schema.createTable('second_factors', (t) => {
    t.text('user_id').primary().references('users.id').onDelete('CASCADE');
    /** Base32; the device holds the same. */
    t.text('secret').notNullable();
    /** null until a first code proved that the device has it. */
    t.integer('confirmed_at');
    /** The latest half minute whose code was used: none is taken twice. */
    t.integer('last_step').notNullable().defaultTo(0);
    t.integer('created_at').notNullable();
  });
  await knex.schema.createTable('recovery_codes', (t) => {
    t.text('code_hash').primary();
    t.text('user_id').notNullable().references('users.id').onDelete('CASCADE');
    t.integer('used_at');
    t.index(['user_id']);
  });
  await knex.schema.createTable('sign_in_waits', (t) => {
    t.text('token_hash').primary();
    t.text('user_id').notNullable().references('users.id').onDelete('CASCADE');
    t.integer('expires_at').notNullable();
    t.index(['user_id']);
  });
  await knex.schema.alterTable('studios', (t) => {
    /** 1: its owners must have a second factor. */
    t.integer('second_factor_required').notNullable().defaultTo(0);
  });
}

export async function down(): Promise<void> {
  throw new Error('Migrations only go forward: restore a backup instead.');
}
