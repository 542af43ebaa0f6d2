import { travel } from '$lib/geometry/contact';
import { placeOutline } from '$lib/geometry/placement';
import { prepare, type PreparedOutline } from '$lib/geometry/prepared';
import type { SettlePiece, SettlePlacement, SettleProblem } from './problem';

/** Each pass moves what the one before made room for. */
const PASSES = 6;

/**
 * The placements pushed across the cloth towards its preferred side, as far as pieces, flaws and the clearance let them: what is
 * left of the width then lies in one place along the other side. No piece moves along the cloth. Pieces on the fold and
 * on a repeat across the width stay, and so does everything on a remnant of odd outline.
 */
export function towardsSide(
  problem: SettleProblem,
  placements: readonly SettlePlacement[]
): readonly SettlePlacement[] {
  if (problem.preferredSide === null || problem.outline) return placements;
  const sign = problem.preferredSide === 'near' ? -1 : 1;
  const direction = { x: 0, y: sign };
  const pieces = new Map(problem.pieces.map((piece) => [piece.id, piece]));
  const still = [...problem.locked.map(({ outline }) => outline), ...problem.keepOuts].map((one) =>
    prepare(one)
  );
  const laid = placements.map((placement) => {
    const piece = pieces.get(placement.piece)!;
    return { placement, piece, shape: prepare(placeOutline(piece.outline, placement)) };
  });
  laid.sort((a, b) => sign * (b.shape.box.minY - a.shape.box.minY));
  for (let pass = 0; pass < PASSES; pass++) {
    let moved = false;
    for (const one of laid) {
      if (!slides(one.piece)) continue;
      const room = roomOf(problem, one.piece, one.shape, sign);
      if (room < 0.001) continue;
      const { box } = one.shape;
      const reach = problem.clearance;
      const meets = (other: PreparedOutline) =>
        other.box.maxX > box.minX - reach && other.box.minX < box.maxX + reach;
      const others = [...still, ...laid.filter((other) => other !== one).map(({ shape }) => shape)].filter(
        meets
      );
      const far = travel(one.shape, others, direction, problem.clearance, room);
      if (far < 0.001) continue;
      const y = Math.round((one.placement.y + sign * far) * 1000) / 1000;
      one.placement = { ...one.placement, y };
      one.shape = prepare(placeOutline(one.piece.outline, one.placement));
      moved = true;
    }
    if (!moved) break;
  }
  const found = new Map(laid.map(({ placement }) => [`${placement.piece}#${placement.copy}`, placement]));
  return placements.map(({ piece, copy }) => found.get(`${piece}#${copy}`)!);
}

function slides(piece: SettlePiece): boolean {
  return !piece.onFold && !piece.lattice?.y;
}

/** How far a piece may go before the cloth, or its stretch of it, ends; on the grid. */
function roomOf(problem: SettleProblem, piece: SettlePiece, shape: PreparedOutline, sign: number): number {
  const low = piece.band?.from ?? 0;
  const high = Math.min(problem.width, piece.band?.to ?? problem.width);
  const room = sign < 0 ? shape.box.minY - low : high - shape.box.maxY;
  return Math.floor(room * 1000 + 1e-6) / 1000;
}
