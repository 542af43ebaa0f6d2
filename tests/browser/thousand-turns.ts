import { snapTurn } from '$lib/geometry/placement';
import { check } from '$lib/lay/check';
import { bookOf, lay, panel, placement, rectangle, strip } from '../unit/lay/workroom';

const book = bookOf(panel('a', rectangle(100, 100), { turns: 'free', symmetric: true, howMany: 2 }));

/** Two squares side by side, turned together, that run `depth` into each other, through the whole check. */
function found(turn: number, depth: number): number | null {
  const radians = (turn * Math.PI) / 180;
  const shift = 100 - depth;
  const { findings } = check(
    lay(
      book,
      [
        placement('left', 'a', { x: 500, y: 500, turn }),
        placement('right', 'a', {
          x: 500 + shift * Math.cos(radians),
          y: 500 + shift * Math.sin(radians),
          turn
        })
      ],
      strip({ clearance: 0 })
    ),
    book
  );
  return findings.length === 0 ? null : findings[0]!.measure!.value;
}

/** What the check says of depths of 0.009 and 0.011 mm at a thousand turns, the same everywhere it runs. */
export function thousandTurns(): { turn: number; shallow: number | null; deep: number | null }[] {
  let state = 20261201;
  return Array.from({ length: 1000 }, () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    const turn = snapTurn((state / 2 ** 32) * 360);
    return { turn, shallow: found(turn, 0.009), deep: found(turn, 0.011) };
  });
}
