import { formatDay } from '$lib/units/days';
import { formatMoney } from '$lib/units/money';
import { config } from './config';
import { composed, type Wording } from './mail-words';
import type { Message } from './outbox';

/*
 * The mails between studio and client about quotes, money and questions: what they say. A link holds its token in clear
 * only on its way; the outbox takes it out after sending.
 */

interface About {
  readonly studioId: string;
  readonly studio: string;
  /** The order's number and its path for the studio's people. */
  readonly order: number;
  readonly orderId: string;
}

function message(template: string, key: string, about: About, recipient: string, wording: Wording): Message {
  return {
    studioId: about.studioId,
    dedupeKey: `${template} ${key}`,
    template,
    recipient,
    ...composed(wording)
  };
}

const page = (token: string): string => `${config.origin}/c/${token}`;
const orderPage = ({ orderId }: About): string => `${config.origin}/orders/${orderId}/payments`;

/** `key` names the sending: each has a link of its own. */
export function quoteSent(
  key: string,
  about: About,
  recipient: string,
  quote: { client: string; version: number; total: number; currency: string; validUntil: string },
  token: string
): Message {
  return message('quote', key, about, recipient, {
    subject: `${about.studio}: your quote ${about.order}.${quote.version}`,
    paragraphs: [
      `Hello ${quote.client},`,
      `here is our quote for your order ${about.order}: ${formatMoney(quote.total, quote.currency)}, valid until ${formatDay(quote.validUntil)}. On your page you can read it, agree to it, pay, see how far we are, and ask.`
    ],
    link: { word: 'Open your page', href: page(token) },
    ending: ['The link is yours alone: whoever has it can see this order.', about.studio]
  });
}

export function linkSent(
  key: string,
  about: About,
  recipient: string,
  client: string,
  token: string
): Message {
  return message('client-link', key, about, recipient, {
    subject: `${about.studio}: the page of your order ${about.order}`,
    paragraphs: [`Hello ${client},`, `here is the page of your order ${about.order}.`],
    link: { word: 'Open your page', href: page(token) },
    ending: ['The link is yours alone: whoever has it can see this order.', about.studio]
  });
}

export function quoteAgreed(
  key: string,
  about: About,
  recipient: string,
  agreed: { name: string; version: number; when: string; total: number; deposit: number; currency: string }
): Message {
  return message('quote-agreed', key, about, recipient, {
    subject: `${about.studio}: quote ${about.order}.${agreed.version} is agreed`,
    paragraphs: [
      `Hello ${agreed.name},`,
      `you agreed to our quote ${about.order}.${agreed.version} over ${formatMoney(agreed.total, agreed.currency)} on ${agreed.when}.`,
      ...(agreed.deposit > 0
        ? [
            `Work begins when the deposit of ${formatMoney(agreed.deposit, agreed.currency)} is paid; your page says how.`
          ]
        : []),
      about.studio
    ]
  });
}

export function toldStudioAgreed(
  key: string,
  about: About,
  recipient: string,
  agreed: { name: string; version: number; client: string; did: 'agreed to' | 'declined' }
): Message {
  return message('studio-quote', key, about, recipient, {
    subject: `Order ${about.order}: quote ${about.order}.${agreed.version} was ${agreed.did === 'declined' ? 'declined' : 'agreed'}`,
    paragraphs: [`${agreed.name} ${agreed.did} quote ${about.order}.${agreed.version} for ${agreed.client}.`],
    link: { word: 'Open the order', href: orderPage(about) }
  });
}

export function receipt(
  key: string,
  about: About,
  recipient: string,
  paid: {
    client: string;
    kind: 'deposit' | 'balance' | 'other' | 'refund';
    method: 'card' | 'cash' | 'transfer';
    amount: number;
    currency: string;
    when: string;
    owed: number;
  }
): Message {
  const sum = formatMoney(paid.amount, paid.currency);
  const how = { card: 'by card', cash: 'in cash', transfer: 'by bank transfer' }[paid.method];
  const what = { deposit: 'the deposit', balance: 'the balance', other: 'a payment', refund: '' }[paid.kind];
  return message('receipt', key, about, recipient, {
    subject:
      paid.kind === 'refund'
        ? `${about.studio}: ${sum} is on its way back to you`
        : `${about.studio}: we received ${sum}`,
    paragraphs: [
      `Hello ${paid.client},`,
      paid.kind === 'refund'
        ? `we gave back ${sum} ${how} on ${paid.when}, for order ${about.order}.`
        : `we received ${what} of ${sum} ${how} on ${paid.when}, for order ${about.order}. Thank you.`,
      paid.owed > 0
        ? `Still open: ${formatMoney(paid.owed, paid.currency)}.`
        : paid.owed < 0
          ? `In your favour: ${formatMoney(-paid.owed, paid.currency)}.`
          : 'Nothing is open.',
      about.studio
    ]
  });
}

export function toldStudioPaid(
  key: string,
  about: About,
  recipient: string,
  paid: { client: string; amount: number; currency: string; owed: number }
): Message {
  return message('studio-paid', key, about, recipient, {
    subject: `Order ${about.order}: ${formatMoney(paid.amount, paid.currency)} came in by card`,
    paragraphs: [
      `${paid.client} paid ${formatMoney(paid.amount, paid.currency)} by card.`,
      `Still open: ${formatMoney(paid.owed, paid.currency)}.`
    ],
    link: { word: 'Open the order', href: orderPage(about) }
  });
}

export function questionAsked(
  key: string,
  about: About,
  recipient: string,
  question: { client: string; address: string; words: string }
): Message {
  return message('question', key, about, recipient, {
    subject: `Order ${about.order}: a question from ${question.client}`,
    paragraphs: [
      `${question.client} asks:`,
      question.words,
      `Write to ${question.address}. The question is kept with the order.`
    ],
    link: { word: 'Open the order', href: orderPage(about) }
  });
}
