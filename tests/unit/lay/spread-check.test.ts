import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { openChoice, openingOf, type SpreadChoice } from '$lib/cloth/spread';
import type { Strip } from '$lib/cloth/strip';
import { changeSpread, unfolded } from '$lib/lay/change-spread';
import { check } from '$lib/lay/check';
import { move, placeFromRail } from '$lib/lay/commands';
import type { LayDocument, LayPlacement } from '$lib/lay/document';
import { matchPlaces, mismatch } from '$lib/lay/matching';
import type { LayPanel } from '$lib/lay/panel-book';
import { readingsOf } from '$lib/lay/readings';
import type { Finding, FindingKind } from '$lib/lay/verdict';
import { runs } from '../../runs';
import { back, spread } from './folded-workroom';
import { bookOf, ell, lay, panel, placement, rectangle } from './workroom';

const folded: Partial<SpreadChoice> = { kind: 'lengthwise', sideUp: 'wrong' };
const sleeve = panel('ell', ell, { paired: true, howMany: 2 });

function found(document: LayDocument, book: ReturnType<typeof bookOf>, kind: FindingKind): Finding[] {
  return check(document, book).findings.filter((one) => one.kind === kind);
}

const checks = (along: object | null, across: object | null): Strip['repeat'] =>
  ({
    along: along && { size: 80, offset: 0, symmetric: true, ...along },
    across: across && { size: 50, offset: 0, symmetric: true, ...across }
  }) as Strip['repeat'];

describe('what the check finds of a spread, with its measure', () => {
  it('a piece beside the fold nearer than the clearance, and one over the fold', () => {
    const book = bookOf(sleeve);
    const near = lay(book, [placement('a', 'ell', { y: 1 })], spread(folded));
    expect(found(near, book, 'near-fold')[0]!.measure).toEqual({ value: 2, unit: 'mm' });
    const over = lay(book, [placement('a', 'ell', { y: -4 })], spread(folded));
    expect(found(over, book, 'outside-width')[0]!.message).toBe(
      'Ell (pair) of Ada hangs 4 mm over the fold.'
    );
    expect(found(over, book, 'near-fold')).toEqual([]);
  });

  it('nothing of a piece that lies on the fold', () => {
    const book = bookOf(back());
    const on = lay(book, [placement('a', 'back')], spread(folded));
    expect(check(on, book).findings).toEqual([]);
  });

  it('a piece over the border of the doubled cloth, and one on the selvedge of the upper ply', () => {
    const book = bookOf(sleeve);
    const cloth = spread({ ...folded, depth: 400 });
    const at = (y: number) => lay(book, [placement('a', 'ell', { y })], cloth);
    expect(found(at(230), book, 'straddles')[0]!.measure).toEqual({ value: 30, unit: 'mm' });
    const small = panel('small', rectangle(50, 10), { symmetric: true });
    const covered = lay(bookOf(small), [placement('a', 'small', { y: 405 })], cloth);
    expect(found(covered, bookOf(small), 'straddles')[0]!.message).toContain('selvedge of the ply');
  });

  it('a one-handed piece under a double layer, with the offer to open the cloth', () => {
    const single = panel('ell', ell);
    const book = bookOf(single);
    const document = lay(book, [placement('a', 'ell', { y: 50 })], spread(folded));
    const [surplus] = found(document, book, 'surplus');
    expect(surplus).toMatchObject({ measure: { value: 1, unit: 'pieces' }, offer: 'open-cloth' });
    const opened = changeSpread(document, book, openingOf(document.strip));
    expect(opened.document!.strip.spread[0]!.layers).toHaveLength(1);
  });

  it('cloth laid to and fro, or folded crosswise, on a nap; and refuses to fold it so', () => {
    const book = bookOf(sleeve);
    const zigZag = lay(book, [], spread({ kind: 'faceToFace', plies: 2, turned: false }, { nap: 'oneWay' }));
    expect(found(zigZag, book, 'spread-nap')).toHaveLength(1);
    const turned = lay(book, [], spread({ kind: 'faceToFace', plies: 2, turned: true }, { nap: 'oneWay' }));
    expect(found(turned, book, 'spread-nap')).toEqual([]);
    const open = lay(book, [], spread({ kind: 'open' }, { nap: 'oneWay' }));
    expect(changeSpread(open, book, { ...openChoice, kind: 'crosswise', turned: false }).refused).toContain(
      'turns the nap'
    );
  });

  it('a tilted piece on stripes, whatever its tolerance', () => {
    const book = bookOf(panel('ell', ell, { grainTolerance: 2 }));
    const tilted = (repeat: Strip['repeat']) =>
      found(
        lay(book, [placement('a', 'ell', { y: 100, turn: 1 })], spread({}, { repeat })),
        book,
        'off-grain'
      );
    expect(tilted(checks(null, null))).toEqual([]);
    expect(tilted(checks(null, {}))[0]!.measure).toEqual({ value: 1, unit: 'degrees' });
  });

  it('a fold that lies off a line of the repeat, and a repeat that is not symmetric', () => {
    const book = bookOf(sleeve);
    const on = (across: object) =>
      found(lay(book, [], spread(folded, { repeat: checks(null, across) })), book, 'repeat');
    expect(on({})).toEqual([]);
    expect(on({ offset: 25 })).toEqual([]);
    expect(on({ offset: 10 })[0]!.measure).toEqual({ value: 10, unit: 'mm' });
    expect(on({ symmetric: false })[0]!.offer).toBe('open-cloth');
  });
});

describe('a match group', () => {
  const front: LayPanel = {
    ...panel('front', rectangle(200, 100), { paired: true, howMany: 2 }),
    turns: 'oneWay'
  };
  const notched: LayPanel = {
    ...front,
    shape: { ...front.shape, matchPoints: [{ id: 'p', name: 'Bust', at: { x: 60, y: 0 } }] }
  };
  const book = bookOf(notched);
  const on = (
    placements: LayPlacement[],
    repeat: Strip['repeat'],
    mirrored = false,
    tolerance = 2
  ): LayDocument => ({
    ...lay(book, placements, spread({}, { repeat })),
    rules: {
      matchGroups: [{ id: 'g', mirrored, points: [{ garment: 'ada', panel: 'front', point: 'p' }] }],
      matchTolerance: tolerance,
      mayCoverFlaws: []
    }
  });
  const left = placement('l', 'front', { x: 10, y: 20 });

  it('is measured along and across, 2 mm being nothing', () => {
    const right = (x: number, y: number) => placement('r', 'front', { x, y, flip: true });
    const doc = on([left, right(90 + 1.5, 220 - 2)], checks({}, {}));
    expect(found(doc, book, 'mismatch')).toEqual([]);
    const [off] = found(on([left, right(90 + 12, 220 + 7)], checks({}, {})), book, 'mismatch');
    expect(off!.measure).toEqual({ value: 12, unit: 'mm' });
    expect(off!.message).toContain('12 mm along and 7 mm across; 2 mm is allowed');
  });

  it('mirrors flipped pieces about a line where it is so asked, which a one-way repeat can’t', () => {
    // The left one's point lies 20 beyond the line at 0, the right one's 20 before the line at 250.
    const right = placement('r', 'front', { x: 90, y: 230, flip: true });
    expect(found(on([left, right], checks({}, {}), true), book, 'mismatch')).toEqual([]);
    expect(found(on([left, right], checks({}, {}), false), book, 'mismatch')[0]!.measure!.value).toBe(10);
    expect(
      found(on([left, right], checks({}, { symmetric: false }), true), book, 'repeat')[0]!.message
    ).toContain('not symmetric');
  });

  it('agrees modulo the repeat after any move by hand', () => {
    fc.assert(
      fc.property(
        fc.record({
          dx: fc.integer({ min: -400_000, max: 400_000 }),
          dy: fc.integer({ min: -400_000, max: 400_000 }),
          along: fc.integer({ min: 7, max: 300 }),
          across: fc.option(fc.integer({ min: 7, max: 300 })),
          mirrored: fc.boolean()
        }),
        ({ dx, dy, along, across, mirrored }) => {
          const document = on(
            [left, placement('r', 'front', { x: 500, y: 500, flip: true })],
            checks({ size: along }, across === null ? null : { size: across }),
            mirrored
          );
          const moved = move(document, book, ['r'], dx / 1000, dy / 1000);
          if (moved.refused !== undefined) return;
          const [a, b] = matchPlaces(moved.document, book, document.rules.matchGroups[0]!);
          const off = mismatch(a!, b!, document.strip.repeat);
          expect(Math.abs(off.along)).toBeLessThan(0.002);
          expect(Math.abs(off.across)).toBeLessThan(0.002);
        }
      ),
      { seed: 8, numRuns: runs(300) }
    );
  });

  it('goes on to the next place with each step of the keys', () => {
    const document = on([left, placement('r', 'front', { x: 90, y: 220, flip: true })], checks({}, null));
    const once = move(document, book, ['r'], 1, 0).document!;
    expect(once.placements[1]!.x).toBe(170);
    expect(move(once, book, ['r'], -1, 0).document!.placements[1]!.x).toBe(90);
    expect(move(once, book, ['r'], 0, 3).document!.placements[1]!.y).toBe(223);
  });
});

describe('spreading anew', () => {
  const book = bookOf(sleeve, back());
  const cloth = spread({ ...folded, depth: 400 });

  it('opens a fold into exactly the same pieces on as much cloth, and folds them back', () => {
    fc.assert(
      fc.property(
        fc.array(
          fc.record({
            y: fc.integer({ min: 3, max: 800 }),
            flip: fc.boolean(),
            turn: fc.constantFrom(0, 180)
          }),
          {
            maxLength: 6
          }
        ),
        (cuts) => {
          const placements = cuts.map(({ y, flip, turn }, i) =>
            placement(`p${i}`, 'ell', { x: 800 * (i + 1), y: y <= 200 ? Math.max(203, y) : 520, flip, turn })
          );
          const document = lay(book, [placement('back', 'back'), ...placements], cloth);
          const open = changeSpread(document, book, openingOf(cloth)).document!;
          const [before, after] = [readingsOf(document, book), readingsOf(open, book)];
          expect(after.area).toBeCloseTo(before.area, 4);
          expect(after.lengthUsed).toBe(before.lengthUsed);
          expect(after.pieces).toEqual(before.pieces);
          const kinds = (of: LayDocument): string[] =>
            check(of, book)
              .findings.filter(
                ({ kind }) => !['surplus', 'straddles', 'outside-width', 'wrong-hand'].includes(kind)
              )
              .map(({ kind }) => kind)
              .sort();
          expect(kinds(open)).toEqual(kinds(document));
          const again = changeSpread(open, book, { ...openChoice, ...folded, depth: 400 }).document!;
          expect(again.placements).toEqual(document.placements);
          expect(again.strip).toEqual(document.strip);
        }
      ),
      { seed: 9, numRuns: runs(100) }
    );
  });

  it('puts the piece of the fold in the middle of the open cloth', () => {
    const document = lay(book, [placement('back', 'back')], spread(folded));
    expect(unfolded(document, book).placements).toEqual([placement('back', 'back', { y: 500 })]);
  });

  it('leaves pieces where they can stay, and says which no longer fit', () => {
    const open = lay(book, [placement('a', 'ell', { y: 780 })], spread({}));
    const plies = changeSpread(open, book, { ...openChoice, kind: 'pliesUp', plies: 2 });
    expect(plies.document!.placements).toEqual(open.placements);
    expect(plies.said).toBe(
      '2 plies, all facing one way. No longer fitting where they lie, 1 piece: Ell (left) of Ada.'
    );
  });

  it('lays a panel of the fold on the fold when it is dropped near it', () => {
    const document = lay(book, [], cloth);
    const laid = placeFromRail(
      document,
      book,
      { garment: 'ada', panel: 'back', hand: 'either' },
      { x: 300, y: 12 },
      'b'
    );
    expect(laid.document!.placements[0]!.y).toBe(0);
  });
});
