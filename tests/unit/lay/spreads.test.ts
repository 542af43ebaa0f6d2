import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { SpreadChoice } from '$lib/cloth/spread';
import { area } from '$lib/geometry/polygon';
import { placeOutline } from '$lib/geometry/placement';
import { foldUnder, laidShape, ontoFold } from '$lib/lay/on-fold';
import { readingsOf } from '$lib/lay/readings';
import { openLayDocument } from '$lib/lay/stored-lay';
import { whereAllowed } from '$lib/lay/where-allowed';
import { yields } from '$lib/lay/yields';
import { nameOf } from '$lib/lay/wording';
import { halfShape } from '$lib/pattern/half';
import { runs } from '../../runs';
import { back, spread } from './folded-workroom';
import { bookOf, ell, lay, panel, placement, rectangle } from './workroom';

const sleeve = panel('ell', ell, { paired: true, howMany: 4 });
const whole = back({ howMany: 1 });

/** For each spread: where a placement lies and what it gives. Pieces needed, placements that yield them, pieces yielded. */
const table: [string, Partial<SpreadChoice>, number, Record<string, number>, number | null][] = [
  ['open, right side up', { kind: 'open' }, 300, { left: 1 }, null],
  ['open, wrong side up', { kind: 'open', sideUp: 'wrong' }, 300, { right: 1 }, null],
  ['folded lengthwise', { kind: 'lengthwise', sideUp: 'wrong' }, 100, { right: 1, left: 1 }, 1],
  [
    'folded in part, doubled',
    { kind: 'lengthwise', sideUp: 'wrong', depth: 400 },
    100,
    { right: 1, left: 1 },
    1
  ],
  ['folded in part, single', { kind: 'lengthwise', sideUp: 'wrong', depth: 400 }, 425, { left: 1 }, 1],
  ['folded crosswise', { kind: 'crosswise', turned: false }, 300, { left: 1, right: 1 }, null],
  ['crosswise, cut and turned', { kind: 'crosswise', turned: true }, 300, { left: 1, right: 1 }, null],
  ['4 plies facing up', { kind: 'pliesUp', plies: 4 }, 300, { left: 4 }, null],
  ['4 plies face to face', { kind: 'faceToFace', plies: 4 }, 300, { left: 2, right: 2 }, null],
  ['tubular', { kind: 'tubular' }, 300, { left: 1, right: 1 }, 1]
];

describe('what a placement yields on each spread', () => {
  it.each(table)('%s', (_, choice, y, expected, onFold) => {
    const cloth = spread(choice);
    const given = yields(placement('a', 'ell', { y }), sleeve, cloth);
    expect(Object.fromEntries(given.map(({ hand, count }) => [hand, count]))).toEqual(expected);
    const lying = ontoFold(whole, placement('b', 'back'), cloth);
    const backs = yields(lying, whole, cloth).reduce((sum, { count }) => sum + count, 0);
    if (onFold === null) expect(foldUnder(whole, lying, cloth)).toBeNull();
    else {
      expect(foldUnder(whole, lying, cloth)).not.toBeNull();
      expect(backs).toBe(onFold);
    }
  });

  it('counts the Rail down: two placements under a fold give two pairs, one on the fold the back', () => {
    const cloth = spread({ kind: 'lengthwise', sideUp: 'wrong' });
    const document = lay(
      bookOf(sleeve, whole),
      [
        placement('a', 'ell', { x: 400, y: 50 }),
        placement('b', 'ell', { x: 800, y: 50 }),
        placement('c', 'back')
      ],
      cloth
    );
    expect(openLayDocument(JSON.parse(JSON.stringify(document)))).toEqual(document);
    expect(readingsOf(document, bookOf(sleeve, whole)).pieces).toEqual({ needed: 5, placed: 5, loose: 0 });
    expect(nameOf(document, bookOf(sleeve, whole), document.placements[0]!)).toBe('Ell (pair) of Ada');
  });

  it('counts all layers in area, efficiency and the length to buy', () => {
    const flat = panel('band', rectangle(500, 100), { symmetric: true, howMany: 4 });
    const one = readingsOf(
      lay(bookOf(flat), [placement('a', 'band')], spread({ kind: 'pliesUp', plies: 4 })),
      bookOf(flat)
    );
    expect(one.area).toBe(4 * 50_000);
    expect(one.efficiency).toBeCloseTo(50_000 / (1000 * 500), 12);
    expect(one.clothToBuy.furtherPlies).toBe(3 * 540);
    expect(one.clothToBuy.total).toBe(2200);
    expect(one.utilisation).toBeCloseTo((4 * 50_000) / (1040 * 4 * 540), 12);
  });
});

describe('a piece on the fold', () => {
  const cloth = spread({ kind: 'lengthwise' });
  it('is half of the whole: the halves have its area and make it up again', () => {
    const [upper, lower] = [halfShape(whole.shape, 1), halfShape(whole.shape, -1)];
    expect(area(upper.cut) + area(lower.cut)).toBeCloseTo(area(whole.shape.cut), 6);
    expect(upper.cut.every(({ y }) => y >= 0)).toBe(true);
    expect(lower.cut.every(({ y }) => y <= 0)).toBe(true);
    expect(upper.foldLine).toEqual({ from: { x: 0, y: 0 }, to: { x: 280, y: 0 } });
  });

  it('lies on the cloth’s side of the fold at every turn and flip, and unfolding leaves it where it was', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(0, 180),
        fc.boolean(),
        fc.double({ min: -20, max: 20, noNaN: true }),
        (turn, flip, y) => {
          const lying = ontoFold(whole, placement('a', 'back', { x: 400, y, turn, flip }), cloth);
          const cut = placeOutline(laidShape(whole, lying, cloth).cut, lying);
          expect(Math.min(...cut.map((point) => point.y))).toBeCloseTo(0, 6);
          expect(area(cut)).toBeCloseTo(area(whole.shape.cut) / 2, 6);
          const open = spread({ kind: 'open' });
          expect(laidShape(whole, lying, open)).toBe(whole.shape);
        }
      ),
      { seed: 5, numRuns: runs(100) }
    );
  });

  it('is not taken onto the fold from far off', () => {
    const lying = placement('a', 'back', { y: 120 });
    expect(ontoFold(whole, lying, cloth)).toBe(lying);
  });
});

describe('where a piece may lie', () => {
  it('on the fold first, then clear of it, each with what it gives', () => {
    const cloth = spread({ kind: 'lengthwise', depth: 400 });
    const document = lay(bookOf(whole), [], cloth);
    const { stretches } = whereAllowed(document, bookOf(whole), { garment: 'ada', panel: 'back' })!;
    expect(
      stretches.map(({ band, fold, gives }) => [band.from, band.to, fold?.side, gives[0]!.count])
    ).toEqual([
      [0, 400, 'near', 1],
      [3, 400, undefined, 1],
      [420, 600, undefined, 1]
    ]);
    expect(stretches[0]!.shape).toBe(halfShape(whole.shape, 1));
    for (const way of stretches[0]!.ways!) {
      const lying = ontoFold(whole, { ...placement('a', 'back'), ...way }, cloth);
      expect(laidShape(whole, lying, cloth)).toBe(stretches[0]!.shape);
    }
  });

  it('keeps the place of the repeat that a matched piece on the cloth has', () => {
    const point = { id: 'p', name: 'Notch', at: { x: 30, y: 20 } };
    const striped = { ...sleeve, shape: { ...sleeve.shape, matchPoints: [point] } };
    const cloth = spread(
      { kind: 'open' },
      {
        repeat: {
          along: { size: 80, offset: 0, symmetric: true },
          across: { size: 50, offset: 10, symmetric: true }
        },
        nap: 'oneWay'
      }
    );
    const group = (mirrored: boolean) => [
      { id: 'g', mirrored, points: [{ garment: 'ada', panel: 'ell', point: 'p' }] }
    ];
    const at = (mirrored: boolean, flip: boolean, laid: boolean) => {
      const document = {
        ...lay(bookOf(striped), laid ? [placement('a', 'ell', { x: 100, y: 300 })] : [], cloth),
        rules: { matchGroups: group(mirrored), matchTolerance: 2, mayCoverFlaws: [] }
      };
      return whereAllowed(document, bookOf(striped), { garment: 'ada', panel: 'ell' })!.latticesFor({
        turn: 0,
        flip
      })[0]!;
    };
    expect(at(false, false, true)).toEqual({
      anchor: { x: 30, y: 20 },
      x: { size: 80, at: 130 },
      y: { size: 50, at: 320 },
      group: null
    });
    // Mirrored about the first line at 10: 320 lies 310 beyond it, its image 310 before.
    expect(at(true, true, true).y).toEqual({ size: 50, at: -300 });
    expect(at(false, false, false).group).toBe('g');
    expect(at(true, false, false).group).toBeNull();
  });
});
