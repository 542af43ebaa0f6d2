import type { Knex } from 'knex';

/** What the cutter ticked off, and what was really cut. */
export async function up(knex: Knex): Promise<void> {
  await knex.schema.createTable('cut_ticks', (t) => {
    t.text('studio_id').notNullable();
    t.text('revision_id').notNullable();
    /** The placement of the revision that was cut. */
    t.text('placement').notNullable();
    t.text('by').notNullable();
    t.integer('at').notNullable();
    t.primary(['revision_id', 'placement']);
    t.foreign(['studio_id', 'revision_id'])
      .references(['studio_id', 'id'])
      .inTable('lay_revisions')
      .onDelete('CASCADE');
  });
  await knex.schema.createTable('cut_records', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable();
    t.text('lay_id').notNullable();
    t.text('revision_id').notNullable();
    /** Cloth really used, ends included, millimetres. */
    t.float('length_used').notNullable();
    t.float('width_met');
    /** What was met in the cloth, what was cut again and why: the cutter's words. */
    t.text('flaws').notNullable().defaultTo('');
    t.text('recuts').notNullable().defaultTo('');
    t.text('by').notNullable();
    t.integer('at').notNullable();
    t.unique(['studio_id', 'id']);
    t.unique(['lay_id']);
    t.foreign(['studio_id', 'lay_id']).references(['studio_id', 'id']).inTable('lays').onDelete('CASCADE');
    t.foreign(['studio_id', 'revision_id']).references(['studio_id', 'id']).inTable('lay_revisions');
  });
}

export async function down(): Promise<void> {
  throw new Error('Migrations only go forward: restore a backup instead.');
}
