import type { Minor } from './measure';

/*
 * What is owed and what was paid. Amounts are positive; a refund goes the other way. Only what has really come or gone
 * counts: a card payment that was begun and not ended is no money.
 */

export const paymentKinds = ['deposit', 'balance', 'other', 'refund'] as const;
export type PaymentKind = (typeof paymentKinds)[number];

export interface LedgerEntry {
  readonly kind: PaymentKind;
  readonly amount: Minor;
  /** Whether the money has moved. */
  readonly settled: boolean;
}

export interface Ledger {
  /** What was agreed; 0 while nothing is. */
  readonly agreed: Minor;
  readonly received: Minor;
  readonly refunded: Minor;
  /** Received less refunded. */
  readonly kept: Minor;
  /** Agreed less kept; negative when more was paid than agreed. */
  readonly owed: Minor;
  /** What is still missing of the deposit; 0 when it is met or none is asked. */
  readonly depositMissing: Minor;
}

/** The account of one order. `agreed` − `kept` is `owed`, always. */
export function ledgerOf(agreed: Minor, deposit: Minor, entries: readonly LedgerEntry[]): Ledger {
  let received = 0;
  let refunded = 0;
  for (const { kind, amount, settled } of entries) {
    if (!Number.isSafeInteger(amount) || amount < 0)
      throw new RangeError(`A payment is a positive whole number of minor units, got ${amount}`);
    if (!settled) continue;
    if (kind === 'refund') refunded += amount;
    else received += amount;
  }
  const kept = received - refunded;
  return {
    agreed,
    received,
    refunded,
    kept,
    owed: agreed - kept,
    depositMissing: Math.max(0, Math.min(deposit, agreed) - kept)
  };
}
