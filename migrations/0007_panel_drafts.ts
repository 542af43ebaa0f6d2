import type { Knex } from 'knex';

/**
 * Working copies of the panel desk, one a style, and what a version was changed by hand. Adding a column without a default rebuilds nothing.
 */
export async function up(knex: Knex): Promise<void> {
  await knex.schema.createTable('panel_drafts', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable();
    t.text('style_id').notNullable();
    /** The number of the style version that the copy was made from. */
    t.integer('base_version').notNullable();
    /** Counts accepted saves. */
    t.integer('version').notNullable();
    /** A panel draft: panels and the edits that made them. */
    t.text('document').notNullable();
    /** The last save by the id that the browser gave it: a repeat gets the same answer. */
    t.text('save_id').notNullable();
    t.text('edited_by').notNullable();
    t.integer('created_at').notNullable();
    t.integer('updated_at').notNullable();
    t.unique(['studio_id', 'id']);
    t.unique(['studio_id', 'style_id']);
    t.foreign(['studio_id', 'style_id'])
      .references(['studio_id', 'id'])
      .inTable('styles')
      .onDelete('CASCADE');
  });
  await knex.schema.alterTable('style_versions', (t) => {
    /** What was changed by hand since the panels were drafted or uploaded: a list; null where nothing was. */
    t.text('hand_edits');
  });
}

export async function down(): Promise<void> {
  throw new Error('Migrations only go forward: restore a backup instead.');
}
