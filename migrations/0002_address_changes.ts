import type { Knex } from 'knex';

/** A new e-mail address of a person counts only after its link was opened. */
export async function up(knex: Knex): Promise<void> {
  await knex.schema.createTable('address_changes', (t) => {
    t.text('id').primary();
    t.text('user_id').notNullable().references('users.id').onDelete('CASCADE');
    t.text('token_hash').notNullable().unique();
    t.text('email').notNullable();
    t.integer('expires_at').notNullable();
    t.integer('used_at');
    t.integer('created_at').notNullable();
    t.index(['user_id']);
  });
}

export async function down(): Promise<void> {
  throw new Error('Migrations only go forward: restore a backup instead.');
}
