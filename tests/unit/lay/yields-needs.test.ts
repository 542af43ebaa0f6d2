import { describe, expect, it } from 'vitest';
import fc from 'fast-check';
import { balance, loose, needsOf } from '$lib/lay/needs';
import { flipFor, handAsLaid, yields } from '$lib/lay/yields';
import { bookOf, ell, garment, lay, panel, placement, rectangle, strip } from './workroom';
import { runs } from '../../runs';

const left = panel('ell', ell, { howMany: 2, paired: true, hand: 'left' });
const whole = panel('yoke', rectangle(200, 100), { symmetric: true });

describe('what a placement gives', () => {
  it('gives the drawn hand, and the other one flipped', () => {
    expect(yields(placement('a', 'ell'), left, strip())).toEqual([
      { garment: 'ada', panel: 'ell', hand: 'left', asLaid: 'left', count: 1 }
    ]);
    expect(yields(placement('a', 'ell', { flip: true }), left, strip())[0]!.hand).toBe('right');
  });

  it('gives the other hand on cloth with its wrong side up', () => {
    const wrongUp = strip({
      spread: [{ from: 0, to: 1000, layers: [{ sideUp: 'wrong', nap: 'along' }], fold: 'none' }]
    });
    expect(yields(placement('a', 'ell'), left, wrongUp)[0]!.hand).toBe('right');
    expect(yields(placement('a', 'ell', { flip: true }), left, wrongUp)[0]!.hand).toBe('left');
    expect(flipFor('left', left, wrongUp)).toBe(true);
  });

  it('leaves the hand open for a symmetric piece and on cloth with both sides alike', () => {
    expect(yields(placement('a', 'yoke', { flip: true }), whole, strip())[0]!.hand).toBe('either');
    expect(yields(placement('a', 'ell'), left, strip({ sidesAlike: true }))[0]!).toMatchObject({
      hand: 'either',
      asLaid: 'left'
    });
  });

  it('gives one piece a ply, and a pair under a fold', () => {
    const plies = strip({
      spread: [
        {
          from: 0,
          to: 1000,
          layers: Array.from({ length: 4 }, () => ({ sideUp: 'right' as const, nap: 'along' as const })),
          fold: 'none'
        }
      ]
    });
    expect(yields(placement('a', 'ell'), left, plies)).toMatchObject([{ hand: 'left', count: 4 }]);
    const folded = strip({
      spread: [
        {
          from: 0,
          to: 1000,
          layers: [
            { sideUp: 'wrong', nap: 'along' },
            { sideUp: 'right', nap: 'along' }
          ],
          fold: 'near'
        }
      ]
    });
    expect(yields(placement('a', 'ell'), left, folded).map(({ hand, count }) => [hand, count])).toEqual([
      ['right', 1],
      ['left', 1]
    ]);
  });

  it('asks for a flip exactly where the hand as laid differs', () => {
    for (const hand of ['left', 'right'] as const) {
      const flip = flipFor(hand, left, strip());
      expect(handAsLaid({ flip }, left, strip())).toBe(hand);
    }
    expect(flipFor('either', left, strip())).toBe(false);
  });
});

describe('what an order needs', () => {
  it('needs half of a pair left and half right, and either hand of a symmetric piece', () => {
    const book = bookOf({ ...left, howMany: 4 }, whole);
    expect(needsOf([garment()], book, strip())).toEqual([
      { garment: 'ada', panel: 'ell', hand: 'left', count: 2 },
      { garment: 'ada', panel: 'ell', hand: 'right', count: 2 },
      { garment: 'ada', panel: 'yoke', hand: 'either', count: 1 }
    ]);
  });

  it('needs a single piece of its own hand, either where both sides of the cloth are alike', () => {
    const book = bookOf(panel('ell', ell, { hand: 'right' }));
    expect(needsOf([garment()], book, strip())[0]!.hand).toBe('right');
    expect(needsOf([garment()], book, strip({ sidesAlike: true }))[0]!.hand).toBe('either');
  });

  it('leaves out what a garment takes from another cloth', () => {
    const book = bookOf(left, { ...whole, role: 'lining' });
    const needs = needsOf([garment()], book, strip(), (_, { role }) => role === 'main');
    expect(needs.map((need) => need.panel)).toEqual(['ell', 'ell']);
  });
});

describe('what hangs on the Rail', () => {
  const book = bookOf(left, whole);

  it('is all that is needed while nothing lies', () => {
    expect(loose(lay(book, []), book)).toEqual([
      { garment: 'ada', panel: 'ell', hand: 'left' },
      { garment: 'ada', panel: 'ell', hand: 'right' },
      { garment: 'ada', panel: 'yoke', hand: 'either' }
    ]);
  });

  it('does not let two pieces of one hand make a pair on cloth with a right and a wrong side', () => {
    const two = lay(book, [placement('a', 'ell'), placement('b', 'ell')]);
    expect(balance(two, book)).toEqual({
      loose: [
        { garment: 'ada', panel: 'ell', hand: 'right' },
        { garment: 'ada', panel: 'yoke', hand: 'either' }
      ],
      surplus: [{ placement: 'b', garment: 'ada', panel: 'ell', hand: 'left', count: 1 }]
    });
  });

  it('lets them on cloth with both sides alike, each for the hand it lies as first', () => {
    const cloth = strip({ sidesAlike: true });
    const one = lay(book, [placement('a', 'ell', { flip: true })], cloth);
    expect(loose(one, book)[0]!).toMatchObject({ panel: 'ell', hand: 'left' });
    const two = lay(book, [placement('a', 'ell'), placement('b', 'ell')], cloth);
    expect(loose(two, book).map((piece) => piece.panel)).toEqual(['yoke']);
  });

  it('balances whatever lies: needed + surplus = given + loose', () => {
    fc.assert(
      fc.property(
        fc.array(fc.record({ panel: fc.constantFrom('ell', 'yoke'), flip: fc.boolean() }), { maxLength: 12 }),
        fc.boolean(),
        fc.constantFrom('ada', 'bea'),
        (laid, sidesAlike, of) => {
          const document = lay(
            book,
            laid.map(({ panel: id, flip }, i) => placement(`p${i}`, id, { flip, garment: of })),
            strip({ sidesAlike }),
            [garment('ada'), garment('bea')]
          );
          const { loose: hanging, surplus } = balance(document, book);
          const needed = document.needs.reduce((sum, need) => sum + need.count, 0);
          const extra = surplus.reduce((sum, one) => sum + one.count, 0);
          expect(needed + extra).toBe(laid.length + hanging.length);
          expect(hanging.filter((piece) => piece.garment !== of)).toHaveLength(3);
        }
      ),
      { seed: 11, numRuns: runs(200) }
    );
  });
});
