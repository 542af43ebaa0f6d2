import type { BuyTerms } from '$lib/cloth/what-to-buy';
import type { Box, Outline, Point } from '$lib/geometry/point';
import type { Millimetres, Share, SquareMillimetres } from '$lib/units/measure';

/*
 * What the product says about a lay: readings (numbers) and findings (what is wrong, where, by how much).
 */

export interface Readings {
  readonly pieces: { readonly needed: number; readonly placed: number; readonly loose: number };
  /** Greatest x of the placed cut outlines, end allowances excluded; 0 with nothing placed. */
  readonly lengthUsed: Millimetres;
  /** Cut outlines less cut-outs, times what each placement yields. */
  readonly area: SquareMillimetres;
  /** area ÷ (usable width × length used × layers); null with nothing placed. 'so far' while pieces are loose. */
  readonly efficiency: Share | null;
  /** area ÷ cloth consumed, ends and full width included. */
  readonly utilisation: Share | null;
  /** No lay of all needs can be shorter; with the reason. */
  readonly leastLength: { readonly length: Millimetres; readonly reason: LeastLengthReason };
  readonly clothToBuy: BuyTerms;
}

export type LeastLengthReason =
  | { readonly kind: 'nothing' }
  | { readonly kind: 'area'; readonly area: SquareMillimetres; readonly width: Millimetres }
  | { readonly kind: 'longest'; readonly panel: string; readonly length: Millimetres }
  | {
      readonly kind: 'blade';
      readonly area: SquareMillimetres;
      readonly width: Millimetres;
      readonly clearance: Millimetres;
    }
  /** `places`: so many of these pieces at most lie beside each other. */
  | { readonly kind: 'side-by-side'; readonly panels: readonly string[]; readonly places?: number };

export const findingKinds = [
  'overlap',
  'clearance',
  'outside-width',
  'outside-length',
  'outside-edge',
  'off-grain',
  'against-nap',
  'wrong-hand',
  'missing',
  'surplus',
  'unpaired',
  'unknown-panel',
  'grain-unconfirmed',
  'flaw',
  'straddles',
  'near-fold',
  'spread-nap',
  'repeat',
  'mismatch',
  'shrinkage',
  'stop-style-replaced'
] as const;
export type FindingKind = (typeof findingKinds)[number];

export interface Finding {
  readonly kind: FindingKind;
  /** A finding that stops refuses release; one that warns does not. */
  readonly severity: 'stops' | 'warns';
  /** Ids of the placements concerned. */
  readonly placements: readonly string[];
  /** For what is missing, surplus or unpaired: the panel and garment concerned. */
  readonly subject: { readonly garment: string; readonly panel: string; readonly hand: string } | null;
  /** How much: depth, distance short of the clearance, millimetres outside, degrees off, or a count. */
  readonly measure: { readonly value: number; readonly unit: 'mm' | 'degrees' | 'pieces' } | null;
  /** Where on the cloth; null when the finding has no place. */
  readonly place: Point | null;
  /** What to hatch: the overlap's region; empty when there is none. */
  readonly region: readonly Outline[];
  readonly area: SquareMillimetres | null;
  readonly box: Box | null;
  /** What the person may do about it at once: open the cloth into a single ply. */
  readonly offer?: 'open-cloth';
  /** In plain English, with names and measures in millimetres. */
  readonly message: string;
}

export interface Verdict {
  readonly readings: Readings;
  readonly findings: readonly Finding[];
}
