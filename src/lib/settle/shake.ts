import type { Lay } from './laid';
import { turnBetween, type Task } from './task';

/** Puts a lay that does not come apart into some disorder, so that it may come apart in another way. */
export type Shake = (lay: Lay) => void;

/** Up to so many pieces a stretch is turned as often as pieces are swapped; in larger lays that spoils too much. */
const SMALL = 30;

/**
 * Two large pieces change places (Gardeyn, Vanden Berghe and Wauters 2025), or any two, or a stretch of the strip is
 * turned round as a whole: what was good inside it stays so.
 */
export function createShake(task: Task, random: () => number): Shake {
  const n = task.items.length;
  const area = (i: number) => task.forms[task.choiceForm[task.items[i]!.first]!]!.area;
  const bySize = Array.from({ length: n }, (_, i) => i).sort((a, b) => area(b) - area(a));
  const large = bySize.slice(0, Math.max(2, Math.ceil(n * 0.4)));
  const rare = 0.25 * Math.min(1, SMALL / n);

  function swapTwo(lay: Lay, among: readonly number[]): void {
    for (let tries = 0; tries < 20; tries++) {
      const a = among[Math.floor(random() * among.length)]!;
      const b = among[Math.floor(random() * among.length)]!;
      if (a === b || task.choiceForm[lay.choice[a]!] === task.choiceForm[lay.choice[b]!]) continue;
      [lay.x[a], lay.x[b]] = [lay.x[b]!, lay.x[a]!];
      [lay.y[a], lay.y[b]] = [lay.y[b]!, lay.y[a]!];
      return;
    }
  }

  function turnStretch(lay: Lay): void {
    const length = (0.15 + 0.35 * random()) * lay.length;
    const from = random() * (lay.length - length);
    for (let i = 0; i < n; i++) {
      if (lay.x[i]! < from || lay.x[i]! > from + length) continue;
      lay.choice[i] = turnedRound(task, i, lay.choice[i]!);
      lay.x[i] = 2 * from + length - lay.x[i]!;
      lay.y[i] = task.width - lay.y[i]!;
    }
  }

  return (lay) => {
    if (n < 2) return;
    const kind = random();
    if (kind < rare) turnStretch(lay);
    else swapTwo(lay, kind < 2 * rare ? bySize : large);
  };
}

/** The choice of item i that is its choice c turned by 180°; c where there is none. */
function turnedRound(task: Task, i: number, c: number): number {
  const way = task.choiceWay[c]!;
  const { first, last } = task.items[i]!;
  for (let other = first; other < last; other++) {
    const { turn, flip } = task.choiceWay[other]!;
    if (flip === way.flip && Math.abs(turnBetween(turn, way.turn) - 180) < 1e-3) return other;
  }
  return c;
}
