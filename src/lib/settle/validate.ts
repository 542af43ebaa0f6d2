import { placeOutline } from '$lib/geometry/placement';
import type { Millimetres } from '$lib/units/measure';
import { depthOf, distance, placedOf, reachOutside, type Placed } from './placed-outline';
import type { SettleProblem, SettleResult } from './problem';

/** A rule that a result breaks: which pieces, and by how much. */
export interface Breach {
  readonly rule:
    | 'overlap'
    | 'clearance'
    | 'outside'
    | 'keep-out'
    | 'way'
    | 'fold'
    | 'band'
    | 'lattice'
    | 'nap'
    | 'copies'
    | 'length';
  readonly pieces: readonly string[];
  readonly measure: Millimetres;
}

/**
 * Every rule that `result` breaks, found with other code than the search's: on the original outlines as the product
 * places them, edge against edge. What is less than the problem's `touching` counts as none.
 */
export function validate(problem: SettleProblem, result: SettleResult): Breach[] {
  const tolerance = problem.touching;
  const breaches: Breach[] = [];
  const pieces = new Map(problem.pieces.map((piece) => [piece.id, piece]));
  const seen = new Set<string>();
  const placed: Placed[] = [];
  const naps = new Map<string, number>();
  const lattices = new Map<string, { x: number; y: number }>();
  let furthest = 0;
  for (const placement of result.placements) {
    const piece = pieces.get(placement.piece);
    const name = `${placement.piece}#${placement.copy}`;
    if (!piece || seen.has(name) || placement.copy < 0 || placement.copy >= piece.copies) {
      breaches.push({ rule: 'copies', pieces: [name], measure: 1 });
      continue;
    }
    seen.add(name);
    let off = Infinity;
    let nap = 0;
    for (const way of piece.ways) {
      const apart = Math.abs(((((way.turn - placement.turn) % 360) + 540) % 360) - 180);
      if (way.flip !== placement.flip || apart >= off) continue;
      off = apart;
      nap = way.nap;
    }
    if (!(off <= piece.tilt + 1e-4)) breaches.push({ rule: 'way', pieces: [name], measure: off });
    if (piece.napGroup !== null && nap !== 0) {
      if ((naps.get(piece.napGroup) ?? nap) !== nap)
        breaches.push({ rule: 'nap', pieces: [name], measure: 180 });
      naps.set(piece.napGroup, nap);
    }
    const outline = placeOutline(piece.outline, placement);
    const low = Math.min(...outline.map((p) => p.y));
    if (piece.onFold && Math.abs(low) > tolerance)
      breaches.push({ rule: 'fold', pieces: [name], measure: low });
    if (piece.band) {
      const high = Math.max(...outline.map((p) => p.y));
      const out = Math.max(piece.band.from - low, high - piece.band.to);
      if (out > tolerance) breaches.push({ rule: 'band', pieces: [name], measure: out });
    }
    if (piece.lattice) {
      const { group } = piece.lattice;
      const [anchor] = placeOutline([piece.lattice.anchor], placement);
      // The first piece of a group says where the lines of the others are.
      const from = (group === null ? { x: 0, y: 0 } : lattices.get(group)) ?? {
        x: anchor!.x - (piece.lattice.x?.at ?? 0),
        y: anchor!.y - (piece.lattice.y?.at ?? 0)
      };
      if (group !== null) lattices.set(group, from);
      for (const [v, line] of [
        [anchor!.x - from.x, piece.lattice.x],
        [anchor!.y - from.y, piece.lattice.y]
      ] as const) {
        if (!line) continue;
        const miss = Math.abs(v - line.at - Math.round((v - line.at) / line.size) * line.size);
        if (miss > tolerance) breaches.push({ rule: 'lattice', pieces: [name], measure: miss });
      }
    }
    placed.push(placedOf(name, outline, false));
  }
  for (const lock of problem.locked) placed.push(placedOf(lock.id, lock.outline, true));
  const limit = problem.length ?? Infinity;
  for (const one of placed) {
    furthest = Math.max(furthest, one.maxX);
    if (one.fixed) continue;
    const out = Math.max(-one.minX, -one.minY, one.maxY - problem.width, one.maxX - limit);
    if (out > tolerance) breaches.push({ rule: 'outside', pieces: [one.name], measure: out });
    if (problem.outline) {
      const over = reachOutside(one.outline, problem.outline);
      if (over > tolerance) breaches.push({ rule: 'outside', pieces: [one.name], measure: over });
    }
    for (const keepOut of problem.keepOuts)
      compare(one, placedOf('keep-out', keepOut, true), problem.clearance, 'keep-out');
  }
  if (Math.abs(furthest - result.length) > tolerance)
    breaches.push({ rule: 'length', pieces: [], measure: furthest - result.length });
  placed.sort((a, b) => a.minX - b.minX);
  for (let i = 0; i < placed.length; i++)
    for (let j = i + 1; j < placed.length; j++) {
      if (placed[j]!.minX >= placed[i]!.maxX + problem.clearance) break;
      if (!placed[i]!.fixed || !placed[j]!.fixed)
        compare(placed[i]!, placed[j]!, problem.clearance, 'overlap');
    }
  return breaches;

  function compare(a: Placed, b: Placed, clearance: number, rule: 'overlap' | 'keep-out'): void {
    if (
      a.minX >= b.maxX + clearance ||
      b.minX >= a.maxX + clearance ||
      a.minY >= b.maxY + clearance ||
      b.minY >= a.maxY + clearance
    )
      return;
    const depth = depthOf(a, b);
    if (depth > tolerance) breaches.push({ rule, pieces: [a.name, b.name], measure: depth });
    else if (clearance > 0) {
      const short = clearance - distance(a.outline, b.outline);
      if (short > tolerance) breaches.push({ rule: 'clearance', pieces: [a.name, b.name], measure: short });
    }
  }
}
