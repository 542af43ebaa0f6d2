import { describe, expect, it } from 'vitest';
import type { LayDocument, LayPlacement } from '$lib/lay/document';
import { check, mayRelease } from '$lib/lay/check';
import type { PanelBook } from '$lib/lay/panel-book';
import type { FindingKind } from '$lib/lay/verdict';
import { bookOf, ell, garment, lay, panel, placement, rectangle, strip } from '../unit/lay/workroom';

/*
 * The facts of cutting out, one broken at a time in a lay that is good. Source: common practice, no published source.
 */

const book = bookOf(
  panel('ell', ell, { paired: true, howMany: 2, hand: 'left' }),
  panel('yoke', rectangle(400, 150), { symmetric: true })
);
const napped = strip({ nap: 'oneWay' });

/** A pair of fronts and a yoke, on napped cloth with a right and a wrong side. */
const good: LayDocument = lay(
  book,
  [
    placement('left', 'ell', { x: 10, y: 10 }),
    placement('right', 'ell', { x: 430, y: 210, flip: true }),
    placement('yoke', 'yoke', { x: 10, y: 250 })
  ],
  napped
);

function broken(id: string, change: Partial<LayPlacement>, from = good): LayDocument {
  return {
    ...from,
    placements: from.placements.map((one) => (one.id === id ? { ...one, ...change } : one))
  };
}

function kinds(document: LayDocument, of: PanelBook = book): FindingKind[] {
  return check(document, of).findings.map(({ kind }) => kind);
}

describe('the facts of cutting out (common practice, no published source)', () => {
  it('a good lay has no finding and may be released', () => {
    const verdict = check(good, book);
    expect(verdict.findings).toEqual([]);
    expect(mayRelease(verdict)).toBe(true);
  });

  it('pieces lie on grain', () => {
    const verdict = check(broken('yoke', { turn: 2, y: 300 }), book);
    expect(verdict.findings).toMatchObject([
      {
        kind: 'off-grain',
        severity: 'stops',
        placements: ['yoke'],
        measure: { value: 2, unit: 'degrees' }
      }
    ]);
    expect(mayRelease(verdict)).toBe(false);
  });

  it('pieces lie one direction on napped cloth', () => {
    const verdict = check(broken('yoke', { turn: 180, x: 410, y: 400 }), book);
    expect(verdict.findings).toMatchObject([
      { kind: 'against-nap', severity: 'stops', placements: ['yoke'] }
    ]);
    expect(kinds({ ...broken('yoke', { turn: 180, x: 410, y: 400 }), strip: strip() })).toEqual([]);
  });

  it('pieces stay clear of the selvedges', () => {
    const near = check(broken('left', { y: -4 }), book);
    expect(near.findings).toMatchObject([
      { kind: 'outside-width', severity: 'stops', measure: { value: 4, unit: 'mm' } }
    ]);
    const far = check(broken('yoke', { y: 851.5 }), book);
    expect(far.findings).toMatchObject([{ kind: 'outside-width', measure: { value: 1.5, unit: 'mm' } }]);
  });

  it('pieces stay on the length of the cloth', () => {
    expect(kinds(broken('left', { x: -1 }))).toEqual(['outside-length']);
    const short = { ...good, strip: strip({ nap: 'oneWay', length: 710 }) };
    expect(check(short, book).findings).toMatchObject([
      { kind: 'outside-length', placements: ['right'], measure: { value: 20, unit: 'mm' } }
    ]);
  });

  it('nothing overlaps', () => {
    const verdict = check(broken('yoke', { y: 195 }), book);
    expect(verdict.findings[0]).toMatchObject({
      kind: 'overlap',
      severity: 'stops',
      measure: { unit: 'mm' }
    });
    expect(verdict.findings[0]!.measure!.value).toBeGreaterThan(5);
    expect(verdict.findings[0]!.area).toBeGreaterThan(0);
  });

  it('a pair on cloth with a right and a wrong side is one left and one right', () => {
    const twoLefts = broken('right', { flip: false, y: 10 });
    expect(check(twoLefts, book).findings).toMatchObject([
      { kind: 'wrong-hand', severity: 'stops', placements: ['right'], subject: { hand: 'right' } }
    ]);
    const alike = { ...twoLefts, strip: { ...napped, sidesAlike: true } };
    expect(check(alike, book).findings).toMatchObject([{ kind: 'unpaired', severity: 'warns' }]);
    expect(mayRelease(check(alike, book))).toBe(true);
  });

  it('the knife has its clearance', () => {
    expect(check(broken('yoke', { x: 10, y: 212 }), book).findings).toMatchObject([
      { kind: 'clearance', severity: 'stops', measure: { value: 1, unit: 'mm' } }
    ]);
    expect(kinds(broken('yoke', { y: 213 }))).toEqual([]);
    expect(kinds({ ...broken('yoke', { y: 210 }), strip: strip({ clearance: 0 }) })).toEqual([]);
  });

  it('every piece is there, and none too many', () => {
    const without = { ...good, placements: good.placements.filter(({ id }) => id !== 'yoke') };
    expect(check(without, book).findings).toMatchObject([
      { kind: 'missing', severity: 'stops', subject: { panel: 'yoke' }, measure: { value: 1 } }
    ]);
    const twice = {
      ...good,
      placements: [...good.placements, placement('extra', 'yoke', { x: 10, y: 500 })]
    };
    expect(check(twice, book).findings).toMatchObject([
      { kind: 'surplus', severity: 'stops', placements: ['extra'] }
    ]);
  });

  it('no piece lies on a flaw of the cloth, or nearer than the clearance', () => {
    const flaw = { id: 'f', x: 100, y: 300, along: 0, across: 0, radius: 5, note: 'slub' };
    const flawed = { ...good, strip: { ...napped, flaws: [flaw] } };
    expect(check(flawed, book).findings).toMatchObject([
      { kind: 'flaw', severity: 'stops', placements: ['yoke'] }
    ]);
    const beside = { ...flaw, y: 250 - 5 - 3 };
    expect(kinds({ ...good, strip: { ...napped, flaws: [beside] } })).toEqual([]);
    const nearer = { ...flaw, y: 250 - 5 - 2.9 };
    expect(kinds({ ...good, strip: { ...napped, flaws: [nearer] } })).toEqual(['flaw']);
  });

  it('a flaw in a cut-out harms nothing', () => {
    const hole = rectangle(60, 60).map(({ x, y }) => ({ x: x + 20, y: y + 20 }));
    const holed = bookOf(panel('yoke', rectangle(400, 150), { symmetric: true, cutOuts: [hole] }));
    const document = lay(
      holed,
      [placement('yoke', 'yoke', { x: 0, y: 0 })],
      strip({ flaws: [{ id: 'f', x: 50, y: 50, along: 0, across: 0, radius: 20, note: '' }] })
    );
    expect(kinds(document, holed)).toEqual([]);
    expect(
      kinds(
        {
          ...document,
          strip: {
            ...document.strip,
            flaws: [{ id: 'f', x: 75, y: 50, along: 0, across: 0, radius: 20, note: '' }]
          }
        },
        holed
      )
    ).toEqual(['flaw']);
  });

  it('a guessed grain line stops until somebody confirms it', () => {
    const guessed = bookOf(
      panel('ell', ell, { paired: true, howMany: 2, hand: 'left' }),
      panel('yoke', rectangle(400, 150), { symmetric: true, grainConfirmed: false })
    );
    expect(check(good, guessed).findings).toMatchObject([
      { kind: 'grain-unconfirmed', severity: 'stops', placements: ['yoke'] }
    ]);
  });

  it('a panel that the lay does not know stops', () => {
    const stranger = { ...good, placements: [...good.placements, placement('who', 'sleeve')] };
    expect(check(stranger, book).findings).toMatchObject([
      { kind: 'unknown-panel', severity: 'stops', placements: ['who'] }
    ]);
  });

  it('the pieces of one garment run one way where the cloth asks for that, garments may alternate', () => {
    const two = lay(
      bookOf(panel('yoke', rectangle(400, 150), { symmetric: true, howMany: 3 })),
      [
        placement('a', 'yoke', { y: 0 }),
        placement('b', 'yoke', { y: 160 }),
        placement('c', 'yoke', { y: 320 }),
        ...['d', 'e', 'f'].map((id, i) =>
          placement(id, 'yoke', { garment: 'bea', x: 900, y: 150 + 160 * i, turn: 180 })
        )
      ],
      strip({ nap: 'garmentWay' }),
      [garment('ada'), garment('bea')]
    );
    const yokes = bookOf(panel('yoke', rectangle(400, 150), { symmetric: true, howMany: 3 }));
    expect(kinds(two, yokes)).toEqual([]);
    const turned = broken('c', { turn: 180, x: 400, y: 470 }, two);
    expect(check(turned, yokes).findings).toMatchObject([{ kind: 'against-nap', placements: ['c'] }]);
  });
});
