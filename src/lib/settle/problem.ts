import type { Outline, Point } from '$lib/geometry/point';
import type { Degrees, Millimetres, Share } from '$lib/units/measure';

/*
 * What the automatic placement is asked and what it answers. Lengths are in any one unit (the product uses
 * millimetres); x runs along the strip, y across it, 0 ≤ y ≤ width. Plain data, so that it crosses threads.
 */

/** One way in which a piece may lie: flip first (y → −y), then turn. */
export interface Way {
  readonly turn: Degrees;
  readonly flip: boolean;
  /** 1 with the nap, −1 against it, 0 neither. Only pieces of a nap group ask. */
  readonly nap: 1 | -1 | 0;
}

/**
 * Where a line of the cloth's repeat may take a piece: its anchor falls on `at` + a whole number of `size`. The lattices
 * of one group may all be moved alike: where they lie in the repeat is the search's to choose, but it is one place for
 * all of them.
 */
export interface Lattice {
  /** A point of the piece, in its own coordinates. */
  readonly anchor: Point;
  readonly x: { readonly size: Millimetres; readonly at: Millimetres } | null;
  readonly y: { readonly size: Millimetres; readonly at: Millimetres } | null;
  /** null: the lines lie where `at` says. */
  readonly group: string | null;
}

/** A stretch of the width. */
export interface Band {
  readonly from: Millimetres;
  readonly to: Millimetres;
}

export interface SettlePiece {
  readonly id: string;
  /** What a person calls it, for messages. */
  readonly name: string;
  /** Simple, counter-clockwise. */
  readonly outline: Outline;
  readonly copies: number;
  /** Every way it may lie; at least one. */
  readonly ways: readonly Way[];
  /** How far off each of its ways it may be turned, degrees either way. */
  readonly tilt: Degrees;
  /** Pieces of one nap group all lie with the nap, or all against it. */
  readonly napGroup: string | null;
  /** Whether its lowest edge lies on y = 0, the fold. */
  readonly onFold: boolean;
  /** The stretch of the width in which it lies: the doubled cloth, say; null: anywhere. */
  readonly band: Band | null;
  readonly lattice: Lattice | null;
}

export interface SettlePlacement {
  readonly piece: string;
  /** 0 ≤ copy < copies of the piece. */
  readonly copy: number;
  readonly x: Millimetres;
  readonly y: Millimetres;
  readonly turn: Degrees;
  readonly flip: boolean;
}

export interface SettleProblem {
  readonly width: Millimetres;
  /** null while the length is open. */
  readonly length: Millimetres | null;
  /** A remnant's outline inside 0 ≤ x ≤ length, 0 ≤ y ≤ width; null for a strip. */
  readonly outline: Outline | null;
  /** Places that no piece may touch; the clearance is kept from them too. */
  readonly keepOuts: readonly Outline[];
  /** The least distance between two cut lines. */
  readonly clearance: Millimetres;
  /** Overlaps up to here count as touching: 0.01 mm in the product. */
  readonly touching: Millimetres;
  readonly pieces: readonly SettlePiece[];
  /** Outlines, as they lie, of the pieces that stay where they are. */
  readonly locked: readonly { readonly id: string; readonly name: string; readonly outline: Outline }[];
  /** The selvedge at which pieces lie rather, so that what is left of the width lies along the other one. */
  readonly preferredSide: 'near' | 'far' | null;
  /** The lay to go on from; pieces that it does not place are looked after first. */
  readonly start: readonly SettlePlacement[];
}

export interface SettleResult {
  readonly placements: readonly SettlePlacement[];
  /** Greatest x of everything placed, locked pieces included. */
  readonly length: Millimetres;
  /** Area of all that is placed ÷ (width × length). */
  readonly density: Share;
  readonly leftOver: readonly { readonly piece: string; readonly copy: number }[];
  /** Positions looked at so far. */
  readonly evaluations: number;
}

/** Why a problem can't be settled as it stands, said before anything runs. */
export interface ProblemFault {
  readonly kind: 'too-wide' | 'too-long' | 'locks-collide' | 'lock-outside' | 'lock-on-flaw' | 'no-way';
  /** Ids of the pieces or locked placements concerned. */
  readonly pieces: readonly string[];
  readonly measure: Millimetres | null;
  readonly message: string;
}
