import { describe, expect, it } from 'vitest';
import { check } from '$lib/lay/check';
import type { LayDocument } from '$lib/lay/document';
import type { PanelBook } from '$lib/lay/panel-book';
import { fromLay, toPlacements, type SettleFrom, type SettleReach } from '$lib/settle/from-lay';
import { problemFaults } from '$lib/settle/faults';
import { createSolver } from '$lib/settle/solver';
import { validate } from '$lib/settle/validate';
import { back, spread } from '../lay/folded-workroom';
import * as workroom from '../lay/workroom';

/** The lay with everything settled, by the product's own check. */
function settled(
  document: LayDocument,
  book: PanelBook,
  options: { reach: SettleReach; from: SettleFrom } = { reach: 'all', from: 'scratch' }
) {
  const settle = fromLay(document, book, options);
  const solver = createSolver(settle.problem, { seed: 1 });
  for (let k = 0; k < 8 && !solver.done(); k++) solver.step(2500, k / 8);
  const result = solver.result();
  expect(validate(settle.problem, result)).toEqual([]);
  let next = 0;
  const placements = toPlacements(document, settle, result, () => `new-${next++}`);
  const after: LayDocument = { ...document, placements };
  return { after, result, settle, verdict: check(after, book) };
}

const front = workroom.panel('front', workroom.star([180, 90, 150, 120, 70, 160, 100]), {
  howMany: 2,
  paired: true
});
const sleeve = workroom.panel('ell-sleeve', workroom.ell, { howMany: 2, paired: true });
const yoke = workroom.panel('yoke', workroom.rectangle(300, 120), { symmetric: true, howMany: 2 });
const collar = workroom.panel('collar', workroom.rectangle(240, 60), { turns: 'across', symmetric: true });
const facing = workroom.panel('facing', workroom.star([60, 40, 70, 50, 30]), { turns: 'free' });
const book = workroom.bookOf(front, sleeve, yoke, collar, facing);
const two = [workroom.garment('ada'), workroom.garment('ben')];

describe('a lay is settled without a finding', () => {
  const cloths: [string, Parameters<typeof workroom.strip>[0]][] = [
    ['plain cloth', {}],
    ['cloth whose sides are alike', { sidesAlike: true }],
    ['napped cloth', { nap: 'oneWay' }],
    ['cloth on which each garment runs one way', { nap: 'garmentWay' }],
    [
      'wrong side up',
      {
        spread: workroom
          .strip()
          .spread.map((zone) => ({ ...zone, layers: [{ sideUp: 'wrong' as const, nap: 'along' as const }] }))
      }
    ],
    [
      'a narrow cloth without clearance',
      {
        usableWidth: 420,
        clearance: 0,
        spread: [{ from: 0, to: 420, layers: [{ sideUp: 'right', nap: 'along' }], fold: 'none' }]
      }
    ],
    [
      'cloth with flaws',
      {
        flaws: [
          { id: 'f1', x: 200, y: 300, along: 0, across: 0, radius: 30, note: '' },
          { id: 'f2', x: 500, y: 700, along: 0, across: 0, radius: 0, note: '' }
        ]
      }
    ]
  ];
  it.each(cloths)('%s', (_, changes) => {
    const document = workroom.lay(book, [], workroom.strip(changes), two);
    const { verdict, after } = settled(document, book);
    // On cloth with both sides alike a pair may lie as two of one hand: a hint for bundling, no fault.
    expect(verdict.findings.filter(({ severity }) => severity === 'stops')).toEqual([]);
    expect(after.placements).toHaveLength(16);
    expect(verdict.readings.pieces).toMatchObject({ needed: 16, placed: 16, loose: 0 });
  });
});

describe('tilt', () => {
  const tolerant = workroom.bookOf(
    workroom.panel('front', workroom.ell, { howMany: 2, paired: true, grainTolerance: 3 }),
    workroom.panel('gore', workroom.star([150, 60, 120, 90, 140]), { howMany: 4, grainTolerance: 3 })
  );
  it('is given to panels that a person opened to it, alike to both of a pair, and never on stripes', () => {
    const open = fromLay(workroom.lay(tolerant, []), tolerant, { reach: 'all', from: 'scratch' }).problem;
    expect(Object.fromEntries(open.pieces.map(({ name, tilt }) => [name.split(' ')[0], tilt]))).toEqual({
      Front: 0,
      Gore: 3
    });
    const striped = workroom.strip({
      repeat: { along: { size: 40, offset: 0, symmetric: true }, across: null }
    });
    for (const { tilt } of fromLay(workroom.lay(tolerant, [], striped), tolerant, {
      reach: 'all',
      from: 'scratch'
    }).problem.pieces)
      expect(tilt).toBe(0);
  });
  it('leaves nothing off grain', () => {
    expect(settled(workroom.lay(tolerant, []), tolerant).verdict.findings).toEqual([]);
  });
});

describe('what is there already', () => {
  const document = workroom.lay(book, [], workroom.strip(), two);
  const laid = settled(document, book).after;

  it('keeps the ids of what it moves and lays around what is locked', () => {
    const locked: LayDocument = {
      ...laid,
      placements: laid.placements.map((one, i) => (i < 3 ? { ...one, locked: true } : one))
    };
    const { after, verdict } = settled(locked, book);
    expect(after.placements.map(({ id }) => id).sort()).toEqual(laid.placements.map(({ id }) => id).sort());
    for (const one of locked.placements.slice(0, 3)) expect(after.placements).toContainEqual(one);
    expect(verdict.findings).toEqual([]);
  });

  it('goes on from here without getting longer', () => {
    const { result, settle } = settled(laid, book, { reach: 'all', from: 'here' });
    const before = check(laid, book).readings.lengthUsed;
    expect(settle.problem.start).toHaveLength(16);
    expect(result.length).toBeLessThanOrEqual(before + 0.01);
  });

  it('settles only the loose pieces around the others', () => {
    const some: LayDocument = { ...laid, placements: laid.placements.slice(0, 10) };
    const { after, verdict } = settled(some, book, { reach: 'loose', from: 'here' });
    expect(after.placements.slice(0, 10)).toEqual(some.placements);
    expect(after.placements).toHaveLength(16);
    expect(verdict.findings).toEqual([]);
  });

  it('leaves what a given length has no room for on the Rail', () => {
    const short: LayDocument = { ...document, strip: workroom.strip({ length: 320 }) };
    const { after, verdict, result } = settled(short, book);
    expect(result.leftOver.length).toBeGreaterThan(0);
    expect(after.placements.length + result.leftOver.length).toBe(16);
    expect(new Set(verdict.findings.map(({ kind }) => kind))).toEqual(new Set(['missing']));
  });

  it('says which piece is wider than the cloth', () => {
    const narrow = workroom.strip({ usableWidth: 110 });
    const { problem } = fromLay(workroom.lay(book, [], narrow), book, { reach: 'all', from: 'scratch' });
    expect(problemFaults(problem).map(({ message }) => message)).toContainEqual(
      expect.stringMatching(/^Yoke of Ada is 120 mm across in every way it may lie; the cloth is 110 mm wide/)
    );
  });
});

describe('cloth in folds and plies', () => {
  const small = workroom.panel('pocket', workroom.rectangle(120, 90), { symmetric: true, howMany: 2 });
  const paired = workroom.panel('front', workroom.star([180, 90, 150, 120, 70, 160, 100]), {
    howMany: 2,
    paired: true
  });
  const folded = workroom.bookOf(paired, small, back());
  const spreads: [string, Parameters<typeof spread>[0], number][] = [
    ['folded lengthwise', { kind: 'lengthwise' }, 0],
    ['folded in part', { kind: 'lengthwise', depth: 420 }, 0],
    ['two plies facing up', { kind: 'pliesUp', plies: 2 }, 0],
    ['two plies face to face', { kind: 'faceToFace', plies: 2 }, 0]
  ];
  it.each(spreads)('%s: every piece is given once, by the product’s own check', (_, choice) => {
    const document = workroom.lay(folded, [], spread(choice), two);
    const { verdict, settle } = settled(document, folded);
    const { placed, loose, needed } = verdict.readings.pieces;
    expect(placed).toBe(needed - settle.notLain);
    expect(loose).toBe(settle.notLain);
    expect(
      verdict.findings
        .filter(({ severity, kind }) => severity === 'stops' && kind !== 'missing')
        .map(({ message }) => message)
    ).toEqual([]);
    const onFold = settle.problem.pieces.filter(({ onFold }) => onFold);
    expect(onFold.length).toBe(choice.kind === 'lengthwise' ? 2 : 0);
  });

  it('leaves a single hand on the Rail where the cloth is doubled, and lays it where it lies single', () => {
    const odd = workroom.bookOf(workroom.panel('flap', workroom.ell, { howMany: 1 }));
    const whole = settled(workroom.lay(odd, [], spread({ kind: 'lengthwise' })), odd);
    expect(whole.settle.notLain).toBe(1);
    expect(whole.after.placements).toEqual([]);
    const part = settled(workroom.lay(odd, [], spread({ kind: 'lengthwise', depth: 300 })), odd);
    expect(part.settle.notLain).toBe(0);
    expect(part.verdict.findings.filter(({ severity }) => severity === 'stops')).toEqual([]);
  });

  it('goes on from here on the fold', () => {
    const document = workroom.lay(folded, [], spread({ kind: 'lengthwise' }), two);
    const first = settled(document, folded).after;
    const again = settled(first, folded, { reach: 'all', from: 'here' });
    expect(again.verdict.findings.filter(({ severity }) => severity === 'stops')).toEqual([]);
    expect(again.after.placements.map(({ id }) => id).sort()).toEqual(
      first.placements.map(({ id }) => id).sort()
    );
    expect(again.result.length).toBeLessThanOrEqual(check(first, folded).readings.lengthUsed + 0.01);
  });
});

describe('stripes and checks', () => {
  const pointed = (
    name: string,
    at: { x: number; y: number },
    changes: Parameters<typeof workroom.panel>[2] = {}
  ) => {
    const plain = workroom.panel(name, workroom.rectangle(260, 180), { symmetric: true, ...changes });
    return { ...plain, shape: { ...plain.shape, matchPoints: [{ id: 'm', name: 'm', at }] } };
  };
  const matched = workroom.bookOf(
    pointed('front', { x: 40, y: 0 }),
    pointed('pocket', { x: 10, y: 90 }),
    pointed('cuff', { x: 200, y: 180 })
  );
  const groups = (garments: readonly string[]) =>
    garments.map((garment) => ({
      id: `match-${garment}`,
      mirrored: false,
      points: ['front', 'pocket', 'cuff'].map((panel) => ({ garment, panel, point: 'm' }))
    }));
  it.each([
    ['any way', { nap: 'none' as const }],
    ['one way', { nap: 'oneWay' as const }]
  ])('a garment’s panels fall on one place of the repeat, napped %s', (_, changes) => {
    const strip = workroom.strip({
      ...changes,
      repeat: {
        along: { size: 62, offset: 7, symmetric: true },
        across: { size: 48, offset: 5, symmetric: true }
      }
    });
    const plain = workroom.lay(matched, [], strip, two);
    const document: LayDocument = {
      ...plain,
      rules: { ...plain.rules, matchGroups: groups(plain.garments.map(({ id }) => id)) }
    };
    const { verdict, after } = settled(document, matched);
    expect(after.placements.length).toBeGreaterThanOrEqual(6);
    expect(verdict.findings.filter(({ severity }) => severity === 'stops')).toEqual([]);
    // One piece stays where it was put by hand: the others follow it.
    const [first] = after.placements;
    const held: LayDocument = { ...after, placements: [{ ...first!, x: first!.x + 11, locked: true }] };
    const again = settled(held, matched);
    expect(again.verdict.findings.filter(({ severity }) => severity === 'stops')).toEqual([]);
  });
});
