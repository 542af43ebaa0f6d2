import { describe, expect, it } from 'vitest';
import { check } from '$lib/lay/check';
import type { LayDocument } from '$lib/lay/document';
import type { PanelBook } from '$lib/lay/panel-book';
import { fromLay, toPlacements, type SettleFrom, type SettleReach } from '$lib/settle/from-lay';
import { problemFaults } from '$lib/settle/faults';
import { createSolver } from '$lib/settle/solver';
import { validate } from '$lib/settle/validate';
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
