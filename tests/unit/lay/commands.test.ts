import { describe, expect, it } from 'vitest';
import fc from 'fast-check';
import { boundingBox } from '$lib/geometry/polygon';
import { placeOutline } from '$lib/geometry/placement';
import { check } from '$lib/lay/check';
import { copyArrangement } from '$lib/lay/arrangement';
import * as commands from '$lib/lay/commands';
import type { Edit } from '$lib/lay/edit';
import { exactOf, setExact } from '$lib/lay/exact';
import type { LayDocument, LayPlacement } from '$lib/lay/document';
import { loose } from '$lib/lay/needs';
import { snug, snugWays } from '$lib/lay/snug';
import { bookOf, ell, garment, lay, panel, placement, rectangle, star, starPanel, strip } from './workroom';
import { runs } from '../../runs';

const book = bookOf(
  panel('ell', ell, { paired: true, howMany: 2, hand: 'left' }),
  panel('yoke', rectangle(400, 150), { symmetric: true }),
  panel('cuff', rectangle(60, 30), { symmetric: true, turns: 'free', grainTolerance: 10 }),
  panel('tie', rectangle(500, 40), { symmetric: true, grainTolerance: 2 })
);
const bare = lay(book, []);

function done(edit: Edit): LayDocument {
  expect(edit.refused).toBeUndefined();
  expect(edit.said).not.toBe('');
  return edit.document!;
}

const one = (document: LayDocument, id: string): LayPlacement =>
  document.placements.find((each) => each.id === id)!;

function boxOf(document: LayDocument, id: string) {
  const laid = one(document, id);
  return boundingBox(placeOutline(book[`style/${laid.panel}`]!.shape.cut, laid));
}

describe('taking a piece from the Rail', () => {
  it('lays it with its middle where it is dropped and the hand that is needed', () => {
    const [left, right] = loose(bare, book);
    const laid = done(commands.placeFromRail(bare, book, right!, { x: 500, y: 400 }, 'a'));
    expect(one(laid, 'a').flip).toBe(true);
    expect(boxOf(laid, 'a')).toEqual({ minX: 350, maxX: 650, minY: 300, maxY: 500 });
    expect(loose(laid, book)).toEqual(loose(bare, book).toSpliced(1, 1));
    expect(one(done(commands.placeFromRail(laid, book, left!, { x: 0, y: 0 }, 'b')), 'b').flip).toBe(false);
  });

  it('is refused once it no longer hangs there', () => {
    const [left] = loose(bare, book);
    const laid = done(commands.placeFromRail(bare, book, left!, { x: 0, y: 0 }, 'a'));
    expect(commands.placeFromRail(laid, book, left!, { x: 0, y: 0 }, 'b').refused).toBe(
      'Ell (left) of Ada no longer hangs on the Rail.'
    );
  });
});

describe('moving and locking', () => {
  const laid = lay(book, [placement('a', 'ell'), placement('b', 'yoke', { y: 300, locked: true })]);

  it('moves the chosen pieces on the grid and says how far', () => {
    const edit = commands.move(laid, book, ['a'], 10.00049, -1);
    expect(one(done(edit), 'a')).toMatchObject({ x: 10, y: -1 });
    expect(edit.said).toBe(
      'Ell (left) of Ada moved 10 mm towards the end and 1 mm towards the near selvedge.'
    );
  });

  it('never moves a locked piece, and says so', () => {
    const edit = commands.move(laid, book, ['a', 'b'], 10, 0);
    expect(one(done(edit), 'b')).toBe(one(laid, 'b'));
    expect(edit.said).toContain('1 locked, left alone');
    for (const refused of [
      commands.move(laid, book, ['b'], 1, 0),
      commands.turnBySteps(laid, book, ['b'], 1),
      commands.flip(laid, book, ['b']),
      setExact(laid, book, 'b', { fromStart: 0 }),
      commands.toRail(laid, book, ['b']),
      snug(laid, book, ['b'], 'near')
    ])
      expect(refused.refused).toMatch(/locked/);
    const open = done(commands.setLocked(laid, book, ['b'], false));
    expect(one(done(commands.move(open, book, ['b'], 10, 0)), 'b').x).toBe(10);
  });

  it('leaves the document it was given as it was', () => {
    const before = structuredClone(laid);
    for (const edit of [
      commands.move(laid, book, ['a'], 5, 5),
      commands.turnBySteps(laid, book, ['a'], 1),
      commands.toRail(laid, book, ['a'])
    ])
      done(edit);
    expect(laid).toEqual(before);
  });
});

describe('turning', () => {
  it('goes to the next allowed turn about the middle of the piece', () => {
    const laid = lay(book, [placement('a', 'ell', { x: 100, y: 100 })]);
    const turned = done(commands.turnBySteps(laid, book, ['a'], 1));
    expect(one(turned, 'a').turn).toBe(180);
    expect(boxOf(turned, 'a')).toEqual(boxOf(laid, 'a'));
  });

  it('turns several pieces as one body when all turn alike', () => {
    const laid = lay(book, [placement('a', 'ell'), placement('b', 'yoke', { x: 50, y: 300 })]);
    const turned = done(commands.turnBySteps(laid, book, ['a', 'b'], 1));
    expect(boxOf(turned, 'a')).toEqual({ minX: 150, maxX: 450, minY: 250, maxY: 450 });
    expect(boxOf(turned, 'b')).toEqual({ minX: 0, maxX: 400, minY: 0, maxY: 150 });
  });

  it('is refused where only one way is allowed', () => {
    const napped = lay(book, [placement('a', 'ell')], strip({ nap: 'oneWay' }));
    expect(commands.turnBySteps(napped, book, ['a'], 1).refused).toMatch(/only this way/);
  });

  it('goes freely up to the grain tolerance and no further', () => {
    const laid = lay(book, [placement('t', 'tie', { y: 100 })]);
    const turned = done(commands.turnFreely(laid, book, ['t'], 1.5));
    expect(one(turned, 't').turn).toBe(1.5);
    const most = done(commands.turnFreely(turned, book, ['t'], 1.5));
    expect(one(most, 't').turn).toBe(2);
    expect(commands.turnFreely(most, book, ['t'], 1).refused).toMatch(/grain tolerance is 2°/);
    expect(check(most, book).findings.filter(({ kind }) => kind === 'off-grain')).toEqual([]);
  });
});

describe('flipping', () => {
  const pair = lay(book, [placement('a', 'ell', { x: 100, y: 100 })]);

  it('changes the hand in place where the other hand is needed', () => {
    const flipped = done(commands.flip(pair, book, ['a']));
    expect(loose(flipped, book)[0]!).toMatchObject({ panel: 'ell', hand: 'left' });
    expect(boxOf(flipped, 'a')).toEqual(boxOf(pair, 'a'));
  });

  it('is refused where that hand is on the cloth already', () => {
    const both = lay(book, [placement('a', 'ell'), placement('b', 'ell', { x: 400, y: 300, flip: true })]);
    expect(commands.flip(both, book, ['a']).refused).toBe(
      'Flipped it would be Ell (right) of Ada, which is not needed any more.'
    );
    expect(commands.flip(both, book, ['a', 'b']).refused).toBeUndefined();
  });

  it('is free for a symmetric piece and on cloth with both sides alike', () => {
    const both = lay(
      book,
      [placement('a', 'ell'), placement('b', 'ell', { x: 400, y: 300, flip: true })],
      strip({ sidesAlike: true })
    );
    expect(commands.flip(both, book, ['a']).refused).toBeUndefined();
    const yoke = lay(book, [placement('y', 'yoke')]);
    expect(commands.flip(yoke, book, ['y']).refused).toBeUndefined();
  });
});

describe('exact figures', () => {
  it('lay the nearest cut edge at the distances typed', () => {
    const laid = lay(book, [placement('a', 'ell', { x: 333, y: 77, turn: 180 })]);
    const exact = done(setExact(laid, book, 'a', { fromStart: 12.345, fromSelvedge: 20 }));
    expect(exactOf(book['style/ell']!, one(exact, 'a'))).toEqual({
      fromStart: 12.345,
      fromSelvedge: 20,
      turn: 180
    });
  });

  it('take an angle within the tolerance and refuse one beyond it', () => {
    const laid = lay(book, [placement('t', 'tie', { y: 100 })]);
    expect(one(done(setExact(laid, book, 't', { turn: -1.25 })), 't').turn).toBe(358.75);
    expect(setExact(laid, book, 't', { turn: 5 }).refused).toBe(
      'Tie of Ada may lie at 0°, 180°, within 2°; got 5°.'
    );
  });
});

describe('the Rail and other garments', () => {
  const ada = [
    placement('a', 'ell', { x: 0, y: 0 }),
    placement('b', 'ell', { x: 0, y: 420, flip: true }),
    placement('c', 'yoke', { x: 350, y: 0 })
  ];
  const two = lay(book, ada, strip(), [garment('ada'), garment('bea')]);

  it('hangs pieces back, and everything of a garment is chosen at once', () => {
    expect(commands.placementsOf(two, 'ada')).toEqual(['a', 'b', 'c']);
    const back = done(commands.toRail(two, book, ['a', 'c']));
    expect(back.placements.map(({ id }) => id)).toEqual(['b']);
  });

  it('lays another garment as the first one lies, past everything', () => {
    let n = 0;
    const edit = copyArrangement(two, book, 'ada', 'bea', () => `n${++n}`);
    const copied = done(edit);
    expect(edit.said).toBe('3 pieces of Bea laid as Ada.');
    const shift = 753;
    expect(copied.placements.slice(3)).toEqual(
      ada.map((each, i) => ({ ...each, id: `n${i + 1}`, garment: 'bea', x: each.x + shift }))
    );
    expect(
      check(copied, book).findings.filter(({ kind }) => kind === 'overlap' || kind === 'surplus')
    ).toEqual([]);
    expect(copyArrangement(copied, book, 'ada', 'bea', () => 'x').refused).toMatch(/No loose piece/);
  });
});

describe('snug', () => {
  it('ends at the border of the strip', () => {
    const laid = lay(book, [placement('a', 'ell', { x: 100.5, y: 50.25 })], strip({ length: 900 }));
    expect(boxOf(done(snug(laid, book, ['a'], 'start')), 'a').minX).toBe(0);
    expect(boxOf(done(snug(laid, book, ['a'], 'end')), 'a').maxX).toBe(900);
    expect(boxOf(done(snug(laid, book, ['a'], 'near')), 'a').minY).toBe(0);
    expect(boxOf(done(snug(laid, book, ['a'], 'far')), 'a').maxY).toBe(1000);
  });

  it('goes into the bay of another piece, to the clearance', () => {
    const laid = lay(book, [placement('a', 'ell'), placement('c', 'cuff', { x: 800, y: 100 })]);
    expect(boxOf(done(snug(laid, book, ['c'], 'start')), 'c').minX).toBe(123);
  });

  it('pushes several pieces as one body', () => {
    const laid = lay(book, [
      placement('a', 'ell'),
      placement('b', 'yoke', { x: 600, y: 400 }),
      placement('c', 'cuff', { x: 500, y: 100 })
    ]);
    const pushed = done(snug(laid, book, ['b', 'c'], 'start'));
    expect(one(pushed, 'c').x - one(laid, 'c').x).toBe(123 - 500);
    expect(one(pushed, 'b').x - one(laid, 'b').x).toBe(123 - 500);
  });

  it('is refused where there is nothing to go against, or no room', () => {
    const laid = lay(book, [placement('a', 'ell')]);
    expect(snug(laid, book, ['a'], 'end').refused).toMatch(/Nothing lies that way/);
    expect(snug(laid, book, ['a'], 'near').refused).toMatch(/can't move further/);
  });

  it('never makes a lay worse: no overlap, the clearance kept, everything on the strip', () => {
    const shapes = bookOf(
      ...Array.from({ length: 6 }, (_, i) =>
        starPanel(`s${i}`, star(Array.from({ length: 9 + i }, (_, k) => 30 + ((k * (7 + i)) % 11) * 5)), {
          turns: 'free',
          symmetric: true
        })
      )
    );
    let good = 0;
    fc.assert(
      fc.property(
        fc.array(
          fc.record({
            turn: fc.double({ min: 0, max: 360, noNaN: true }),
            dx: fc.integer({ min: 0, max: 40_000 }),
            dy: fc.integer({ min: 0, max: 40_000 })
          }),
          { minLength: 6, maxLength: 6 }
        ),
        fc.array(
          fc.tuple(
            fc.subarray(['0', '1', '2', '3', '4', '5'], { minLength: 1, maxLength: 3 }),
            fc.constantFrom(...snugWays)
          ),
          {
            minLength: 1,
            maxLength: 8
          }
        ),
        fc.constantFrom(0, 3),
        (where, pushes, clearance) => {
          let document = lay(
            shapes,
            where.map(({ turn, dx, dy }, i) =>
              placement(`${i}`, `s${i}`, {
                x: 150 + 250 * (i % 3) + dx / 1000,
                y: 150 + 250 * Math.floor(i / 3) + dy / 1000,
                turn: Math.round(turn * 10_000) / 10_000
              })
            ),
            strip({ length: 2000, clearance, sidesAlike: true })
          );
          const start = check(document, shapes).findings;
          if (start.length > 0) return;
          good++;
          for (const [ids, way] of pushes) {
            const edit = snug(document, shapes, ids, way);
            document = edit.document ?? document;
            expect(check(document, shapes).findings).toEqual([]);
          }
        }
      ),
      { seed: 15, numRuns: runs(150) }
    );
    expect(good).toBeGreaterThan(100);
  });
});
