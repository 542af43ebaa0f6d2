import type { MoneyDefaults } from '../money-defaults';
import type { PriceSheet } from '../price-sheet';

/* What the demo's studio charges, and what of it was quoted and paid: invented, like everything of the demo. */

export const defaults: Partial<MoneyDefaults> = {
  hourly: 4200,
  overhead: 1500,
  margin: 1000,
  tax: { mode: 'included', rate: 2000 },
  roundTo: 100,
  letterhead: 'Hollin Lane 3\nhello@hollin-lane.example'
};

export interface DemoQuote {
  /** The order's key. */
  readonly order: string;
  readonly address: string;
  /** Sums by hand for cloths (by key) that are not laid or have no price. */
  readonly byHand: Readonly<Record<string, number>>;
  readonly sheet: Partial<PriceSheet>;
  /** Whether the client agreed and paid the deposit by bank transfer. */
  readonly agreed: boolean;
  readonly question?: string;
}

export const quotes: readonly DemoQuote[] = [
  {
    order: 'noor',
    address: 'noor@castellane.example',
    byHand: { linen: 1400 },
    sheet: { minutes: 1260, trims: [{ words: 'Shell buttons, 18', amount: 2160 }] },
    agreed: true,
    question: 'Could the cuffs be a finger wider than on the last one?'
  },
  {
    order: 'darina',
    address: 'darina@koval.example',
    byHand: { satin: 16_800 },
    sheet: { minutes: 840, extras: [{ words: 'Hems rolled by hand', amount: 4500 }] },
    agreed: false
  }
];
