import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { flawsAsLaid } from '$lib/cloth/flaws-as-laid';
import { openChoice, spreadOf, type SpreadKind } from '$lib/cloth/spread';
import type { Flaw } from '$lib/cloth/strip';
import { outside } from '$lib/geometry/outside';
import { area, boundingBox } from '$lib/geometry/polygon';
import { placeOutline } from '$lib/geometry/placement';
import { check } from '$lib/lay/check';
import { enlargedPanel } from '$lib/lay/enlarged';
import { toggleCover } from '$lib/lay/flaw-cover';
import { openLayDocument } from '$lib/lay/stored-lay';
import { fromLay } from '$lib/settle/from-lay';
import { runs } from '../../runs';
import { bookOf, ell, lay, panel, placement, rectangle, strip } from './workroom';

const given = (outline: { x: number; y: number }[] | null) => ({
  id: 'r1',
  name: 'Remnant 1',
  kind: 'remnant' as const,
  batch: '7',
  outline
});
const kinds = (document: Parameters<typeof check>[0], book: Parameters<typeof check>[1]) =>
  check(document, book).findings.map(({ kind }) => kind);

describe('an odd remnant', () => {
  // A strip of 1000 × 1000 of which the far upper quarter is gone.
  const edge = [
    { x: 0, y: 0 },
    { x: 1000, y: 0 },
    { x: 1000, y: 500 },
    { x: 500, y: 500 },
    { x: 500, y: 1000 },
    { x: 0, y: 1000 }
  ];
  const book = bookOf(panel('back', rectangle(400, 400)));
  const on = strip({ length: 1000, given: given(edge) });

  it('takes what lies inside, along its edges too', () => {
    for (const [x, y] of [
      [0, 0],
      [600, 100],
      [100, 600],
      [600, 0]
    ])
      expect(kinds(lay(book, [placement('a', 'back', { x, y })], on), book)).toEqual([]);
  });

  it('finds what hangs over, with the measure', () => {
    const { findings } = check(lay(book, [placement('a', 'back', { x: 300, y: 300 })], on), book);
    expect(findings).toHaveLength(1);
    expect(findings[0]).toMatchObject({ kind: 'outside-edge', severity: 'stops' });
    // The corner (700, 700) is 200 from both edges of the quarter that is gone.
    expect(findings[0]!.measure!.value).toBeCloseTo(200, 6);
    expect(findings[0]!.message).toContain('hangs 200 mm over the edge of the remnant');
  });

  it('measures a notch that no corner of the piece lies in', () => {
    const notched = [
      { x: 0, y: 0 },
      { x: 490, y: 0 },
      { x: 500, y: 300 },
      { x: 510, y: 0 },
      { x: 1000, y: 0 },
      { x: 1000, y: 1000 },
      { x: 0, y: 1000 }
    ];
    const over = outside(
      placeOutline(rectangle(400, 400), { x: 300, y: 100, turn: 0, flip: false }),
      notched
    );
    expect(over.depth).toBeGreaterThan(3);
    expect(
      outside(placeOutline(rectangle(400, 400), { x: 300, y: 300, turn: 0, flip: false }), notched).depth
    ).toBe(0);
  });
});

describe('a flaw with two measures', () => {
  const book = bookOf(panel('back', rectangle(400, 400)));
  const flaw = (changes: Partial<Flaw>): Flaw => ({
    id: 'f',
    x: 0,
    y: 0,
    along: 0,
    across: 0,
    radius: 0,
    note: '',
    ...changes
  });
  const with_ = (one: Flaw, at = { x: 0, y: 0 }, cover = false) => {
    const document = lay(book, [placement('a', 'back', at)], strip({ flaws: [one], clearance: 3 }));
    const styleVersion = document.garments[0]!.styleVersion;
    return check(
      cover
        ? { ...document, rules: { ...document.rules, mayCoverFlaws: [{ styleVersion, panel: 'back' }] } }
        : document,
      book
    ).findings;
  };

  it('is found where a thin thread runs right through the piece', () => {
    const found = with_(flaw({ x: 200, y: 200, along: 900, across: 2 }));
    expect(found.map(({ kind }) => kind)).toEqual(['flaw']);
    expect(found[0]!.measure!.value).toBeGreaterThan(3);
  });

  it('is found nearer than the clearance and not beyond', () => {
    expect(with_(flaw({ x: 500, y: 100, along: 196, across: 10 }))[0]!.measure!.value).toBeCloseTo(1, 6);
    expect(with_(flaw({ x: 500, y: 100, along: 194, across: 10 }))).toEqual([]);
  });

  it('is found when it is larger than the whole piece', () => {
    expect(with_(flaw({ x: 200, y: 200, along: 900, across: 900 }))).toHaveLength(1);
  });

  it('may be covered once that is said for the panel, and not once it is taken back', () => {
    const document = lay(book, [placement('a', 'back')], strip({ flaws: [flaw({ x: 200, y: 200 })] }));
    const once = toggleCover(document, document.placements[0]!, 'Back');
    expect(once.said).toBe('Back may lie over flaws of the cloth.');
    expect(kinds(once.document!, book)).toEqual([]);
    const back = toggleCover(once.document!, document.placements[0]!, 'Back');
    expect(kinds(back.document!, book)).toEqual(['flaw']);
  });

  it('may be covered by a panel that was allowed to', () => {
    expect(with_(flaw({ x: 200, y: 200, along: 50, across: 50 }), { x: 0, y: 0 }, true)).toEqual([]);
  });
});

describe('panels enlarged for cloth that shrinks', () => {
  const enlarged = { treatment: 'enlarged', warp: 0.05, weft: 0.02 } as const;

  it('stretches along the warp and weft of the cloth after turning', () => {
    for (const [turns, turn] of [
      ['bothWays', 0],
      ['bothWays', 180],
      ['across', 90],
      ['across', 270]
    ] as const) {
      const plain = panel('ell', ell, { turns });
      const grown = enlargedPanel(plain, enlarged);
      const boxOf = (one: typeof plain) => {
        const box = boundingBox(placeOutline(one.shape.cut, { x: 0, y: 0, turn, flip: false }));
        return { along: box.maxX - box.minX, across: box.maxY - box.minY };
      };
      expect(boxOf(grown).along).toBeCloseTo(boxOf(plain).along / 0.95, 2);
      expect(boxOf(grown).across).toBeCloseTo(boxOf(plain).across / 0.98, 2);
    }
  });

  it('leaves the panel as it is under every other treatment', () => {
    const plain = panel('ell', ell);
    for (const treatment of ['none', 'shrunkFirst', 'boughtShrunk'] as const)
      expect(enlargedPanel(plain, { ...enlarged, treatment })).toBe(plain);
  });

  it('lets nothing lie off grain where warp and weft shrink unequally', () => {
    const grown = enlargedPanel(panel('ell', ell, { grainTolerance: 2, turns: 'free' }), enlarged);
    expect(grown).toMatchObject({ grainTolerance: 0, turns: 'bothWays' });
    const alike = enlargedPanel(panel('ell', ell, { grainTolerance: 2, turns: 'free' }), {
      ...enlarged,
      weft: 0.05
    });
    expect(alike).toMatchObject({ grainTolerance: 2, turns: 'free' });
  });

  it('refuses bias panels on cloth that shrinks unequally, and only there', () => {
    const book = bookOf(panel('ell', ell, { turns: 'bias' }));
    const found = (shrinkage: typeof enlarged | { treatment: 'enlarged'; warp: number; weft: number }) =>
      kinds(lay(book, [placement('a', 'ell', { x: 500, y: 300, turn: 45 })], strip({ shrinkage })), book);
    expect(found(enlarged)).toContain('shrinkage');
    expect(found({ treatment: 'enlarged', warp: 0.04, weft: 0.04 })).not.toContain('shrinkage');
  });

  it('grows the area by the product of both factors', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0, max: 0.3, noNaN: true }),
        fc.double({ min: 0, max: 0.3, noNaN: true }),
        (warp, weft) => {
          const plain = panel('ell', ell);
          const grown = enlargedPanel(plain, { treatment: 'enlarged', warp, weft });
          const factor = 1 / ((1 - warp) * (1 - weft));
          expect(area(grown.shape.cut) / (area(plain.shape.cut) * factor)).toBeCloseTo(1, 4);
        }
      ),
      { seed: 5, numRuns: runs(200) }
    );
  });
});

describe('a lay of the first schema', () => {
  it('is brought up with its flaws, without a given cloth', () => {
    const first = {
      schema: 1,
      strip: {
        spread: [{ from: 0, to: 1000, layers: [{ sideUp: 'right', nap: 'along' }], fold: 'none' }],
        usableWidth: 1000,
        fullWidth: 1020,
        length: null,
        nap: 'none',
        sidesAlike: false,
        repeat: { along: null, across: null },
        flaws: [{ id: 'f', x: 10, y: 20, radius: 5, note: 'slub' }],
        endAllowance: { start: 20, end: 20 },
        reserve: 0,
        buyStep: 100,
        clearance: 3
      },
      garments: [],
      needs: [],
      placements: [],
      rules: { matchGroups: [], matchTolerance: 1 }
    };
    expect(openLayDocument(first)).toEqual({
      ...first,
      schema: 3,
      strip: {
        ...first.strip,
        flaws: [{ id: 'f', x: 10, y: 20, along: 0, across: 0, radius: 5, note: 'slub' }],
        given: null,
        shrinkage: { treatment: 'none', warp: 0, weft: 0 },
        splices: { count: 0, each: 0 },
        wholeRepeats: false
      },
      rules: { matchGroups: [], matchTolerance: 1, mayCoverFlaws: [] }
    });
  });

  it('takes match groups of schema 2 as ones whose pieces show the repeat alike', () => {
    const second = {
      schema: 2,
      strip: JSON.parse(JSON.stringify(strip())) as object,
      garments: [],
      needs: [],
      placements: [],
      rules: {
        matchGroups: [{ id: 'side', points: [{ garment: 'ada', panel: 'front', point: 'p' }] }],
        matchTolerance: 1,
        mayCoverFlaws: []
      }
    };
    expect(openLayDocument(second)).toEqual({
      ...second,
      schema: 3,
      rules: {
        matchGroups: [
          { id: 'side', mirrored: false, points: [{ garment: 'ada', panel: 'front', point: 'p' }] }
        ],
        matchTolerance: 1,
        mayCoverFlaws: []
      }
    });
  });
});

describe('a roll that is spread in folds or plies', () => {
  const spreadAs = (kind: SpreadKind, plies = 2, depth: number | null = null) =>
    spreadOf(
      { usableWidth: 1000, fullWidth: 1020 },
      { ...openChoice, kind, plies, depth, turned: kind !== 'crosswise' }
    );
  const roll = (kind: SpreadKind, flaw: Flaw, plies = 2, depth: number | null = null) =>
    strip({
      length: 1960,
      given: { ...given(null), kind: 'roll' },
      spread: spreadAs(kind, plies, depth),
      flaws: [flaw]
    });
  const flaw = { id: 'f', x: 500, y: 900, along: 0, across: 0, radius: 4, note: '' };
  const places = (one: ReturnType<typeof roll>) => flawsAsLaid(one).map(({ x, y }) => [x, y]);

  it('has its flaws where each layer comes to lie', () => {
    expect(places(roll('open', flaw))).toEqual([[500, 900]]);
    // The fold at half the width: 900 from the near selvedge is 400 from the fold.
    expect(places(roll('lengthwise', flaw))).toEqual([[500, 400]]);
    expect(places(roll('lengthwise', flaw, 2, 300))).toEqual([[500, 600]]);
    expect(places(roll('lengthwise', { ...flaw, y: 100 }, 2, 300))).toEqual([[500, 200]]);
    expect(places(roll('tubular', flaw))).toEqual([[500, 100]]);
    // 2000 mm from end to end, folded at 1000: the flaw at 520 lies 480 from the fold.
    expect(places(roll('crosswise', flaw))).toEqual([[480, 900]]);
    // Four plies of 500 mm: 520 from the start is 20 into the second.
    expect(places(roll('pliesUp', flaw, 4))).toEqual([[0, 900]]);
    expect(places(roll('faceToFace', flaw, 2))).toContainEqual([500, 100]);
  });

  it('keeps a piece off a flaw of the layer below, for the check and for settle alike', () => {
    const book = bookOf(panel('back', rectangle(300, 300)));
    const document = lay(book, [placement('a', 'back', { x: 400, y: 250 })], roll('lengthwise', flaw));
    expect(kinds(document, book)).toContain('flaw');
    const { problem } = fromLay(document, book, { reach: 'all', from: 'scratch' });
    const [keepOut] = problem.keepOuts;
    expect(boundingBox(keepOut!)).toMatchObject({
      minY: expect.closeTo(396, 0),
      maxY: expect.closeTo(404, 0)
    });
  });

  it('has no more plies and splices than its length', () => {
    const book = bookOf(panel('back', rectangle(900, 300)));
    const on = (plies: number, splices = 0) =>
      check(
        lay(book, [placement('a', 'back')], {
          ...roll('pliesUp', { ...flaw, x: 0, y: 990 }, plies),
          splices: { count: splices, each: 200 }
        }),
        book
      ).findings.filter(({ kind }) => kind === 'outside-length');
    expect(on(2)).toEqual([]);
    // Three plies of 940 mm with their ends, of 2000.
    expect(on(3)[0]).toMatchObject({ measure: { value: 820, unit: 'mm' } });
    expect(on(2, 1)[0]).toMatchObject({ measure: { value: 80, unit: 'mm' } });
  });

  it('is laid open where its outline is odd', () => {
    const book = bookOf(panel('back', rectangle(300, 300)));
    const odd = { ...roll('lengthwise', flaw), given: given(rectangle(2000, 1000)) };
    expect(kinds(lay(book, [placement('a', 'back', { x: 900 })], odd), book)).toContain('outside-edge');
  });
});
