import { describe, expect, it } from 'vitest';
import fc from 'fast-check';
import type { LayDocument } from '$lib/lay/document';
import { mergeLays } from '$lib/lay/merge';
import { bookOf, lay, panel, placement, rectangle, strip } from './workroom';
import { runs } from '../../runs';

const book = bookOf(panel('front', rectangle(100, 100), { howMany: 4 }));
const base = lay(book, [
  placement('a', 'front'),
  placement('b', 'front', { y: 200 }),
  placement('c', 'front', { y: 400 })
]);

const withX = (id: string, x: number, from = base): LayDocument => ({
  ...from,
  placements: from.placements.map((one) => (one.id === id ? { ...one, x } : one))
});
const without = (id: string, from = base): LayDocument => ({
  ...from,
  placements: from.placements.filter((one) => one.id !== id)
});
const plus = (id: string, from = base): LayDocument => ({
  ...from,
  placements: [...from.placements, placement(id, 'front', { y: 600 })]
});
const places = (document: LayDocument) => document.placements.map(({ id, x }) => [id, x]);

describe('merging two changed lays', () => {
  it('takes what only one side changed: moved, removed, added', () => {
    const { document, conflicts } = mergeLays(base, withX('a', 10, plus('m')), without('b', plus('t')));
    expect(conflicts).toEqual([]);
    expect(places(document)).toEqual([
      ['a', 10],
      ['c', 0],
      ['m', 0],
      ['t', 0]
    ]);
  });

  it('is no conflict where both did the same', () => {
    const { document, conflicts } = mergeLays(base, withX('a', 7), withX('a', 7));
    expect(conflicts).toEqual([]);
    expect(places(document)[0]).toEqual(['a', 7]);
  });

  it('lists what both changed differently, and does what the person chooses', () => {
    const [mine, theirs] = [withX('a', 1), withX('a', 2, without('b'))];
    const undecided = mergeLays(base, mine, theirs);
    expect(undecided.conflicts).toMatchObject([
      { kind: 'placement', key: 'placement/a', mine: { x: 1 }, theirs: { x: 2 } }
    ]);
    expect(places(undecided.document)).toEqual([
      ['a', 2],
      ['c', 0]
    ]);
    expect(places(mergeLays(base, mine, theirs, () => 'mine').document)).toEqual([
      ['a', 1],
      ['c', 0]
    ]);
  });

  it('asks where one side removed what the other moved', () => {
    const { conflicts } = mergeLays(base, without('a'), withX('a', 2));
    expect(conflicts).toMatchObject([{ key: 'placement/a', mine: null, theirs: { x: 2 } }]);
  });

  it('merges the facts of the cloth one by one, the width together with its spread', () => {
    const mine = { ...base, strip: { ...base.strip, clearance: 5 } };
    const theirs = { ...base, strip: strip({ usableWidth: 980, fullWidth: 1020 }) };
    const { document, conflicts } = mergeLays(base, mine, theirs);
    expect(conflicts).toEqual([]);
    expect(document.strip).toMatchObject({ clearance: 5, usableWidth: 980, spread: [{ to: 980 }] });
    const clash = mergeLays(base, mine, { ...base, strip: { ...base.strip, clearance: 0 } });
    expect(clash.conflicts).toEqual([{ kind: 'cloth', key: 'cloth/clearance' }]);
    expect(clash.document.strip.clearance).toBe(0);
  });

  it('is the same from both sides, whatever they did', () => {
    const action = fc.oneof(
      fc.record({
        do: fc.constant('move' as const),
        id: fc.constantFrom('a', 'b', 'c', 'm', 't'),
        x: fc.integer({ min: 0, max: 3 })
      }),
      fc.record({ do: fc.constant('remove' as const), id: fc.constantFrom('a', 'b', 'c') }),
      fc.record({ do: fc.constant('add' as const), id: fc.constantFrom('m', 't', 'n') })
    );
    const changed = fc.array(action, { maxLength: 6 }).map((actions) =>
      actions.reduce((document, one) => {
        if (one.do === 'move') return withX(one.id, one.x, document);
        if (one.do === 'remove') return without(one.id, document);
        return document.placements.some(({ id }) => id === one.id) ? document : plus(one.id, document);
      }, base)
    );
    fc.assert(
      fc.property(changed, changed, (mine, theirs) => {
        const here = mergeLays(base, mine, theirs, () => 'mine');
        const there = mergeLays(base, theirs, mine, () => 'theirs');
        expect(there.document).toEqual(here.document);
        expect(there.conflicts.map(({ key }) => key)).toEqual(here.conflicts.map(({ key }) => key));
        const sides = (list: typeof here.conflicts) =>
          list.map((one) => (one.kind === 'placement' ? [one.mine, one.theirs] : []));
        expect(sides(there.conflicts).map((pair) => [...pair].reverse())).toEqual(sides(here.conflicts));
        expect(mergeLays(base, mine, base).document.placements).toEqual(
          expect.arrayContaining(mine.placements)
        );
        expect(mergeLays(base, mine, base).conflicts).toEqual([]);
      }),
      { seed: 17, numRuns: runs(300) }
    );
  });
});
