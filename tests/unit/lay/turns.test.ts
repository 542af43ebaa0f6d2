import { describe, expect, it } from 'vitest';
import fc from 'fast-check';
import { place } from '$lib/geometry/placement';
import {
  againstNap,
  allowedTurns,
  beyondTolerance,
  nearestTurn,
  nextTurn,
  offGrain,
  withinTolerance
} from '$lib/lay/turns';
import { turnSets } from '$lib/pattern/panel';
import { panel, rectangle, strip } from './workroom';
import { runs } from '../../runs';

const turned = (turns: (typeof turnSets)[number], grainTolerance = 0) =>
  panel('front', rectangle(100, 50), { turns, grainTolerance });

describe('allowed turns', () => {
  it('are those of the panel on cloth without nap', () => {
    expect(allowedTurns(turned('bothWays'), strip())).toEqual([0, 180]);
    expect(allowedTurns(turned('oneWay'), strip())).toEqual([0]);
    expect(allowedTurns(turned('across'), strip())).toEqual([90, 270]);
    expect(allowedTurns(turned('bias'), strip())).toEqual([45, 135, 225, 315]);
    expect(allowedTurns(turned('free'), strip())).toBeNull();
  });

  it('run one way on napped cloth', () => {
    const napped = strip({ nap: 'oneWay' });
    expect(allowedTurns(turned('bothWays'), napped)).toEqual([0]);
    expect(allowedTurns(turned('across'), napped)).toEqual([90]);
    expect(allowedTurns(turned('bias'), napped)).toEqual([45, 315]);
  });

  it('turn round where the nap of the layer runs the other way', () => {
    const back = strip({
      nap: 'oneWay',
      spread: [{ from: 0, to: 1000, layers: [{ sideUp: 'right', nap: 'against' }], fold: 'none' }]
    });
    expect(allowedTurns(turned('bothWays'), back)).toEqual([180]);
  });

  it('keep both ways where each garment runs one way of its own', () => {
    expect(allowedTurns(turned('bothWays'), strip({ nap: 'garmentWay' }))).toEqual([0, 180]);
  });
});

describe('the nap', () => {
  it('runs along the turn of a piece, flipped or not: the grain of a flipped piece still points along its turn', () => {
    for (const flip of [false, true])
      for (const turn of [0, 90, 180, 270]) {
        const from = place({ x: 0, y: 0 }, { x: 0, y: 0, turn, flip });
        const to = place({ x: 1, y: 0 }, { x: 0, y: 0, turn, flip });
        const against = to.x - from.x < 0;
        expect(againstNap(turned('bothWays'), strip({ nap: 'oneWay' }), turn)).toBe(against);
      }
  });

  it('does not matter on cloth without one, unless the panel asks for one way', () => {
    expect(againstNap(turned('bothWays'), strip(), 180)).toBe(false);
    expect(againstNap(turned('oneWay'), strip(), 180)).toBe(true);
  });
});

describe('off grain', () => {
  it('is the angle to the nearest turn on grain, against the nap or not', () => {
    expect(offGrain(turned('bothWays'), 178.5)).toBeCloseTo(1.5, 9);
    expect(offGrain(turned('bothWays'), 359)).toBeCloseTo(1, 9);
    expect(offGrain(turned('bias'), 90)).toBeCloseTo(45, 9);
    expect(offGrain(turned('free'), 33)).toBe(0);
  });

  it('lets a piece lie exactly at its tolerance and no step further', () => {
    const tolerant = turned('bothWays', 1.5);
    expect(beyondTolerance(tolerant, strip(), 1.5)).toBe(false);
    expect(beyondTolerance(tolerant, strip(), 358.5)).toBe(false);
    expect(beyondTolerance(tolerant, strip(), 1.5001)).toBe(true);
  });
});

describe('turning', () => {
  it('goes through the allowed turns and round again', () => {
    expect(nextTurn(turned('bias'), strip(), 0, 1)).toBe(45);
    expect(nextTurn(turned('bias'), strip(), 315, 1)).toBe(45);
    expect(nextTurn(turned('bias'), strip(), 45, -1)).toBe(315);
    expect(nextTurn(turned('oneWay'), strip(), 0, 1)).toBe(0);
    expect(nextTurn(turned('oneWay'), strip(), 2, 1)).toBe(0);
    expect(nextTurn(turned('free'), strip(), 10, 1)).toBe(15);
  });

  it('always ends on an allowed turn within the tolerance', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(...turnSets),
        fc.constantFrom('none' as const, 'oneWay' as const),
        fc.double({ min: -720, max: 720, noNaN: true }),
        fc.integer({ min: 0, max: 40 }),
        (turns, nap, turn, tolerance) => {
          const piece = turned(turns, tolerance);
          const cloth = strip({ nap });
          const kept = withinTolerance(piece, cloth, turn);
          expect(beyondTolerance(piece, strip(), kept)).toBe(false);
          expect(againstNap(piece, cloth, kept)).toBe(false);
          expect(withinTolerance(piece, cloth, kept)).toBeCloseTo(kept, 6);
          for (const step of [1, -1] as const)
            expect(withinTolerance(piece, cloth, nextTurn(piece, cloth, kept, step))).toBe(
              nextTurn(piece, cloth, kept, step)
            );
          expect(offGrain(piece, nearestTurn(piece, cloth, turn))).toBe(0);
        }
      ),
      { seed: 12, numRuns: runs(400) }
    );
  });
});
