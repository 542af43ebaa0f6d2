import type { ClientLink } from './client-links';
import * as mails from './client-mails';
import { database } from './database';
import { newId } from './ids';
import * as outbox from './outbox';
import { notFound } from './problem';
import { aboutOf } from './quotes';
import { studioScope, type Scope } from './scope';
import * as studios from './studios';

/* Questions that clients ask on their page: kept with the order, and mailed to the owners. */

export interface Question {
  readonly id: string;
  readonly words: string;
  readonly askedAt: number;
  readonly answeredAt: number | null;
  readonly from: string;
}

/** Asks. `once` is made with the form: sent twice, it is one question. */
export async function ask(link: ClientLink, once: string, words: string, now = Date.now()): Promise<void> {
  const scope = studioScope(link.studio);
  const about = await aboutOf(scope, link.order);
  await database().transaction(async (trx) => {
    const added: { id: string }[] = await trx('order_questions')
      .insert({
        id: once,
        studio_id: link.studio,
        order_id: link.order,
        link_id: link.id,
        words,
        asked_at: now
      })
      .onConflict('id')
      .ignore()
      .returning('id');
    if (added.length === 0) return;
    for (const owner of await studios.ownerAddresses(scope, trx))
      await outbox.queue(
        mails.questionAsked(`${once} ${owner}`, about, owner, {
          client: about.client,
          address: link.sentTo,
          words
        }),
        trx,
        now
      );
  });
}

/** The questions of an order, the newest first. */
export async function list(scope: Scope, orderId: string): Promise<Question[]> {
  return database()('order_questions')
    .join('client_links', 'client_links.id', 'order_questions.link_id')
    .where({ 'order_questions.studio_id': scope.studio, 'order_questions.order_id': orderId })
    .orderBy('asked_at', 'desc')
    .select<Question[]>({
      id: 'order_questions.id',
      words: 'words',
      askedAt: 'asked_at',
      answeredAt: 'answered_at',
      from: 'client_links.sent_to'
    });
}

/** Notes that a question was answered. */
export async function markAnswered(
  scope: Scope,
  orderId: string,
  id: string,
  now = Date.now()
): Promise<void> {
  const own = database()('order_questions').where({ studio_id: scope.studio, order_id: orderId, id });
  if (!(await own.clone().first('id'))) throw notFound('question of this order');
  await own.whereNull('answered_at').update({ answered_at: now, answered_by: scope.user });
}

/** A name for a question, for the form that asks it. */
export const newQuestionId = (): string => newId();
