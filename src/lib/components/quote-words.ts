import type { ComponentProps } from 'svelte';
import type Tag from './Tag.svelte';

type Look = ComponentProps<typeof Tag>;

const looks: Readonly<Record<string, Look>> = {
  draft: { word: 'Draft', tone: 'plain', mark: '○' },
  sent: { word: 'Sent', tone: 'weld', mark: '◔' },
  runOut: { word: 'Ran out', tone: 'madder', mark: '✕' },
  agreed: { word: 'Agreed', tone: 'fern', mark: '✓' },
  superseded: { word: 'Superseded', tone: 'plain', mark: '↷' },
  declined: { word: 'Declined', tone: 'madder', mark: '✕' },
  withdrawn: { word: 'Withdrawn', tone: 'plain', mark: '✕' }
};

/** How the state of a quote is written; one that was sent and is over has run out. */
export function quoteLook({ state, runOut }: { state: string; runOut: boolean }): Look {
  return looks[runOut ? 'runOut' : state] ?? { word: state };
}

/** How a payment is written. */
export const paymentKindWords: Readonly<Record<string, string>> = {
  deposit: 'Deposit',
  balance: 'Balance',
  other: 'Payment',
  refund: 'Given back'
};
export const paymentMethodWords: Readonly<Record<string, string>> = {
  card: 'Card',
  cash: 'Cash',
  transfer: 'Bank transfer'
};
const states: Readonly<Record<string, Look>> = {
  waiting: { word: 'Under way', tone: 'weld', mark: '◔' },
  settled: { word: 'Settled', tone: 'fern', mark: '✓' },
  failed: { word: 'Failed', tone: 'madder', mark: '✕' },
  expired: { word: 'Not paid', tone: 'plain', mark: '○' }
};
export const paymentLook = (state: string): Look => states[state] ?? { word: state };
