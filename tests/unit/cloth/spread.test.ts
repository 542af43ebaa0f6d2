import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  choiceOf,
  foldDepths,
  lengthsSpread,
  openChoice,
  sideMargin,
  spreadKind,
  spreadKinds,
  spreadOf,
  spreadWords,
  usualSideUp,
  type SpreadChoice
} from '$lib/cloth/spread';
import { laidWidth } from '$lib/cloth/strip';
import { runs } from '../../runs';

const cloth = { usableWidth: 1400, fullWidth: 1440 };
const of = (changes: Partial<SpreadChoice>) => spreadOf(cloth, { ...openChoice, ...changes });

describe('the zones of a spread', () => {
  it('fold a cloth selvedge on selvedge into one doubled zone of half the width', () => {
    expect(of({ kind: 'lengthwise', sideUp: 'wrong' })).toEqual([
      {
        from: 0,
        to: 700,
        layers: [
          { sideUp: 'wrong', nap: 'along' },
          { sideUp: 'right', nap: 'along' }
        ],
        fold: 'near'
      }
    ]);
  });

  it('fold a part: doubled up to the depth, then the upper selvedge, then single up to usable width − depth', () => {
    const zones = of({ kind: 'lengthwise', sideUp: 'wrong', depth: 400 });
    expect(zones.map(({ from, to, layers }) => [from, to, layers.length])).toEqual([
      [0, 400, 2],
      [400, 420, 0],
      [420, 1000, 1]
    ]);
    // Folded right sides in, the ply that lies single shows its right side.
    expect(zones[2]!.layers[0]!.sideUp).toBe('right');
  });

  it('turn the nap of one layer in a crosswise fold, unless it is cut and turned', () => {
    expect(of({ kind: 'crosswise', turned: false })[0]!.layers.map(({ nap }) => nap)).toEqual([
      'along',
      'against'
    ]);
    expect(of({ kind: 'crosswise', turned: true })[0]!.layers.map(({ nap }) => nap)).toEqual([
      'along',
      'along'
    ]);
  });

  it('refuse depths and plies that no cloth has, with what is allowed', () => {
    expect(() => of({ kind: 'lengthwise', depth: 701 })).toThrow(
      '50 to 700 mm deep on this cloth, got 701 mm'
    );
    expect(() => of({ kind: 'lengthwise', depth: 20 })).toThrow('got 20 mm');
    expect(() => of({ kind: 'pliesUp', plies: 1 })).toThrow('2 to 200, got 1');
    expect(() => of({ kind: 'faceToFace', plies: 3 })).toThrow('even number of plies, got 3');
  });

  const choices: fc.Arbitrary<SpreadChoice> = fc.record({
    kind: fc.constantFrom(...spreadKinds),
    sideUp: fc.constantFrom('right', 'wrong'),
    depth: fc.option(fc.integer({ min: 50, max: 700 })),
    plies: fc.integer({ min: 1, max: 20 }).map((half) => half * 2),
    turned: fc.boolean()
  });

  it('are read back as what was chosen, and give the same zones again', () => {
    fc.assert(
      fc.property(choices, (choice) => {
        const spread = spreadOf(cloth, choice);
        const read = choiceOf({ spread, usableWidth: cloth.usableWidth });
        expect(spreadOf(cloth, read)).toEqual(spread);
        if (choice.kind !== 'crosswise' || !choice.turned) expect(read.kind).toBe(choice.kind);
        expect(spreadWords({ spread })).not.toBe('');
      }),
      { seed: 3, numRuns: runs(200) }
    );
  });

  it('lie side by side, and keep the area of the cloth: what lies single, twice what lies doubled, and the covered margin', () => {
    fc.assert(
      fc.property(choices, (choice) => {
        const spread = spreadOf(cloth, choice);
        spread.forEach((zone, i) => expect(zone.from).toBe(i === 0 ? 0 : spread[i - 1]!.to));
        const covered = spread.reduce((sum, { from, to, layers }) => sum + (to - from) * layers.length, 0);
        const widths = (spreadKind({ spread }) === 'tubular' ? 2 : 1) * lengthsSpread({ spread });
        const lost = widths * cloth.usableWidth - covered;
        const parts = spread.length > 1 ? sideMargin(cloth) : 0;
        // A sliver beside the upper selvedge that is too narrow to lay on counts as lost, too.
        expect(lost).toBeGreaterThanOrEqual(parts - 1e-6);
        expect(lost).toBeLessThan(
          parts + (spreadKind({ spread }) === 'lengthwise' ? sideMargin(cloth) + 1 : 1e-6)
        );
        expect(laidWidth({ spread })).toBeLessThanOrEqual(cloth.usableWidth);
      }),
      { seed: 4, numRuns: runs(200) }
    );
  });
});

describe('which side is up where nobody says', () => {
  it('right side for open cloth, in for a fold, out for stripes and checks', () => {
    expect(usualSideUp('open', false)).toBe('right');
    expect(usualSideUp('lengthwise', false)).toBe('wrong');
    expect(usualSideUp('lengthwise', true)).toBe('right');
  });

  it('a fold is at most half of the usable width deep', () => {
    expect(foldDepths(cloth)).toEqual({ least: 50, most: 700 });
  });
});
