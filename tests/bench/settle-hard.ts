import { problemFaults } from '../../src/lib/settle/faults';
import type { SettlePiece, SettleProblem } from '../../src/lib/settle/problem';
import { randomFrom } from '../../src/lib/settle/random';
import { createSolver } from '../../src/lib/settle/solver';
import { validate } from '../../src/lib/settle/validate';
import { oddOutline, piece, problem, ways } from '../unit/settle/made-up-problem';

/*
 * Lays that are hard on time or memory, one worker: first lay, what a minute makes of it, and the most memory that the process
 * took. Each line runs by itself, so that memory is its own: npx tsx tests/bench/settle-hard.ts <name> [seconds]
 */

/** A lumpy closed outline of `corners` points, concave here and there. */
function lumpy(random: () => number, size: number, corners: number) {
  const waves = Array.from({ length: 4 }, (_, k) => ({
    by: (0.12 * random()) / (1 + k),
    at: 6.3 * random()
  }));
  const stretch = 0.6 + 1.2 * random();
  return Array.from({ length: corners }, (_, i) => {
    const angle = (2 * Math.PI * i) / corners;
    const reach = size * waves.reduce((sum, { by, at }, k) => sum + by * Math.sin((k + 2) * angle + at), 1);
    return {
      x: Math.round(1000 * stretch * reach * Math.cos(angle)) / 1000,
      y: Math.round(1000 * reach * Math.sin(angle)) / 1000
    };
  });
}

const many = (count: number, corners: number, copies: number, changes: Partial<SettlePiece> = {}) => {
  const random = randomFrom(7);
  return Array.from({ length: count }, (_, k) =>
    piece(`p${k}`, lumpy(random, 30 + 60 * random(), corners), { copies, ways: ways(0, 180), ...changes })
  );
};

const problems: Record<string, () => SettleProblem> = {
  'ten pieces': () => problem(many(10, 60, 1), { width: 1400 }),
  'a hundred pieces': () => problem(many(50, 60, 2), { width: 1400 }),
  'a thousand pieces': () => problem(many(250, 60, 4), { width: 1400 }),
  'a thousand distinct outlines of 100 points': () => problem(many(1000, 100, 1), { width: 1400 }),
  'an outline of 400 points': () =>
    problem([piece('big', lumpy(randomFrom(3), 200, 400), { copies: 12 }), ...many(20, 100, 2)], {
      width: 1400,
      clearance: 2
    }),
  'an odd remnant with tilt': () => {
    const random = randomFrom(9);
    return problem(
      Array.from({ length: 24 }, (_, k) =>
        piece(`p${k}`, oddOutline(random, 90 + 90 * random(), 9), { tilt: 3 })
      ),
      {
        width: 1200,
        length: 2600,
        clearance: 2,
        outline: [
          { x: 0, y: 150 },
          { x: 900, y: 0 },
          { x: 2600, y: 260 },
          { x: 2450, y: 1200 },
          { x: 1300, y: 980 },
          { x: 1250, y: 1200 },
          { x: 150, y: 1150 }
        ],
        keepOuts: [oddOutline(random, 30, 9).map((p) => ({ x: p.x + 1100, y: p.y + 500 }))]
      }
    );
  }
};

const name = process.argv[2] ?? '';
const seconds = Number(process.argv[3] ?? 60);
const make = problems[name];
if (!make) {
  console.log(`Name one of: ${Object.keys(problems).join(' · ')}`);
  process.exit(1);
}
const asked = make();
const start = performance.now();
const faults = problemFaults(asked);
const looked = performance.now();
const solver = createSolver(asked, { seed: 1 });
const first = solver.result();
const firstAt = performance.now();
let most = 0;
let steps = 0;
for (let now = firstAt; now - firstAt < seconds * 1000 && !solver.done(); now = performance.now()) {
  solver.step(20_000, (now - firstAt) / (seconds * 1000));
  steps++;
  most = Math.max(most, process.memoryUsage().rss);
}
const best = solver.result();
const round = (value: number, digits = 1) => value.toFixed(digits);
console.log(
  [
    name,
    `faults looked for in ${round(looked - start)} ms (${faults.length})`,
    `first lay ${round(firstAt - looked)} ms, ${round(first.density * 100)} %, ${first.leftOver.length} left over`,
    `after ${seconds} s ${round(best.density * 100)} %, length ${round(best.length)}, ${best.leftOver.length} left over`,
    `${round(best.evaluations / seconds / 1e6, 2)} M places a second, ${steps} steps`,
    `at most ${round(most / 1e6, 0)} MB`,
    `${validate(asked, best).length} breaches`
  ].join(' · ')
);
