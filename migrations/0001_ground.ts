import type { Knex } from 'knex';

/*
 * The first rows. Every row of a studio carries studio_id; children point to (studio_id, id), so that no row can
 * hang on another studio's. Instants are UTC milliseconds, dates plain text (2026-05-31), money minor units.
 */
export async function up(knex: Knex): Promise<void> {
  await knex.schema.createTable('studios', (t) => {
    t.text('id').primary();
    t.text('name').notNullable();
    t.text('currency').notNullable().defaultTo('EUR');
    t.text('length_unit').notNullable().defaultTo('cm');
    t.text('time_zone').notNullable().defaultTo('UTC');
    /** Studio settings that later issues add to: numbered JSON. */
    t.text('settings').notNullable().defaultTo('{"schema":1}');
    t.integer('last_order_number').notNullable().defaultTo(0);
    t.integer('is_demo').notNullable().defaultTo(0);
    t.integer('created_at').notNullable();
  });

  await knex.schema.createTable('users', (t) => {
    t.text('id').primary();
    t.text('email').notNullable().unique();
    t.text('name').notNullable();
    t.text('password_hash').notNullable();
    t.integer('created_at').notNullable();
  });

  await knex.schema.createTable('memberships', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable().references('studios.id').onDelete('CASCADE');
    t.text('user_id').notNullable().references('users.id').onDelete('CASCADE');
    t.text('role').notNullable();
    t.integer('disabled_at');
    t.integer('created_at').notNullable();
    t.unique(['studio_id', 'user_id']);
    t.unique(['studio_id', 'id']);
    t.index(['user_id']);
  });

  await knex.schema.createTable('sessions', (t) => {
    /** SHA-256 of the token in the cookie. */
    t.text('id').primary();
    /** What lists show and end a session by. */
    t.text('public_id').notNullable().unique();
    t.text('user_id').notNullable().references('users.id').onDelete('CASCADE');
    /** The studio that the person works in; null while they belong to none. */
    t.text('studio_id').references('studios.id').onDelete('SET NULL');
    t.text('user_agent').notNullable().defaultTo('');
    t.integer('created_at').notNullable();
    t.integer('last_used_at').notNullable();
    t.integer('expires_at').notNullable();
    t.index(['user_id']);
  });

  /** One-time links: sign-up, invitation, password reset. The token itself is never stored. */
  await knex.schema.createTable('sign_ups', (t) => {
    t.text('id').primary();
    t.text('token_hash').notNullable().unique();
    t.text('email').notNullable();
    t.text('name').notNullable();
    t.text('studio_name').notNullable();
    t.integer('expires_at').notNullable();
    t.integer('used_at');
    t.integer('created_at').notNullable();
  });

  await knex.schema.createTable('invitations', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable().references('studios.id').onDelete('CASCADE');
    t.text('token_hash').notNullable().unique();
    t.text('email').notNullable();
    t.text('role').notNullable();
    t.text('invited_by').references('users.id').onDelete('SET NULL');
    t.integer('expires_at').notNullable();
    t.integer('used_at');
    t.integer('revoked_at');
    t.integer('created_at').notNullable();
    t.index(['studio_id', 'created_at']);
  });

  await knex.schema.createTable('password_resets', (t) => {
    t.text('id').primary();
    t.text('user_id').notNullable().references('users.id').onDelete('CASCADE');
    t.text('token_hash').notNullable().unique();
    t.integer('expires_at').notNullable();
    t.integer('used_at');
    t.integer('created_at').notNullable();
  });

  await knex.schema.createTable('files', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable().references('studios.id').onDelete('CASCADE');
    /** SHA-256 of the bytes, hex. */
    t.text('hash').notNullable();
    t.text('name').notNullable();
    t.text('type').notNullable();
    t.integer('size').notNullable();
    t.binary('bytes').notNullable();
    t.integer('created_at').notNullable();
    t.unique(['studio_id', 'id']);
    t.index(['studio_id', 'hash']);
  });

  await knex.schema.createTable('cloths', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable().references('studios.id').onDelete('CASCADE');
    t.text('name').notNullable();
    t.text('fibre').notNullable().defaultTo('');
    t.float('full_width').notNullable();
    t.float('usable_width').notNullable();
    /** Widths as typed: {"fullWidth":"150 cm","usableWidth":"58\\""}. */
    t.text('typed').notNullable().defaultTo('{}');
    /** Minor units for one price_unit; null while unknown. */
    t.integer('price');
    t.text('price_unit').notNullable().defaultTo('metre');
    t.integer('sides_alike').notNullable().defaultTo(0);
    t.text('nap').notNullable().defaultTo('none');
    t.text('colour').notNullable().defaultTo('#FFFDF8');
    t.text('picture_file_id');
    t.text('supplier_note').notNullable().defaultTo('');
    t.integer('archived_at');
    t.integer('created_at').notNullable();
    t.integer('updated_at').notNullable();
    t.unique(['studio_id', 'id']);
    t.index(['studio_id', 'name']);
    t.foreign(['studio_id', 'picture_file_id']).references(['studio_id', 'id']).inTable('files');
  });

  await knex.schema.createTable('styles', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable().references('studios.id').onDelete('CASCADE');
    t.text('name').notNullable();
    t.text('kind').notNullable().defaultTo('');
    t.text('note').notNullable().defaultTo('');
    t.integer('archived_at');
    t.integer('created_at').notNullable();
    t.integer('updated_at').notNullable();
    t.unique(['studio_id', 'id']);
    t.index(['studio_id', 'name']);
  });

  await knex.schema.createTable('style_versions', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable();
    t.text('style_id').notNullable();
    t.integer('number').notNullable();
    /** A panel set, immutable. */
    t.text('panels').notNullable();
    t.integer('panel_count').notNullable();
    /** The upload it came from. */
    t.text('source_file_id');
    t.text('note').notNullable().defaultTo('');
    t.text('created_by').notNullable();
    t.integer('created_at').notNullable();
    t.unique(['studio_id', 'id']);
    t.unique(['style_id', 'number']);
    t.foreign(['studio_id', 'style_id'])
      .references(['studio_id', 'id'])
      .inTable('styles')
      .onDelete('CASCADE');
    t.foreign(['studio_id', 'source_file_id']).references(['studio_id', 'id']).inTable('files');
  });

  /** What an upload was read as, waiting for the person to confirm or correct it. */
  await knex.schema.createTable('imports', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable().references('studios.id').onDelete('CASCADE');
    t.text('file_id').notNullable();
    /** The style that gets a new version; null for a new style. */
    t.text('style_id');
    t.text('state').notNullable();
    /** The reading of the file: outlines, texts, findings. */
    t.text('reading');
    t.text('error');
    t.text('created_by').notNullable();
    t.integer('created_at').notNullable();
    t.unique(['studio_id', 'id']);
    t.foreign(['studio_id', 'file_id']).references(['studio_id', 'id']).inTable('files').onDelete('CASCADE');
    t.foreign(['studio_id', 'style_id'])
      .references(['studio_id', 'id'])
      .inTable('styles')
      .onDelete('CASCADE');
  });

  await knex.schema.createTable('orders', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable().references('studios.id').onDelete('CASCADE');
    t.integer('number').notNullable();
    t.text('client_name').notNullable();
    t.text('due_date');
    t.text('stage').notNullable();
    t.text('note').notNullable().defaultTo('');
    t.integer('created_at').notNullable();
    t.integer('updated_at').notNullable();
    t.integer('version').notNullable().defaultTo(1);
    t.unique(['studio_id', 'id']);
    t.unique(['studio_id', 'number']);
    t.index(['studio_id', 'stage', 'due_date']);
  });

  await knex.schema.createTable('order_items', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable();
    t.text('order_id').notNullable();
    t.integer('position').notNullable();
    t.text('style_version_id').notNullable();
    t.text('label').notNullable();
    t.integer('quantity').notNullable();
    t.unique(['studio_id', 'id']);
    t.index(['studio_id', 'order_id', 'position']);
    t.index(['studio_id', 'style_version_id']);
    t.foreign(['studio_id', 'order_id'])
      .references(['studio_id', 'id'])
      .inTable('orders')
      .onDelete('CASCADE');
    t.foreign(['studio_id', 'style_version_id']).references(['studio_id', 'id']).inTable('style_versions');
  });

  /** Which cloth an order line takes for each cloth role of its panels. */
  await knex.schema.createTable('order_item_cloths', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable();
    t.text('order_item_id').notNullable();
    t.text('role').notNullable();
    t.text('cloth_id').notNullable();
    t.unique(['order_item_id', 'role']);
    t.index(['studio_id', 'cloth_id']);
    t.foreign(['studio_id', 'order_item_id'])
      .references(['studio_id', 'id'])
      .inTable('order_items')
      .onDelete('CASCADE');
    t.foreign(['studio_id', 'cloth_id']).references(['studio_id', 'id']).inTable('cloths');
  });

  await knex.schema.createTable('lays', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable();
    t.text('order_id').notNullable();
    t.text('cloth_id').notNullable();
    t.text('name').notNullable();
    /** open, released or cut. */
    t.text('state').notNullable().defaultTo('open');
    /** Whether this is the lay that the order will be cut from on this cloth. */
    t.integer('chosen').notNullable().defaultTo(0);
    /** Counts accepted saves. */
    t.integer('version').notNullable();
    t.text('document').notNullable();
    /** The server's verdict and the version that it was made for. */
    t.text('verdict');
    t.integer('verdict_version');
    t.text('released_revision_id');
    t.text('created_by').notNullable();
    t.integer('created_at').notNullable();
    t.integer('updated_at').notNullable();
    t.unique(['studio_id', 'id']);
    t.index(['studio_id', 'order_id', 'cloth_id']);
    t.index(['studio_id', 'updated_at']);
    t.foreign(['studio_id', 'order_id'])
      .references(['studio_id', 'id'])
      .inTable('orders')
      .onDelete('CASCADE');
    t.foreign(['studio_id', 'cloth_id']).references(['studio_id', 'id']).inTable('cloths');
  });

  /** The order lines that a lay serves (several orders in a joint lay, later). */
  await knex.schema.createTable('lay_items', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable();
    t.text('lay_id').notNullable();
    t.text('order_item_id').notNullable();
    t.unique(['lay_id', 'order_item_id']);
    t.index(['studio_id', 'order_item_id']);
    t.foreign(['studio_id', 'lay_id']).references(['studio_id', 'id']).inTable('lays').onDelete('CASCADE');
    t.foreign(['studio_id', 'order_item_id'])
      .references(['studio_id', 'id'])
      .inTable('order_items')
      .onDelete('CASCADE');
  });

  /** Accepted saves by the id that the browser gave them: a repeat gets the first answer. */
  await knex.schema.createTable('lay_saves', (t) => {
    t.text('studio_id').notNullable();
    t.text('lay_id').notNullable();
    t.text('save_id').notNullable();
    t.integer('version').notNullable();
    t.text('saved_by').notNullable();
    t.integer('saved_at').notNullable();
    t.primary(['lay_id', 'save_id']);
    t.foreign(['studio_id', 'lay_id']).references(['studio_id', 'id']).inTable('lays').onDelete('CASCADE');
  });

  await knex.schema.createTable('lay_revisions', (t) => {
    t.text('id').primary();
    t.text('studio_id').notNullable();
    t.text('lay_id').notNullable();
    t.integer('number').notNullable();
    t.text('name').notNullable();
    /** The version of the lay that was kept. */
    t.integer('lay_version').notNullable();
    /** Immutable: lay document with resolved piece shapes, exactly these bytes. */
    t.binary('bytes').notNullable();
    /** SHA-256 over the bytes, hex. */
    t.text('hash').notNullable();
    t.text('verdict').notNullable();
    t.integer('released_at');
    t.integer('withdrawn_at');
    t.text('created_by').notNullable();
    t.integer('created_at').notNullable();
    t.unique(['studio_id', 'id']);
    t.unique(['lay_id', 'number']);
    t.index(['studio_id', 'hash']);
    t.foreign(['studio_id', 'lay_id']).references(['studio_id', 'id']).inTable('lays').onDelete('CASCADE');
  });

  await knex.schema.createTable('jobs', (t) => {
    t.text('id').primary();
    t.text('studio_id').references('studios.id').onDelete('CASCADE');
    t.text('kind').notNullable();
    /** waiting, running, done, failed or stopped. */
    t.text('state').notNullable();
    t.text('input').notNullable();
    t.text('progress');
    t.text('result');
    t.text('error');
    /** Set by a person; the running job looks at it. */
    t.integer('stop_wanted').notNullable().defaultTo(0);
    t.text('lease_owner');
    t.integer('lease_until');
    t.integer('attempts').notNullable().defaultTo(0);
    t.integer('not_before').notNullable();
    t.text('created_by').notNullable();
    t.integer('created_at').notNullable();
    t.integer('updated_at').notNullable();
    t.index(['state', 'not_before']);
    t.index(['studio_id', 'kind', 'created_at']);
  });

  /** The outbox. `dedupe_key` makes one event one message. */
  await knex.schema.createTable('messages', (t) => {
    t.text('id').primary();
    t.text('studio_id').references('studios.id').onDelete('CASCADE');
    t.text('dedupe_key').notNullable().unique();
    t.text('template').notNullable();
    t.text('recipient').notNullable();
    t.text('subject').notNullable();
    t.text('body').notNullable();
    t.text('html');
    /** waiting, sent or failed. */
    t.text('state').notNullable();
    t.integer('attempts').notNullable().defaultTo(0);
    t.integer('not_before').notNullable();
    t.text('error');
    t.integer('sent_at');
    t.integer('created_at').notNullable();
    t.index(['state', 'not_before']);
  });

  await knex.schema.createTable('audit_entries', (t) => {
    t.text('id').primary();
    t.text('studio_id').references('studios.id').onDelete('CASCADE');
    t.text('user_id');
    t.text('action').notNullable();
    t.text('subject').notNullable().defaultTo('');
    t.text('detail').notNullable().defaultTo('{}');
    t.integer('at').notNullable();
    t.index(['studio_id', 'at']);
  });
}

export async function down(): Promise<void> {
  throw new Error('Migrations only go forward: restore a backup instead.');
}
