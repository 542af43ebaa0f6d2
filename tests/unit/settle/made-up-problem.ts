import type { Outline } from '$lib/geometry/point';
import type { SettlePiece, SettleProblem, Way } from '$lib/settle/problem';
import { randomFrom } from '$lib/settle/random';

/*
 * Invented problems: odd outlines and every rule, alone and mixed, from a seed.
 */

export const ways = (...turns: number[]): Way[] =>
  turns.map((turn) => ({ turn, flip: false, nap: turn === 0 ? 1 : turn === 180 ? -1 : 0 }));

export const rectangle = (length: number, width: number): Outline => [
  { x: 0, y: 0 },
  { x: length, y: 0 },
  { x: length, y: width },
  { x: 0, y: width }
];

export function piece(id: string, outline: Outline, changes: Partial<SettlePiece> = {}): SettlePiece {
  return {
    id,
    name: id,
    outline,
    copies: 1,
    ways: ways(0, 180),
    tilt: 0,
    napGroup: null,
    onFold: false,
    band: null,
    lattice: null,
    ...changes
  };
}

export function problem(pieces: SettlePiece[], changes: Partial<SettleProblem> = {}): SettleProblem {
  return {
    width: 1000,
    length: null,
    outline: null,
    keepOuts: [],
    clearance: 0,
    touching: 0.01,
    pieces,
    locked: [],
    preferredSide: null,
    start: [],
    ...changes
  };
}

/** A star-shaped outline of some corners, often concave, on the grid of 0.001. */
export function oddOutline(random: () => number, size: number, corners: number): Outline {
  const turn = random() * Math.PI;
  return Array.from({ length: corners }, (_, i) => {
    const angle = turn + (2 * Math.PI * (i + 0.7 * random())) / corners;
    const reach = size * (0.3 + 0.7 * random());
    return {
      x: Math.round(1000 * reach * Math.cos(angle)) / 1000,
      y: Math.round(1000 * reach * Math.sin(angle)) / 1000
    };
  });
}

/** A problem with a mixture of rules that always has some lay. */
export function oddProblem(seed: number): SettleProblem {
  const random = randomFrom(seed);
  const pick = (share: number) => random() < share;
  const latticed = pick(0.25);
  const lattice = { x: pick(0.7) ? 70 : 0, y: pick(0.4) ? 90 : 0 };
  const grouped = pick(0.25);
  const matched = latticed && pick(0.5);
  const banded = pick(0.2);
  const tilted = !latticed && pick(0.25);
  const width = 600 + Math.round(random() * 600);
  const pieces: SettlePiece[] = [];
  const kinds = 1 + Math.floor(random() * 6);
  for (let k = 0; k < kinds; k++) {
    const corners = pick(0.1) ? 40 : 3 + Math.floor(random() * 9);
    const outline = pick(0.2)
      ? rectangle(50 + Math.round(random() * 200), 30 + Math.round(random() * 150))
      : oddOutline(random, 50 + random() * 150, corners);
    const turns = pick(0.3) ? [0, 90, 180, 270] : pick(0.5) ? [0, 180] : pick(0.5) ? [0] : [45, 225];
    const flips = pick(0.3) ? [false, true] : [pick(0.3)];
    pieces.push(
      piece(`p${k}`, outline, {
        copies: 1 + Math.floor(random() * 3),
        ways: turns.flatMap((turn) =>
          flips.map((flip) => ({ turn, flip, nap: turn % 180 !== 0 ? (0 as const) : turn === 0 ? 1 : -1 }))
        ),
        tilt: tilted && pick(0.6) ? 1 + 3 * random() : 0,
        napGroup: grouped && pick(0.7) ? `g${k % 2}` : null,
        onFold: !latticed && pick(0.08),
        band:
          banded && pick(0.5)
            ? pick(0.5)
              ? { from: 0, to: 0.6 * width }
              : { from: 0.4 * width, to: width }
            : null,
        lattice:
          latticed && pick(0.6)
            ? {
                anchor: outline[0]!,
                x: lattice.x ? { size: lattice.x, at: 10 } : null,
                y: lattice.y ? { size: lattice.y, at: 5 } : null,
                group: matched ? `m${k % 2}` : null
              }
            : null
      })
    );
  }
  const flaw = () => {
    const x = random() * 900;
    const y = random() * width;
    return oddOutline(random, 5 + random() * 30, 8).map((p) => ({ x: p.x + x, y: p.y + y }));
  };
  const remnant = pick(0.12);
  return problem(pieces, {
    width,
    length: remnant ? 3000 : pick(0.15) ? 500 + random() * 600 : null,
    outline: remnant
      ? [
          { x: 0, y: 0.1 * width },
          { x: 1400, y: 0 },
          { x: 3000, y: 0.3 * width },
          { x: 2900, y: width },
          { x: 1500, y: 0.8 * width },
          { x: 200, y: width }
        ]
      : null,
    keepOuts: pick(0.3) ? Array.from({ length: 1 + Math.floor(random() * 3) }, flaw) : [],
    preferredSide: pick(0.3) ? (pick(0.5) ? 'near' : 'far') : null,
    clearance: pick(0.4) ? Math.round(random() * 8000) / 1000 : 0,
    locked: pick(0.25)
      ? [
          {
            id: 'lock',
            name: 'lock',
            outline: rectangle(150, 100).map((p) => ({ x: p.x + 120, y: p.y + 40 }))
          }
        ]
      : []
  });
}
