import Stripe from 'stripe';
import type { Minor } from '$lib/units/measure';
import { config, type CardConfig } from './config';

/*
 * The hosted card payments, through their SDK: where they are, and what is asked of them. Nothing of a card ever comes here: the
 * client types it on the card host's own page.
 */

export interface CardHost {
  readonly stripe: Stripe;
  readonly webhookSecret: string;
}

const held = globalThis as { warpwiseCardHost?: CardHost | null };

/** The configured card host; null when cards are not taken. */
export function cardHost(): CardHost | null {
  return held.warpwiseCardHost === undefined
    ? (held.warpwiseCardHost = config.cards === null ? null : cardHostOf(config.cards))
    : held.warpwiseCardHost;
}

/** Makes another card host the application's (tests), or none with null. */
export function useCardHost(host: CardHost | null): void {
  held.warpwiseCardHost = host;
}

export function cardHostOf({ key, webhookSecret, host, port, protocol }: CardConfig): CardHost {
  const stripe = new Stripe(key, {
    ...(host === undefined ? {} : { host }),
    ...(port === undefined ? {} : { port }),
    ...(protocol === undefined ? {} : { protocol }),
    maxNetworkRetries: 1,
    timeout: 15_000,
    telemetry: false
  });
  return { stripe, webhookSecret };
}

/**
 * An amount as the card host writes it, or null when it can't take it. It counts ISK and UGX in hundredths although ISO 4217
 * gives them none, and takes currencies of three decimals only in whole tens (both from memory of its documentation).
 */
export function cardAmount(minor: Minor, currency: string): number | null {
  if (currency === 'ISK' || currency === 'UGX') return minor * 100;
  if (['BHD', 'IQD', 'JOD', 'KWD', 'LYD', 'OMR', 'TND'].includes(currency) && minor % 10 !== 0) return null;
  return minor;
}
