import type { GuideInput } from './guide-input';

/*
 * By which words a page says what it belongs to.
 */

/** How the hash is read out: the first twelve letters in fours. */
export function shortHash(hash: string): string {
  return (hash.slice(0, 12).match(/.{4}/g) ?? [hash]).join(' ');
}

/** Which lay this is, on every page: the name last, for it may be cut off, and the hash must not. */
export function identity(input: GuideInput): string {
  return [
    `Order ${input.orderNumber}`,
    `revision ${input.revision.number}`,
    shortHash(input.revision.hash),
    input.lay
  ].join(' · ');
}

/** What stands at the foot of the desk pages. */
export function notice(input: GuideInput): string {
  return input.revision.released === null
    ? `NOT RELEASED: not to be cut by. ${identity(input)}`
    : `Released ${input.revision.released}. Scan the code on the ticket before cutting. ${identity(input)}`;
}
