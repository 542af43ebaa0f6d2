import { describe, expect, it } from 'vitest';
import { check } from '$lib/lay/check';
import type { LayDocument } from '$lib/lay/document';
import { withNeededHands } from '$lib/settle/needed-hands';
import { isBetter, laidBy, newStops, problemOfRun } from '$lib/settle/run';
import type { SettleResult } from '$lib/settle/problem';
import { bookOf, ell, lay, panel, placement, rectangle, strip } from '../lay/workroom';

/*
 * What a settle run may show, and how it goes on from its best.
 */

const book = bookOf(
  panel('ell', ell, { paired: true, howMany: 2 }),
  panel('yoke', rectangle(400, 150), { symmetric: true })
);
const left = placement('l', 'ell', { x: 0, y: 0 });
const right = placement('r', 'ell', { x: 450, y: 250, flip: true });
const yoke = placement('y', 'yoke', { x: 0, y: 300 });
const of = (document: LayDocument) => ({ document, verdict: check(document, book) });
const kinds = (before: LayDocument, after: LayDocument, leftOver = 0) =>
  newStops(of(before), of(after), leftOver).map(({ kind }) => kind);

describe('what stops a settled lay from being shown', () => {
  const good = lay(book, [left, right, yoke]);

  it('is nothing in a good lay', () => {
    expect(of(good).verdict.findings).toEqual([]);
    expect(kinds(lay(book, []), good)).toEqual([]);
  });

  it('is an overlap, an edge, a clearance, a flaw, a turn or the nap, when the run brought it', () => {
    const before = lay(book, []);
    const laid = (changes: Partial<typeof yoke>, cloth = strip()) =>
      lay(book, [left, right, { ...yoke, ...changes }], cloth);
    expect(kinds(before, laid({ x: 10, y: 10 }))).toContain('overlap');
    expect(kinds(before, laid({ y: 990 }))).toEqual(['outside-width']);
    expect(kinds(before, laid({ y: 201 }))).toEqual(['clearance']);
    expect(kinds(before, laid({ turn: 3 }))).toContain('off-grain');
    expect(
      kinds(
        before,
        laid({}, strip({ flaws: [{ id: 'f', x: 200, y: 350, along: 0, across: 0, radius: 10, note: '' }] }))
      )
    ).toEqual(['flaw']);
  });

  it('is not what lay there before unmoved, but is the same fault between moved pieces', () => {
    const faulty = lay(book, [left, { ...yoke, x: 10, y: 10 }]);
    const placedOnly = laidBy(faulty, { placements: [...faulty.placements, right] });
    expect(kinds(faulty, placedOnly)).toEqual([]);
    const shifted = laidBy(faulty, {
      placements: placedOnly.placements.map((one) => ({ ...one, x: one.x + 1 }))
    });
    expect(kinds(faulty, shifted)).toEqual(['overlap']);
  });

  it('is a piece that is missing without being called left over', () => {
    const part = lay(book, [left, yoke]);
    expect(kinds(lay(book, []), part)).toEqual(['missing']);
    expect(kinds(lay(book, []), part, 1)).toEqual([]);
  });

  it('is a piece too many that was not too many before', () => {
    const twice = lay(book, [left, right, yoke, { ...left, id: 'l2', x: 800, y: 600 }]);
    expect(kinds(lay(book, []), twice)).toEqual(['surplus']);
    expect(
      kinds(twice, laidBy(twice, { placements: twice.placements.map((one) => ({ ...one, x: one.x + 50 })) }))
    ).toEqual([]);
  });
});

describe('pieces of the wrong hand', () => {
  const wrong = lay(book, [left, { ...right, flip: false }, yoke]);

  it('are turned over where they lie, so that the order gets what it needs', () => {
    expect(of(wrong).verdict.findings.map(({ kind }) => kind)).toContain('wrong-hand');
    const mended = withNeededHands(wrong, book);
    expect(of(mended).verdict.findings.map(({ kind }) => kind)).not.toContain('wrong-hand');
    expect(of(mended).verdict.findings.map(({ kind }) => kind)).not.toContain('missing');
    expect(mended.placements.filter(({ flip }) => flip)).toHaveLength(1);
    const good = lay(book, [left, right, yoke]);
    expect(withNeededHands(good, book)).toBe(good);
  });

  it('stay when they are locked; the other one is turned then', () => {
    const locked = laidBy(wrong, { placements: wrong.placements.map((one) => ({ ...one, locked: true })) });
    expect(withNeededHands(locked, book)).toBe(locked);
    const one = laidBy(wrong, {
      placements: wrong.placements.map((p) => (p.id === 'r' ? { ...p, locked: true } : p))
    });
    const mended = withNeededHands(one, book);
    expect(mended.placements.find(({ id }) => id === 'r')!.flip).toBe(false);
    expect(mended.placements.find(({ id }) => id === 'l')!.flip).toBe(true);
  });
});

describe('a run that goes on from its best', () => {
  const begun = lay(book, [{ ...yoke, locked: true }, left]);
  const best = { placements: [{ ...yoke, locked: true }, left, { ...right, id: 'new' }] };

  it.each(['all', 'loose'] as const)('has the problem that it began with (%s)', (pieces) => {
    const first = problemOfRun(begun, book, { from: 'here', pieces }, null).settle.problem;
    const going = problemOfRun(begun, book, { from: 'here', pieces }, best);
    const shape = (problem: typeof first) => ({
      ...problem,
      start: null,
      pieces: [...problem.pieces].sort((a, b) => (a.id < b.id ? -1 : 1)),
      locked: [...problem.locked].sort((a, b) => (a.id < b.id ? -1 : 1))
    });
    expect(shape(going.settle.problem)).toEqual(shape(first));
    expect(going.settle.problem.start).toHaveLength(pieces === 'all' ? 2 : 1);
    // What it began with comes back as it was, locks and ids included.
    const result: SettleResult = {
      placements: going.settle.problem.start,
      length: 0,
      density: 0,
      leftOver: [],
      evaluations: 0
    };
    const back = going.placementsOf(result, () => 'never');
    expect(new Map(back.map((one) => [one.id, one]))).toEqual(
      new Map(best.placements.map((one) => [one.id, one]))
    );
  });

  it('takes more pieces before less cloth, and no gain below the grid', () => {
    const lying = { leftOver: 1, length: 900 };
    expect(isBetter(lying, null)).toBe(true);
    expect(isBetter({ leftOver: 0, length: 1200 }, lying)).toBe(true);
    expect(isBetter({ leftOver: 2, length: 100 }, lying)).toBe(false);
    expect(isBetter({ leftOver: 1, length: 899.9999 }, lying)).toBe(false);
    expect(isBetter({ leftOver: 1, length: 899.9 }, lying)).toBe(true);
  });
});
