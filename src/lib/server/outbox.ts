import type { Knex } from 'knex';
import { database } from './database';
import { newId } from './ids';
import { log } from './log';
import type { Sender } from './mail';

/*
 * Mails to be sent. They are written in the transaction of what they tell about, and sent afterwards: none is lost when
 * the mail server is away, and one event makes one mail (`dedupeKey`). If the process dies between the mail server's
 * answer and our note of it, the mail goes out again under the same Message-ID.
 */

export interface Message {
  readonly studioId: string | null;
  /** Names the event: 'invitation <id>'. A second message of the same key is not written. */
  readonly dedupeKey: string;
  readonly template: string;
  readonly recipient: string;
  readonly subject: string;
  readonly text: string;
  readonly html: string;
}

/** Attempts before a message counts as failed: over about two days. */
const mostAttempts = 14;
/** 30 s, doubled each time, at most 6 h. */
const backoff = (attempts: number) => Math.min(30_000 * 2 ** (attempts - 1), 6 * 3_600_000);

let wake: () => void = () => {};

/** Writes a message to be sent; in a transaction pass its `db`. */
export async function queue(message: Message, db: Knex = database(), now = Date.now()): Promise<void> {
  await db('messages')
    .insert({
      id: newId(now),
      studio_id: message.studioId,
      dedupe_key: message.dedupeKey,
      template: message.template,
      recipient: message.recipient,
      subject: message.subject,
      body: message.text,
      html: message.html,
      state: 'waiting',
      not_before: now,
      created_at: now
    })
    .onConflict('dedupe_key')
    .ignore();
  wake();
}

interface MessageRow {
  id: string;
  template: string;
  recipient: string;
  subject: string;
  body: string;
  html: string | null;
  attempts: number;
}

/** Sends what is due, oldest first. Gives how many were sent and how many have to be tried again or failed. */
export async function sendDue(send: Sender, now = Date.now()): Promise<{ sent: number; held: number }> {
  const due = await database()('messages')
    .where({ state: 'waiting' })
    .where('not_before', '<=', now)
    .orderBy('created_at')
    .limit(50)
    .select<MessageRow[]>('id', 'template', 'recipient', 'subject', 'body', 'html', 'attempts');
  let sent = 0;
  for (const row of due) {
    const outcome = await sendOne(send, row, now);
    if (outcome.state === 'sent') sent += 1;
    await database()('messages').where({ id: row.id }).update(outcome);
  }
  return { sent, held: due.length - sent };
}

async function sendOne(send: Sender, row: MessageRow, now: number) {
  const attempts = row.attempts + 1;
  try {
    await send({
      id: row.id,
      to: row.recipient,
      subject: row.subject,
      text: row.body,
      html: row.html ?? undefined
    });
    return { state: 'sent', attempts, sent_at: now, error: null, ...withoutTokens(row) };
  } catch (error) {
    const words = error instanceof Error ? error.message : String(error);
    log.warn({ message: row.id, template: row.template, attempts, reason: words }, 'mail not sent');
    return attempts < mostAttempts
      ? { state: 'waiting', attempts, error: words, not_before: now + backoff(attempts) }
      : { state: 'failed', attempts, error: words, ...withoutTokens(row) };
  }
}

/** One-time links are taken out of what is kept: whoever reads the table later must not be able to use them. */
function withoutTokens(row: MessageRow): { body: string; html: string | null } {
  const strip = (text: string) =>
    text.replace(/(\/(?:sign-up|reset|invitation|new-address|c)\/)[\w-]{43}/g, '$1(taken out after sending)');
  return { body: strip(row.body), html: row.html === null ? null : strip(row.html) };
}

/**
 * Sends in the background: at once when something is queued, and every 15 s for what has to be tried again. Gives the
 * way to end it, which waits for the mail on its way.
 */
export function startSending(send: Sender): () => Promise<void> {
  let running: Promise<unknown> = Promise.resolve();
  let open = true;
  const go = () => {
    running = running
      .then(() => (open ? sendDue(send) : null))
      .catch((error) => log.error({ err: error }, 'outbox'));
  };
  // A message that is queued in a transaction can be read after the commit only.
  wake = () => setTimeout(go, 50).unref();
  const timer = setInterval(go, 15_000);
  timer.unref();
  go();
  return async () => {
    open = false;
    wake = () => {};
    clearInterval(timer);
    await running;
  };
}
