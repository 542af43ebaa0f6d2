import { describe, expect, it } from 'vitest';
import type { SettlePiece, SettleProblem, SettleResult } from '$lib/settle/problem';
import { createSolver } from '$lib/settle/solver';
import { validate } from '$lib/settle/validate';
import { oddProblem, piece, problem, rectangle, ways } from './made-up-problem';

const settled = (asked: SettleProblem, budget = 4000, seed = 1): SettleResult => {
  const solver = createSolver(asked, { seed });
  for (let k = 0; k < 4 && !solver.done(); k++) solver.step(budget / 4, k / 4);
  return solver.result();
};

const rulesBroken = (asked: SettleProblem, result: SettleResult) =>
  validate(asked, result).map((breach) => breach.rule);

const ell = [
  { x: 0, y: 0 },
  { x: 300, y: 0 },
  { x: 300, y: 80 },
  { x: 120, y: 80 },
  { x: 120, y: 200 },
  { x: 0, y: 200 }
];

describe('each rule is kept, and the check sees it broken', () => {
  const cases: {
    rule: string;
    asked: SettleProblem;
    spoil: (result: SettleResult) => SettleResult;
  }[] = [
    {
      rule: 'overlap',
      asked: problem([piece('ell', ell, { copies: 6 })]),
      spoil: (result) =>
        moved(result, 0, {
          ...result.placements[1]!,
          y: result.placements[1]!.y + 5,
          copy: result.placements[0]!.copy
        })
    },
    {
      rule: 'clearance',
      asked: problem([piece('a', rectangle(300, 200), { copies: 6, ways: ways(0) })], { clearance: 4 }),
      spoil: (result) => {
        const lifted = result.placements.map((one, i) => ({ ...one, x: i * 400, y: 0 }));
        lifted[1] = { ...lifted[1]!, x: 303.98, y: 0 };
        return { ...result, placements: lifted, length: 2300 };
      }
    },
    {
      rule: 'outside',
      asked: problem([piece('a', rectangle(300, 200), { copies: 3 })]),
      spoil: (result) => moved(result, 0, { y: -0.5 })
    },
    {
      rule: 'keep-out',
      asked: problem([piece('a', rectangle(300, 200), { copies: 8 })], {
        keepOuts: [rectangle(20, 20).map((p) => ({ x: p.x + 100, y: p.y + 100 }))],
        clearance: 2
      }),
      spoil: (result) => moved(result, 0, { x: 0, y: 0, turn: 0 })
    },
    {
      rule: 'way',
      asked: problem([piece('ell', ell, { copies: 4, ways: ways(0) })]),
      spoil: (result) => moved(result, 0, { turn: 180 })
    },
    {
      rule: 'way',
      asked: problem([piece('ell', ell, { copies: 4, tilt: 2 })]),
      spoil: (result) => moved(result, 0, { turn: 2.2 })
    },
    {
      rule: 'fold',
      asked: problem([piece('a', rectangle(300, 200), { copies: 3, onFold: true }), piece('ell', ell)]),
      spoil: (result) => moved(result, 0, { y: result.placements[0]!.y + 0.1 })
    },
    {
      rule: 'lattice',
      asked: problem([
        piece('ell', ell, {
          copies: 4,
          lattice: {
            anchor: { x: 30, y: 10 },
            x: { size: 60, at: 7 },
            y: { size: 45, at: 3 },
            group: null
          }
        })
      ]),
      spoil: (result) => moved(result, 0, { x: result.placements[0]!.x + 0.5 })
    },
    {
      // Two panels matched to each other, wherever in the repeat that is.
      rule: 'lattice',
      asked: problem([
        piece('ell', ell, { copies: 2, ways: ways(0), lattice: matched({ x: 30, y: 10 }) }),
        piece('a', rectangle(300, 200), { copies: 2, ways: ways(0), lattice: matched({ x: 300, y: 70 }) })
      ]),
      spoil: (result) => moved(result, 3, { y: result.placements[3]!.y + 1 })
    },
    {
      rule: 'band',
      asked: problem([piece('ell', ell, { copies: 3, band: { from: 400, to: 700 } }), piece('a', ell)]),
      spoil: (result) => moved(result, 0, { y: 0, x: 5000, turn: 0 })
    },
    {
      rule: 'nap',
      asked: problem([piece('ell', ell, { copies: 4, napGroup: 'Ada' })]),
      spoil: (result) => moved(result, 0, { turn: (result.placements[0]!.turn + 180) % 360, x: 5000, y: 500 })
    },
    {
      rule: 'copies',
      asked: problem([piece('ell', ell, { copies: 2 })]),
      spoil: (result) => ({ ...result, placements: [...result.placements, result.placements[0]!] })
    }
  ];
  it.each(cases)('$rule', ({ rule, asked, spoil }) => {
    const result = settled(asked);
    expect(result.leftOver).toEqual([]);
    expect(result.placements).toHaveLength(asked.pieces.reduce((sum, one) => sum + one.copies, 0));
    expect(rulesBroken(asked, result)).toEqual([]);
    expect(rulesBroken(asked, spoil(result))).toContain(rule);
  });

  it('lays nothing over a locked piece', () => {
    const asked = problem([piece('ell', ell, { copies: 5 })], {
      locked: [
        { id: 'lock', name: 'Lock', outline: rectangle(400, 300).map((p) => ({ x: p.x + 50, y: p.y + 350 })) }
      ],
      clearance: 3
    });
    const result = settled(asked);
    expect(rulesBroken(asked, result)).toEqual([]);
    expect(result.length).toBeGreaterThanOrEqual(450);
    expect(rulesBroken(asked, moved(result, 0, { x: 100, y: 400, turn: 0 }))).toContain('overlap');
  });

  it('stays inside a remnant of any outline', () => {
    const asked = problem([piece('ell', ell, { copies: 5 })], {
      length: 1500,
      outline: [
        { x: 0, y: 200 },
        { x: 700, y: 0 },
        { x: 1500, y: 300 },
        { x: 1300, y: 1000 },
        { x: 800, y: 700 },
        { x: 100, y: 900 }
      ]
    });
    const result = settled(asked);
    expect(result.leftOver).toEqual([]);
    expect(rulesBroken(asked, result)).toEqual([]);
    expect(rulesBroken(asked, moved(result, 0, { x: 1, y: 1, turn: 0 }))).toContain('outside');
  });
});

function matched(anchor: { x: number; y: number }): SettlePiece['lattice'] {
  return { anchor, x: { size: 60, at: 0 }, y: { size: 45, at: 0 }, group: 'front' };
}

function moved(
  result: SettleResult,
  index: number,
  change: Partial<SettleResult['placements'][number]>
): SettleResult {
  return {
    ...result,
    placements: result.placements.map((one, i) => (i === index ? { ...one, ...change } : one))
  };
}

describe('mixed rules', () => {
  const deep = Number(process.env.WARPWISE_DEEP ?? 1) > 1;
  const count = deep ? 5000 : 120;
  const first = 10_000;
  it(`${count} random problems from seed ${first} are laid validly`, () => {
    const wrong: string[] = [];
    let laid = 0;
    for (let seed = first; seed < first + count; seed++) {
      const asked = oddProblem(seed);
      const result = settled(asked, 3000, seed);
      laid += result.placements.length;
      const asks = asked.pieces.reduce((sum, one) => sum + one.copies, 0);
      if (result.placements.length + result.leftOver.length !== asks) wrong.push(`${seed}: pieces lost`);
      for (const breach of validate(asked, result)) wrong.push(`${seed}: ${JSON.stringify(breach)}`);
    }
    expect(wrong).toEqual([]);
    expect(laid).toBeGreaterThan(count);
  }, 600_000);
});
