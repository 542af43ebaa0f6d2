import type { Strip } from '$lib/cloth/strip';
import { snapTurn } from '$lib/geometry/placement';
import type { TurnSet } from '$lib/pattern/panel';
import { angleBetween, signedTurn } from '$lib/units/angle';
import type { Degrees } from '$lib/units/measure';
import type { LayPanel } from './panel-book';

/*
 * How a piece may be turned. A flip mirrors across the grain line (y → −y), so the grain and the nap of a piece run
 * along its turn whether it is flipped or not.
 */

/** What this file asks of a panel. */
type Turned = Pick<LayPanel, 'turns' | 'grainTolerance'>;

/** Turns on which the grain line runs as the panel asks, whichever way the nap goes; null when any turn will do. */
export function grainTurns(turns: TurnSet): readonly Degrees[] | null {
  switch (turns) {
    case 'bothWays':
    case 'oneWay':
      return [0, 180];
    case 'across':
      return [90, 270];
    case 'bias':
      return [45, 135, 225, 315];
    case 'free':
      return null;
  }
}

/**
 * Which way a piece runs at `turn`: 1 with the nap (towards +x), −1 against it, 0 for neither. A piece cut across
 * runs sideways: 90° counts as with the nap, so that all such pieces look the same.
 */
export function way(turns: TurnSet, turn: Degrees): 1 | -1 | 0 {
  const radians = (turn * Math.PI) / 180;
  const along = turns === 'across' ? Math.sin(radians) : Math.cos(radians);
  return Math.abs(along) < 1e-9 ? 0 : along > 0 ? 1 : -1;
}

/** Whether a piece must run one way on this cloth: its panel asks for it, or the nap does. */
export function runsOneWay(panel: Turned, strip: Strip): boolean {
  return panel.turns === 'oneWay' || strip.nap === 'oneWay';
}

/** Whether the piece lies against the nap of the top layer, or against the one way that its panel asks for. That the layers agree is another finding. */
export function againstNap(panel: Turned, strip: Strip, turn: Degrees): boolean {
  if (!runsOneWay(panel, strip)) return false;
  const runs = way(panel.turns, turn);
  return runs === (strip.spread[0]!.layers[0]!.nap === 'along' ? -1 : 1);
}

/** The turns that a piece may be laid at on this cloth, in order; null when any turn will do. */
export function allowedTurns(panel: Turned, strip: Strip): readonly Degrees[] | null {
  const turns = grainTurns(panel.turns);
  return turns === null ? null : turns.filter((turn) => !againstNap(panel, strip, turn));
}

/** How far the grain line is off the nearest turn that the panel asks for, 0 to 90; 0 for a free panel. */
export function offGrain(panel: Turned, turn: Degrees): Degrees {
  const turns = grainTurns(panel.turns);
  return turns === null ? 0 : Math.min(...turns.map((allowed) => angleBetween(turn, allowed)));
}

/** How far off grain a panel may lie on this cloth: stripes and checks allow no tilt at all. */
export function toleranceOn(panel: Turned, strip: Pick<Strip, 'repeat'>): Degrees {
  return strip.repeat.along || strip.repeat.across ? 0 : panel.grainTolerance;
}

/** Whether `turn` is further off grain than the panel's tolerance on this cloth. */
export function beyondTolerance(panel: Turned, strip: Pick<Strip, 'repeat'>, turn: Degrees): boolean {
  // Half a step of the grid of turns: a piece exactly at its tolerance is within it.
  return offGrain(panel, turn) > toleranceOn(panel, strip) + 0.00005;
}

/** The allowed turn nearest to `turn`; `turn` itself when any turn will do or none is allowed. */
export function nearestTurn(panel: Turned, strip: Strip, turn: Degrees): Degrees {
  const turns = allowedTurns(panel, strip) ?? [];
  return turns.reduce<Degrees>(
    (best, allowed) => (angleBetween(turn, allowed) < angleBetween(turn, best) ? allowed : best),
    turns[0] ?? snapTurn(turn)
  );
}

/** `turn` moved into the tolerance about the nearest allowed turn. */
export function withinTolerance(panel: Turned, strip: Strip, turn: Degrees): Degrees {
  if (allowedTurns(panel, strip) === null) {
    const snapped = snapTurn(turn);
    return againstNap(panel, strip, snapped) ? (snapped < 180 ? 90 : 270) : snapped;
  }
  const nearest = nearestTurn(panel, strip, turn);
  const off = signedTurn(turn - nearest);
  const tolerance = toleranceOn(panel, strip);
  return snapTurn(nearest + Math.max(-tolerance, Math.min(tolerance, off)));
}

/**
 * The turn that the turn command goes to: the next allowed one counter-clockwise (`step` 1) or clockwise (−1). A free
 * panel turns by 15°. The same turn comes back when there is no other.
 */
export function nextTurn(panel: Turned, strip: Strip, turn: Degrees, step: 1 | -1): Degrees {
  const turns =
    allowedTurns(panel, strip) ??
    Array.from({ length: 24 }, (_, i) => i * 15).filter((every) => !againstNap(panel, strip, every));
  let best = snapTurn(turn);
  let least = 360;
  for (const allowed of turns) {
    const ahead = snapTurn(step * (allowed - turn));
    if (ahead > 0 && ahead < least) {
      least = ahead;
      best = allowed;
    }
  }
  return best;
}
