import { laidWidth, type Strip } from '$lib/cloth/strip';
import type { Box } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';

/** The four sides of the strip: the cloth's start and end, the near and the far selvedge. */
export const sides = ['start', 'end', 'near', 'far'] as const;
export type StripSide = (typeof sides)[number];

/** How far a box hangs over each side; 0 where it does not. An open length has no end. */
export function overhang(box: Box, strip: Strip): Readonly<Record<StripSide, Millimetres>> {
  return {
    start: Math.max(0, -box.minX),
    end: strip.length === null ? 0 : Math.max(0, box.maxX - strip.length),
    near: Math.max(0, -box.minY),
    far: Math.max(0, box.maxY - laidWidth(strip))
  };
}

/** How far a box is from each side, negative where it hangs over; Infinity at the end of an open length. */
export function roomTo(box: Box, strip: Strip): Readonly<Record<StripSide, Millimetres>> {
  return {
    start: box.minX,
    end: (strip.length ?? Infinity) - box.maxX,
    near: box.minY,
    far: laidWidth(strip) - box.maxY
  };
}

/** A side as the person reads it on this spread: a selvedge may be a fold. */
export function sideOn(side: StripSide, { spread }: Pick<Strip, 'spread'>): string {
  const { fold } = side === 'far' ? spread.at(-1)! : spread[0]!;
  if (fold === 'both' && (side === 'near' || side === 'far')) return `the ${side} fold`;
  if (side === fold) return 'the fold';
  return sideName[side];
}

/** A side of open cloth. */
export const sideName: Readonly<Record<StripSide, string>> = {
  start: 'the start of the cloth',
  end: 'the end of the cloth',
  near: 'the near selvedge',
  far: 'the far selvedge'
};
