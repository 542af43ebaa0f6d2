import type { Ledger } from '$lib/units/ledger';
import * as orderQuestions from './order-questions';
import * as payments from './payments';
import * as quotes from './quotes';
import type { Scope } from './scope';

/** Price, quote and money of an order in short: what its page shows to those who may see prices. */
export interface MoneyOfOrder extends Ledger {
  readonly currency: string;
  /** The newest quote. */
  readonly quote: Pick<
    quotes.Quote,
    'number' | 'state' | 'runOut' | 'total' | 'currency' | 'orderUnchanged'
  > | null;
  readonly openQuestions: number;
}

export async function moneyOf(scope: Scope, orderId: string): Promise<MoneyOfOrder> {
  const { payments: _, quote: __, deposit: ___, ...account } = await payments.account(scope, orderId);
  const [newest] = await quotes.list(scope, orderId);
  const quote = newest ? await quotes.read(scope, orderId, newest.number) : null;
  const questions = await orderQuestions.list(scope, orderId);
  return {
    ...account,
    quote: quote && {
      number: quote.number,
      state: quote.state,
      runOut: quote.runOut,
      total: quote.total,
      currency: quote.currency,
      orderUnchanged: quote.orderUnchanged
    },
    openQuestions: questions.filter(({ answeredAt }) => answeredAt === null).length
  };
}
