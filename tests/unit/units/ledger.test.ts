import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { ledgerOf, paymentKinds } from '$lib/units/ledger';
import { runs } from '../../runs';

describe('the account of an order', () => {
  it('counts what has come and gone, and nothing that waits', () => {
    const entries = [
      { kind: 'deposit', amount: 40_000, settled: true },
      { kind: 'balance', amount: 59_047, settled: false },
      { kind: 'other', amount: 1000, settled: true },
      { kind: 'refund', amount: 500, settled: true },
      { kind: 'refund', amount: 700, settled: false }
    ] as const;
    expect(ledgerOf(99_047, 49_524, entries)).toEqual({
      agreed: 99_047,
      received: 41_000,
      refunded: 500,
      kept: 40_500,
      owed: 58_547,
      depositMissing: 9024
    });
  });

  it('says when too much came, and misses no deposit of what is not agreed', () => {
    expect(ledgerOf(100, 50, [{ kind: 'other', amount: 130, settled: true }])).toMatchObject({
      owed: -30,
      depositMissing: 0
    });
    expect(ledgerOf(0, 50, []).depositMissing).toBe(0);
  });

  it('refuses a payment that is no positive whole number', () => {
    expect(() => ledgerOf(1, 0, [{ kind: 'other', amount: -1, settled: true }])).toThrow(RangeError);
    expect(() => ledgerOf(1, 0, [{ kind: 'other', amount: 0.5, settled: true }])).toThrow(RangeError);
  });

  it('always adds up, per order and over all', () => {
    const entry = fc.record({
      kind: fc.constantFrom(...paymentKinds),
      amount: fc.integer({ min: 0, max: 1_000_000 }),
      settled: fc.boolean()
    });
    const order = fc.record({ agreed: fc.integer({ min: 0, max: 1_000_000 }), entries: fc.array(entry) });
    fc.assert(
      fc.property(fc.array(order), (orders) => {
        const accounts = orders.map(({ agreed, entries }) => ledgerOf(agreed, agreed, entries));
        for (const one of accounts) {
          expect(one.agreed - one.received + one.refunded).toBe(one.owed);
          expect(one.depositMissing).toBe(Math.max(0, one.owed));
        }
        const all = ledgerOf(
          orders.reduce((sum, { agreed }) => sum + agreed, 0),
          0,
          orders.flatMap(({ entries }) => entries)
        );
        expect(accounts.reduce((sum, { owed }) => sum + owed, 0)).toBe(all.owed);
      }),
      { numRuns: runs(200), seed: 614 }
    );
  });
});
