import type { Point } from '$lib/geometry/point';
import type { LayDocument } from '$lib/lay/document';
import type { Live, LiveReport } from '$lib/lay/live';
import type { LoosePiece } from '$lib/lay/needs';
import { stepped, type TablePiece } from './table-pieces';

/*
 * The pieces that are held, lifted off the cloth or the Rail, and what the live check says of where they are.
 */

/** An overlap of a held piece: where, how deep, with what. */
export interface HeldOverlap {
  readonly at: Point;
  readonly depth: number;
  readonly piece: string;
  readonly other: string;
}

/** Most overlaps that are hatched in one frame; the deepest first. */
const MOST_HATCHED = 6;

/** A check that took longer than this (milliseconds) makes the next ones rest, so that the pieces stay with the hand. */
const HEAVY_MS = 2.5;
const REST_MS = 70;

export class Handful {
  readonly ids: readonly string[];
  /** The same, to be asked. */
  readonly moving: ReadonlySet<string>;
  #step: Point | null = null;
  #report: LiveReport | null = null;
  #restUntil = 0;

  constructor(
    /** As they lay when they were taken; from the Rail: with their middle under the pointer. */
    readonly pieces: readonly TablePiece[],
    /** The hanger that the piece came from; null when the pieces came off the cloth. */
    readonly fromRail: LoosePiece | null,
    private readonly live: Live,
    /** The lay that the pieces are moved in. */
    readonly document: LayDocument
  ) {
    this.ids = pieces.map(({ id }) => id);
    this.moving = new Set(this.ids);
  }

  /** Whether the last report is of another step: ask again after a moment. */
  behind(step: Point): boolean {
    return this.#step?.x !== step.x || this.#step.y !== step.y;
  }

  /**
   * What the check says with the pieces carried by `step`. After a heavy check (many pieces over many) the same answer
   * comes for a few frames.
   */
  report(step: Point): LiveReport {
    const began = performance.now();
    if (this.#report && (!this.behind(step) || began < this.#restUntil)) return this.#report;
    this.#report = this.live.moveTo(
      this.ids,
      this.pieces.map(({ placement }) => stepped(placement, step))
    );
    this.#step = step;
    const ended = performance.now();
    this.#restUntil = ended - began > HEAVY_MS ? ended + REST_MS : 0;
    return this.#report;
  }

  /** Overlaps of the held pieces, deepest first. */
  overlaps(step: Point): HeldOverlap[] {
    const own = new Set(this.ids);
    const found: HeldOverlap[] = [];
    for (const piece of this.report(step).pieces)
      for (const { with: other, depth, at } of piece.overlaps)
        // Two held pieces name each other: once is enough.
        if (!own.has(other) || piece.id < other) found.push({ at, depth, piece: piece.id, other });
    return found.sort((a, b) => b.depth - a.depth).slice(0, MOST_HATCHED);
  }
}
