import { areaPaths, FillRule, intersect, type Path64 } from 'clipper2-ts';
import { expect, it } from 'vitest';
import { centredRing, inflated } from '$lib/settle/form';
import { noFitRings, type Ring } from '$lib/settle/no-fit';
import { distance } from '$lib/settle/placed-outline';
import { randomFrom } from '$lib/settle/random';
import { outerSimplified } from '$lib/settle/simplify';
import { oddOutline } from './made-up-problem';

const ringOf = (random: () => number, corners: number): Ring =>
  centredRing(oddOutline(random, 100, corners), { turn: 0, flip: false, nap: 0 }, 2000)!.ring;

/** On a coarse lattice many edges are parallel and many places touch exactly. */
const latticeRing = (random: () => number): Ring => {
  const outline = oddOutline(random, 5, 4 + Math.floor(random() * 5)).map((p) => ({
    x: Math.round(p.x),
    y: Math.round(p.y)
  }));
  return (
    centredRing(outline, { turn: 0, flip: false, nap: 0 }, 2000)?.ring ?? {
      xs: Float64Array.from([0, 2000, 0]),
      ys: Float64Array.from([0, 0, 2000])
    }
  );
};

const path = ({ xs, ys }: Ring, dx = 0, dy = 0): Path64 =>
  Array.from(xs, (x, i) => ({ x: Math.round(x + dx), y: Math.round(ys[i]! + dy) }));

function holds(rings: readonly Ring[], px: number, py: number): boolean {
  let inside = false;
  for (const { xs, ys } of rings)
    for (let i = 0, j = xs.length - 1; i < xs.length; j = i++)
      if (
        ys[j]! <= py !== ys[i]! <= py &&
        xs[j]! + ((py - ys[j]!) / (ys[i]! - ys[j]!)) * (xs[i]! - xs[j]!) > px
      )
        inside = !inside;
  return inside;
}

it.each([
  ['odd outlines', 1, (random: () => number) => ringOf(random, 3 + Math.floor(random() * 12))],
  ['outlines on a lattice', 2, latticeRing]
] as const)('a no-fit region holds exactly the places that overlap: %s', (_, seed, make) => {
  const random = randomFrom(seed);
  let overlapping = 0;
  for (let k = 0; k < 300; k++) {
    const a = make(random);
    const b = make(random);
    const rings = noFitRings(a, b);
    const reach = Math.max(...rings.flatMap((ring) => [...ring.xs, ...ring.ys].map(Math.abs)));
    for (let s = 0; s < 6; s++) {
      const px = Math.round((2 * random() - 1) * reach);
      const py = Math.round((2 * random() - 1) * reach);
      const shared = Math.abs(areaPaths(intersect([path(a)], [path(b, px, py)], FillRule.NonZero)));
      // Places within rounding of the border may go either way.
      if (shared > 0 && shared < 4000) continue;
      if (shared > 0) overlapping++;
      expect(holds(rings, px, py), `pair ${k} at ${px}, ${py} shares ${shared}`).toBe(shared > 0);
    }
  }
  expect(overlapping).toBeGreaterThan(200);
});

it('an outline moved out keeps the clearance everywhere and wastes little of it', () => {
  const random = randomFrom(3);
  for (let k = 0; k < 60; k++) {
    const ring = ringOf(random, 4 + (k % 9));
    const wide = inflated(ring, 6000);
    const apart = distance(
      Array.from(ring.xs, (x, i) => ({ x, y: ring.ys[i]! })),
      Array.from(wide.xs, (x, i) => ({ x, y: wide.ys[i]! }))
    );
    // A few quanta of rounding: 0.0015 mm in the product.
    expect(apart).toBeGreaterThan(5997);
    expect(apart).toBeLessThan(6003);
  }
});

it('a simplified outline holds the original and reaches no farther than asked', () => {
  const random = randomFrom(4);
  let fewer = 0;
  for (let k = 0; k < 60; k++) {
    const outline = oddOutline(random, 100, 40);
    const simple = outerSimplified(outline, 2);
    fewer += outline.length - simple.length;
    const before = path({
      xs: Float64Array.from(outline, (p) => p.x * 1e4),
      ys: Float64Array.from(outline, (p) => p.y * 1e4)
    });
    const after = path({
      xs: Float64Array.from(simple, (p) => p.x * 1e4),
      ys: Float64Array.from(simple, (p) => p.y * 1e4)
    });
    const kept = areaPaths(intersect([before], [after], FillRule.NonZero));
    expect(kept / areaPaths([before])).toBeGreaterThan(1 - 1e-6);
  }
  expect(fewer).toBeGreaterThan(60);
});
