import { describe, expect, it } from 'vitest';
import { problemFaults } from '$lib/settle/faults';
import type { SettleProblem } from '$lib/settle/problem';
import { randomFrom } from '$lib/settle/random';
import { createSolver } from '$lib/settle/solver';
import { validate } from '$lib/settle/validate';
import { oddOutline, oddProblem, piece, problem, rectangle, ways } from './made-up-problem';

function run(asked: SettleProblem, seed: number, steps: number, budget: number) {
  const solver = createSolver(asked, { seed });
  for (let k = 0; k < steps && !solver.done(); k++) solver.step(budget, k / steps);
  return solver;
}

const mixed = (seed: number, count: number): SettleProblem => {
  const random = randomFrom(seed);
  return problem(
    Array.from({ length: count }, (_, k) =>
      piece(`p${k}`, oddOutline(random, 60 + 120 * random(), 5 + (k % 6)), { copies: 2 })
    )
  );
};

describe('the solver', () => {
  it('gives the same lay for the same seed and steps, and other lays for other seeds', () => {
    const lays = [3, 3, 4].map((seed) => JSON.stringify(run(mixed(1, 8), seed, 10, 3000).result()));
    expect(lays[0]).toBe(lays[1]);
    expect(lays[0]).not.toBe(lays[2]);
  });

  it('has a lay before the first step, and never a longer one afterwards', () => {
    const solver = createSolver(mixed(2, 10), { seed: 1 });
    let length = solver.result().length;
    const first = length;
    expect(validate(mixed(2, 10), solver.result())).toEqual([]);
    for (let k = 0; k < 20; k++) {
      solver.step(2000, k / 20);
      expect(solver.result().length).toBeLessThanOrEqual(length + 1e-6);
      length = solver.result().length;
    }
    expect(length).toBeLessThan(0.95 * first);
  });

  it('goes on from a given lay, and from one with overlaps after mending it', () => {
    const asked = mixed(3, 8);
    const good = run(asked, 1, 20, 3000).result();
    const again = createSolver({ ...asked, start: good.placements }, { seed: 2 });
    expect(again.result().length).toBeCloseTo(good.length, 2);
    const spoilt = good.placements.map((one, i) =>
      i === 0 ? { ...good.placements[1]!, piece: one.piece, copy: one.copy } : one
    );
    const mended = createSolver({ ...asked, start: spoilt }, { seed: 2 }).result();
    expect(validate(asked, mended)).toEqual([]);
    expect(mended.placements).toHaveLength(good.placements.length);
  });

  it('completes a lay of which only some pieces are placed', () => {
    const asked = mixed(4, 6);
    const good = run(asked, 1, 5, 3000).result();
    const half = createSolver({ ...asked, start: good.placements.slice(0, 5) }, { seed: 1 }).result();
    expect(half.placements).toHaveLength(12);
    expect(validate(asked, half)).toEqual([]);
  });

  it('says what does not fit a given length, and lays the rest', () => {
    const asked = problem([piece('a', rectangle(400, 300), { copies: 9, ways: ways(0) })], { length: 900 });
    const result = run(asked, 1, 10, 2000).result();
    expect(result.placements).toHaveLength(6);
    expect(result.leftOver).toHaveLength(3);
    expect(result.length).toBeLessThanOrEqual(900);
    expect(validate(asked, result)).toEqual([]);
  });

  it('takes a better lay from another solver', () => {
    const asked = mixed(5, 8);
    const good = run(asked, 1, 20, 3000);
    const other = createSolver(asked, { seed: 2 });
    other.offer(good.lay());
    other.step(10, 0);
    expect(other.result().length).toBeLessThanOrEqual(good.result().length + 1e-6);
    expect(validate(asked, other.result())).toEqual([]);
  });

  it('lays nothing when there is nothing to lay', () => {
    const solver = createSolver(problem([]), { seed: 1 });
    solver.step(100, 0);
    expect(solver.done()).toBe(true);
    expect(solver.result()).toMatchObject({ placements: [], length: 0, density: 0, leftOver: [] });
  });

  it('closes a cut-up rectangle of equal parts completely', () => {
    const asked = problem(
      [
        piece('half', rectangle(500, 500), { copies: 4, ways: ways(0) }),
        piece('long', rectangle(1000, 250), { copies: 4, ways: ways(0) })
      ],
      { width: 1000 }
    );
    const result = run(asked, 1, 50, 5000).result();
    expect(result.length).toBeCloseTo(2000, 2);
    expect(result.density).toBeCloseTo(1, 5);
  });
});

describe('rectangles cut up at random', () => {
  it('are laid at 85 % of their optimum or better', () => {
    const shares = Array.from({ length: 6 }, (_, k) => {
      const random = randomFrom(500 + k);
      const parts = cutUp(1000, 800, 12, random);
      const asked = problem(
        parts.map(([w, h], i) => piece(`r${i}`, rectangle(w, h), { ways: ways(0) })),
        {
          width: 800
        }
      );
      const result = run(asked, k, 20, 8000).result();
      expect(validate(asked, result)).toEqual([]);
      return 1000 / result.length;
    });
    expect(Math.max(...shares)).toBeLessThanOrEqual(1 + 1e-6);
    expect(Math.min(...shares)).toBeGreaterThan(0.85);
  });
});

/** A rectangle cut straight across, again and again. */
function cutUp(length: number, width: number, count: number, random: () => number): [number, number][] {
  const parts: [number, number][] = [[length, width]];
  while (parts.length < count) {
    parts.sort((a, b) => b[0] * b[1] - a[0] * a[1]);
    const [w, h] = parts.shift()!;
    const share = 0.3 + 0.4 * random();
    if (w > h) {
      const cut = Math.round(w * share);
      parts.push([cut, h], [w - cut, h]);
    } else {
      const cut = Math.round(h * share);
      parts.push([w, cut], [w, h - cut]);
    }
  }
  return parts;
}

describe('what is said before anything runs', () => {
  it('a piece wider or longer than the cloth, with its measure', () => {
    const [wide] = problemFaults(problem([piece('Train', rectangle(3000, 1012), { ways: ways(0, 180) })]));
    expect(wide).toMatchObject({ kind: 'too-wide', pieces: ['Train'], measure: 12 });
    expect(wide!.message).toContain('1012');
    const [long] = problemFaults(problem([piece('Train', rectangle(3000, 900))], { length: 2900 }));
    expect(long).toMatchObject({ kind: 'too-long', measure: 100 });
    const tilted = piece('Train', rectangle(200, 1001), { tilt: 0 });
    expect(problemFaults(problem([{ ...tilted, ways: ways(0, 90) }]))).toEqual([]);
  });

  it('locks that contradict each other, the cloth or a flaw', () => {
    const at = (x: number, y: number) => rectangle(200, 100).map((p) => ({ x: p.x + x, y: p.y + y }));
    const faults = problemFaults(
      problem([], {
        locked: [
          { id: 'a', name: 'Front', outline: at(0, 0) },
          { id: 'b', name: 'Back', outline: at(150, 50) },
          { id: 'c', name: 'Sleeve', outline: at(500, 950) }
        ],
        keepOuts: [rectangle(30, 30)]
      })
    );
    expect(faults.map(({ kind, pieces }) => [kind, ...pieces])).toEqual([
      ['lock-on-flaw', 'a'],
      ['locks-collide', 'a', 'b'],
      ['lock-outside', 'c']
    ]);
    expect(faults.find(({ kind }) => kind === 'lock-outside')!.measure).toBeCloseTo(50, 6);
  });

  it('leaves over what has no way to lie, and lays the rest', () => {
    const asked = problem([
      piece('wide', rectangle(100, 1200), { ways: ways(0) }),
      piece('a', rectangle(100, 100))
    ]);
    const result = createSolver(asked, { seed: 1 }).result();
    expect(result.leftOver).toEqual([{ piece: 'wide', copy: 0 }]);
    expect(result.placements).toHaveLength(1);
  });
});

describe('the preferred side', () => {
  it('leaves what is free of the width along the other selvedge, at the same length', () => {
    const free = mixed(5, 6);
    const middle = (asked: SettleProblem) => {
      const result = run(asked, 4, 2, 4000).result();
      expect(validate(asked, result)).toEqual([]);
      return {
        length: result.length,
        y: result.placements.reduce((sum, one) => sum + one.y, 0) / result.placements.length
      };
    };
    const either = middle(free);
    const near = middle({ ...free, preferredSide: 'near' });
    const far = middle({ ...free, preferredSide: 'far' });
    expect(near.length).toBeCloseTo(either.length, 6);
    expect(far.length).toBeCloseTo(either.length, 6);
    expect(near.y).toBeLessThan(either.y);
    expect(far.y).toBeGreaterThan(either.y);
  });
});

it('random problems ask for every rule', () => {
  const problems = Array.from({ length: 120 }, (_, k) => oddProblem(10_000 + k));
  const some = (test: (asked: SettleProblem) => boolean) =>
    expect(problems.filter(test).length).toBeGreaterThan(3);
  some((asked) => asked.outline !== null);
  some((asked) => asked.keepOuts.length > 0);
  some((asked) => asked.clearance > 0);
  some((asked) => asked.locked.length > 0);
  some((asked) => asked.pieces.some((one) => one.tilt > 0));
  some((asked) => asked.pieces.some((one) => one.lattice !== null));
  some((asked) => asked.pieces.some((one) => one.napGroup !== null));
  some((asked) => asked.pieces.some((one) => one.onFold));
  some((asked) => asked.pieces.some((one) => one.band !== null));
  some((asked) => asked.pieces.some((one) => one.lattice?.group != null));
  some((asked) => asked.preferredSide !== null);
});
