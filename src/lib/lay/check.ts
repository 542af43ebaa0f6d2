import type { LayDocument } from './document';
import { findingsBetween } from './findings-between';
import { findingsOfCounts } from './findings-counts';
import { findingsEach } from './findings-each';
import { findingsOfSpread } from './findings-spread';
import type { PanelBook } from './panel-book';
import { placedPieces } from './placed';
import { readingsOf } from './readings';
import type { Finding, FindingKind, Verdict } from './verdict';

/*
 * The check of a lay. The same code runs in the browser and on the server; the server's verdict is the one that counts.
 */

/** Kinds from the worst to the least; findings of one kind go by their measure. */
const worstFirst: readonly FindingKind[] = [
  'stop-style-replaced',
  'unknown-panel',
  'overlap',
  'outside-width',
  'outside-length',
  'outside-edge',
  'flaw',
  'straddles',
  'spread-nap',
  'near-fold',
  'clearance',
  'against-nap',
  'wrong-hand',
  'repeat',
  'mismatch',
  'shrinkage',
  'off-grain',
  'missing',
  'surplus',
  'grain-unconfirmed',
  'unpaired'
];

/** Readings and findings of a lay, the worst first. */
export function check(document: LayDocument, book: PanelBook): Verdict {
  const placed = placedPieces(document, book);
  return {
    readings: readingsOf(document, book),
    findings: [
      ...findingsBetween(document, book, placed),
      ...findingsEach(document, book, placed),
      ...findingsOfSpread(document, book, placed),
      ...findingsOfCounts(document, book, placed)
    ].sort(byWeight)
  };
}

function byWeight(a: Finding, b: Finding): number {
  return (
    Number(b.severity === 'stops') - Number(a.severity === 'stops') ||
    worstFirst.indexOf(a.kind) - worstFirst.indexOf(b.kind) ||
    (b.measure?.value ?? 0) - (a.measure?.value ?? 0)
  );
}

/** Whether a lay with these findings may be released. */
export function mayRelease(verdict: Verdict): boolean {
  return verdict.findings.every(({ severity }) => severity !== 'stops');
}
