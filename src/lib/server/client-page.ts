import { quoteLines, quoteParts, taxWords } from '$lib/guide/quote-paper';
import { dayAt } from '$lib/units/days';
import { cardHost } from './card-host';
import { takesCards } from './card-payments';
import type { ClientLink } from './client-links';
import { moneyDefaults } from './money-defaults';
import * as orderQuestions from './order-questions';
import * as orders from './orders';
import * as payments from './payments';
import * as quotes from './quotes';
import { studioScope } from './scope';
import * as studios from './studios';

/*
 * What the client of one order is shown through their link: written out field by field, so that nothing of the studio's own
 * (cost, overhead, notes, lays, other orders) can come along.
 */

/** The page of the link's order. */
export async function read(link: ClientLink, now = Date.now()) {
  const scope = studioScope(link.studio);
  const order = await orders.read(scope, link.order);
  const studio = await studios.read(scope);
  const { letterhead } = await moneyDefaults(scope);
  const { offered, agreed } = await quotes.forClient(scope, link.order, now);
  const account = await payments.account(scope, link.order);
  const questions = await orderQuestions.list(scope, link.order);
  const { currency } = account;
  return {
    studio: { name: studio.name, letterhead, timeZone: studio.timeZone },
    order: { number: order.number, clientName: order.clientName, stage: order.stage, due: order.dueDate },
    offered: offered && shown(offered),
    agreed: agreed && shown(agreed),
    account: {
      currency,
      agreed: account.agreed,
      received: account.received,
      refunded: account.refunded,
      owed: account.owed,
      depositMissing: account.depositMissing,
      payments: account.payments
        .filter(({ state }) => state === 'settled')
        .map(({ kind, method, amount, day, currency }) => ({ kind, method, amount, day, currency }))
    },
    /** What can be paid by card now. */
    payable: {
      deposit: account.depositMissing > 0 && takesCards(account.depositMissing, currency),
      balance: account.owed > 0 && takesCards(account.owed, currency),
      /** Whether cards are taken at all. */
      cards: cardHost() !== null
    },
    underWay: account.payments.some(({ state, kind }) => state === 'waiting' && kind !== 'refund'),
    questions: questions.map(({ words, askedAt, answeredAt }) => ({
      words,
      askedAt,
      answered: answeredAt !== null
    })),
    once: orderQuestions.newQuestionId(),
    today: dayAt(now, studio.timeZone)
  };
}

function shown(quote: quotes.Quote) {
  const { document } = quote;
  return {
    number: quote.number,
    hash: quote.hash,
    state: quote.state,
    runOut: quote.runOut,
    orderUnchanged: quote.orderUnchanged,
    validUntil: quote.validUntil,
    agreedName: quote.agreedName,
    agreedAt: quote.agreedAt,
    garments: document.garments,
    lines: quoteLines(document),
    parts: quoteParts(document),
    currency: quote.currency,
    net: document.net,
    tax: document.tax,
    taxWords: taxWords(document),
    total: quote.total,
    deposit: quote.deposit
  };
}
