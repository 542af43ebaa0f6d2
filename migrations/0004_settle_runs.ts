import type { Knex } from 'knex';

/** Settle runs: the lay as it was when the run began, and what the person made of its result. The job does the rest. */
export async function up(knex: Knex): Promise<void> {
  await knex.schema.createTable('settle_runs', (t) => {
    t.text('job_id').primary().references('jobs.id').onDelete('CASCADE');
    t.text('studio_id').notNullable();
    t.text('lay_id').notNullable();
    t.integer('lay_version').notNullable();
    t.text('document').notNullable();
    t.text('panels').notNullable();
    /** Budget, from, pieces, seed. */
    t.text('choice').notNullable();
    /** taken or left; null while the result is on offer. */
    t.text('answer');
    t.integer('created_at').notNullable();
    t.index(['studio_id', 'lay_id', 'created_at']);
    t.foreign(['studio_id', 'lay_id']).references(['studio_id', 'id']).inTable('lays').onDelete('CASCADE');
  });
}

export async function down(): Promise<void> {
  throw new Error('Migrations only go forward: restore a backup instead.');
}
