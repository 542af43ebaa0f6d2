import { boxDistance, outlineDistance } from '$lib/geometry/distance';
import { outside } from '$lib/geometry/outside';
import { overlapDepth } from '$lib/geometry/overlap';
import { overlapRegion } from '$lib/geometry/overlap-region';
import type { Placement } from '$lib/geometry/placement';
import type { Box, Outline, Point } from '$lib/geometry/point';
import { outlineOf, type PreparedOutline } from '$lib/geometry/prepared';
import { TOUCHING } from '$lib/geometry/tolerance';
import type { Degrees, Millimetres, SquareMillimetres } from '$lib/units/measure';
import { overhang, type StripSide } from './borders';
import type { LayDocument } from './document';
import { CLEARANCE_SLACK } from './findings-between';
import type { PanelBook } from './panel-book';
import { placedOutline, placedPieces, type PlacedPiece } from './placed';
import { clothToBuy, readingsOf, sharesOf } from './readings';
import { againstNap, beyondTolerance, offGrain } from './turns';
import type { Readings } from './verdict';

/*
 * The check while pieces are dragged: the same measures as `check`, exact, but only of the pieces that move, with
 * everything that stays prepared once. Regions to hatch are drawn only when asked for.
 */

export interface LiveOverlap {
  /** The other placement. */
  readonly with: string;
  readonly depth: Millimetres;
  readonly at: Point;
}

export interface LiveNeighbour {
  readonly id: string;
  readonly distance: Millimetres;
  /** The nearest place of the moved piece, and of the other. */
  readonly from: Point;
  readonly to: Point;
  /** Whether it lies nearer than the clearance. */
  readonly tooNear: boolean;
}

/** What is to be said of one moved piece. */
export interface LivePiece {
  readonly id: string;
  readonly overlaps: readonly LiveOverlap[];
  /** The nearest piece that does not move with it; null when there is none, or when it overlaps one. */
  readonly nearest: LiveNeighbour | null;
  readonly offGrain: Degrees;
  readonly beyondTolerance: boolean;
  readonly againstNap: boolean;
  /** How far it hangs over each side; 0 where it does not. */
  readonly outside: Readonly<Record<StripSide, Millimetres>>;
  /** How far it hangs over the edge of an odd remnant; 0 where it does not. */
  readonly overEdge: Millimetres;
  readonly box: Box;
}

export interface LiveReport {
  readonly pieces: readonly LivePiece[];
  readonly readings: Readings;
}

export interface Live {
  /**
   * Where `ids` lie now, in the order of `placements`, and what that means. Pieces moved earlier and not named now are
   * back where the document has them. Throws for an id whose outline is not known.
   */
  moveTo(ids: readonly string[], placements: readonly Placement[]): LiveReport;
  /** What two pieces share where they now lie, for hatching. */
  regionOf(a: string, b: string): { readonly region: readonly Outline[]; readonly area: SquareMillimetres };
  /** The cut outline of a piece where it now lies; undefined when it is not known. */
  outline(id: string): PreparedOutline | undefined;
  /** The same for another state of the lay; what did not change is taken over. */
  update(document: LayDocument, book: PanelBook): Live;
}

/** Prepares a lay for being dragged about. */
export function createLive(document: LayDocument, book: PanelBook): Live {
  return liveOf(document, book, placedPieces(document, book));
}

function liveOf(document: LayDocument, book: PanelBook, all: readonly PlacedPiece[]): Live {
  const { strip } = document;
  const byId = new Map(all.map((piece) => [piece.placement.id, piece]));
  const still = readingsOf(document, book);
  /** Outlines of the pieces that are being moved. */
  let moving = new Map<string, PreparedOutline>();
  /** What stays during this gesture; kept while the same pieces move. */
  let gesture: Gesture | null = null;

  const outline = (id: string): PreparedOutline | undefined => moving.get(id) ?? byId.get(id)?.outline;

  return {
    moveTo(ids, placements) {
      gesture = gesture?.isOf(ids) ? gesture : new Gesture(ids, all);
      moving = new Map();
      const moved: Moved[] = ids.map((id, i) => {
        const piece = byId.get(id);
        if (!piece) throw new RangeError(`No piece ${id} on the cloth with an outline that is known`);
        const placement = placements[i]!;
        const placed = placedOutline(piece.panel, placement, strip);
        moving.set(id, placed);
        return { piece, placement, outline: placed };
      });
      const among = gesture.overlapsAmong(moved);
      const pieces = moved.map(({ piece: { panel }, placement, outline: own }, i): LivePiece => {
        const { overlaps, nearest } = gesture!.neighboursOf(own, strip.clearance);
        return {
          id: ids[i]!,
          overlaps: [...overlaps, ...among[i]!],
          nearest,
          offGrain: offGrain(panel, placement.turn),
          beyondTolerance: beyondTolerance(panel, strip, placement.turn),
          againstNap: againstNap(panel, strip, placement.turn),
          outside: overhang(own.box, strip),
          overEdge: strip.given?.outline ? outside(outlineOf(own), strip.given.outline).depth : 0,
          box: own.box
        };
      });
      const lengthUsed = Math.max(gesture.reach, ...moved.map((one) => one.outline.box.maxX));
      return {
        pieces,
        readings: {
          ...still,
          lengthUsed,
          ...sharesOf(strip, lengthUsed, still.area),
          clothToBuy: clothToBuy(strip, lengthUsed)
        }
      };
    },

    regionOf(a, b) {
      const [first, second] = [outline(a), outline(b)];
      return first && second ? overlapRegion(outlineOf(first), outlineOf(second)) : { region: [], area: 0 };
    },

    outline,

    update(next, nextBook) {
      const kept = new Map(all.map((piece) => [piece.placement, piece]));
      return liveOf(
        next,
        nextBook,
        nextBook === book &&
          next.garments === document.garments &&
          next.strip.spread === document.strip.spread
          ? placedPieces(next, nextBook, kept)
          : placedPieces(next, nextBook)
      );
    }
  };
}

interface Moved {
  readonly piece: PlacedPiece;
  readonly placement: Placement;
  readonly outline: PreparedOutline;
}

/** The pieces that stay while some move. */
class Gesture {
  readonly #ids: readonly string[];
  readonly #fixed: readonly PlacedPiece[];
  /** Distance of each fixed box from the piece that is being looked at; kept to spare the memory. */
  readonly #apart: Float64Array;
  /** How far the pieces that stay reach along the warp. */
  readonly reach: Millimetres;
  #body: { readonly first: readonly Placement[]; readonly overlaps: readonly Among[] } | null = null;

  constructor(ids: readonly string[], all: readonly PlacedPiece[]) {
    const moving = new Set(ids);
    this.#ids = [...ids];
    this.#fixed = all.filter(({ placement }) => !moving.has(placement.id));
    this.#apart = new Float64Array(this.#fixed.length);
    this.reach = this.#fixed.reduce((most, { outline }) => Math.max(most, outline.box.maxX), 0);
  }

  isOf(ids: readonly string[]): boolean {
    return ids.length === this.#ids.length && ids.every((id, i) => id === this.#ids[i]);
  }

  /** What a moved outline runs into of what stays, and what of it is nearest. */
  neighboursOf(
    own: PreparedOutline,
    clearance: Millimetres
  ): { overlaps: LiveOverlap[]; nearest: LiveNeighbour | null } {
    const overlaps: LiveOverlap[] = [];
    const apart = this.#apart;
    let first = 0;
    this.#fixed.forEach((piece, i) => {
      const least = boxDistance(own.box, piece.outline.box);
      apart[i] = least;
      if (least < apart[first]!) first = i;
      if (least > 0) return;
      const { depth, at } = overlapDepth(own, piece.outline);
      if (depth > TOUCHING && at) overlaps.push({ with: piece.placement.id, depth, at });
    });
    if (overlaps.length > 0 || this.#fixed.length === 0) return { overlaps, nearest: null };

    // The piece with the nearest box first: its distance leaves out almost all others.
    let nearest = this.#fixed[first]!;
    let best = outlineDistance(own, nearest.outline);
    this.#fixed.forEach((piece, i) => {
      if (i === first || apart[i]! >= best.distance) return;
      const found = outlineDistance(own, piece.outline);
      if (found.distance >= best.distance) return;
      nearest = piece;
      best = found;
    });
    return {
      overlaps,
      nearest: {
        id: nearest.placement.id,
        ...best,
        tooNear: best.distance < clearance - CLEARANCE_SLACK
      }
    };
  }

  /**
   * Overlaps of the moved pieces with one another. While they move as one body these stay the same and only their
   * places go along, so they are worked out once a body.
   */
  overlapsAmong(moved: readonly Moved[]): LiveOverlap[][] {
    const now = moved.map(({ placement }) => placement);
    if (!this.#body || !asOneBody(this.#body.first, now))
      this.#body = { first: now, overlaps: amongThemselves(moved) };
    const dx = (now[0]?.x ?? 0) - (this.#body.first[0]?.x ?? 0);
    const dy = (now[0]?.y ?? 0) - (this.#body.first[0]?.y ?? 0);
    const lists: LiveOverlap[][] = moved.map(() => []);
    for (const { i, j, depth, at } of this.#body.overlaps) {
      const place = { x: at.x + dx, y: at.y + dy };
      lists[i]!.push({ with: this.#ids[j]!, depth, at: place });
      lists[j]!.push({ with: this.#ids[i]!, depth, at: place });
    }
    return lists;
  }
}

/** Two moved pieces, by their numbers, that overlap. */
interface Among {
  readonly i: number;
  readonly j: number;
  readonly depth: Millimetres;
  readonly at: Point;
}

function amongThemselves(moved: readonly Moved[]): Among[] {
  const found: Among[] = [];
  for (let i = 0; i < moved.length; i++)
    for (let j = i + 1; j < moved.length; j++) {
      const { depth, at } = overlapDepth(moved[i]!.outline, moved[j]!.outline);
      if (depth > TOUCHING && at) found.push({ i, j, depth, at });
    }
  return found;
}

/** Whether all went the same way since `first`, within what the grid of placements rounds. */
function asOneBody(first: readonly Placement[], now: readonly Placement[]): boolean {
  const [a, b] = [first[0], now[0]];
  return (
    !!a &&
    !!b &&
    first.length === now.length &&
    first.every((from, i) => {
      const to = now[i]!;
      return (
        from.turn === to.turn &&
        from.flip === to.flip &&
        Math.abs(to.x - from.x - (b.x - a.x)) < 1e-6 &&
        Math.abs(to.y - from.y - (b.y - a.y)) < 1e-6
      );
    })
  );
}
