import type { Millimetres } from '$lib/units/measure';

/*
 * How much of the width may be laid on. Plan on the narrowest width of the roll.
 */

/**
 * What is kept from the selvedges in all, beside the selvedges themselves: 1 to 2 cm for woven cloth, 2 to 4 cm for elastic knit
 * (I. Vilumsone-Nemes, Industrial Cutting of Textile Materials, p. 19).
 */
export const SIDE_ROOM = { woven: { least: 10, most: 20 }, knit: { least: 20, most: 40 } } as const;

/** width − selvedges − room, never below nothing. `selvedge` is one selvedge. */
export function usableWidthOf(
  fullWidth: Millimetres,
  selvedge: Millimetres,
  room: Millimetres = SIDE_ROOM.woven.most
): Millimetres {
  return Math.max(0, fullWidth - 2 * selvedge - room);
}

/** The rule of thumb where selvedges were not measured: ½ in each side, the full width less 1 in (published leaflets). */
export function usableByRuleOfThumb(fullWidth: Millimetres): Millimetres {
  return Math.max(0, fullWidth - 25.4);
}

/** Room at each end of one ply, mm: 1 cm, elastic cloth 1.5 to 2 cm, the first ply 3 cm (Vilumsone-Nemes, p. 31). */
export const END_ROOM = { woven: 10, elastic: { least: 15, most: 20 }, firstPly: 30 } as const;
