import { z } from 'zod';
import { shrinkageSchema } from './shrinkage';
import { splicesSchema } from './what-to-buy';

/*
 * The cloth as it lies on the table: one strip of a usable width, seen from above. x = 0 is the cloth's start,
 * y = 0 the near selvedge (or the fold), both after margins.
 */

const mm = z.number().finite().min(0).max(1e6);

/** One layer of cloth in a zone. */
export const layerSchema = z.object({
  /** Which side of the cloth looks up. */
  sideUp: z.enum(['right', 'wrong']),
  /** Whether the nap runs towards +x, as on the top ply, or against it. */
  nap: z.enum(['along', 'against'])
});
export type Layer = z.infer<typeof layerSchema>;

/**
 * Where a zone is folded: along its near or far side, along both (tubular cloth), or across, at the cloth's start.
 */
export const foldSides = ['none', 'near', 'far', 'both', 'start'] as const;

/** A stretch of the width that has the same layers throughout. What each spread is made of: `spread.ts`. */
export const zoneSchema = z.object({
  from: mm,
  to: mm,
  /** Top ply first. None: nothing may be laid there, under the selvedge of a ply that is folded over. */
  layers: z.array(layerSchema).max(200),
  fold: z.enum(foldSides)
});
export type Zone = z.infer<typeof zoneSchema>;

export const repeatSchema = z.object({
  /** Distance from line to line. */
  size: z.number().finite().min(1).max(5000),
  /** The first line, from the cloth's start (along) or the near selvedge (across). */
  offset: z.number().finite().min(0).max(5000),
  symmetric: z.boolean()
});

/** A place that no piece may lie on: everything within `radius` of a box `along` by `across` about its middle. */
export const flawSchema = z.object({
  id: z.string().min(1).max(64),
  /** Its middle; before the start of the lay where it lies in the end allowance. */
  x: z.number().finite().min(-1e6).max(1e6),
  y: z.number().finite().min(-1e6).max(1e6),
  along: z.number().finite().min(0).max(200_000),
  across: z.number().finite().min(0).max(10_000),
  radius: z.number().finite().min(0).max(5000),
  note: z.string().max(200)
});

export type Flaw = z.infer<typeof flawSchema>;

/** The roll or remnant that a lay is made on. */
export const givenSchema = z.object({
  /** The cloth length of the studio. */
  id: z.string().min(1).max(64),
  /** As the workroom calls it: 'Roll 3, top shelf'. */
  name: z.string().max(120),
  kind: z.enum(['roll', 'remnant', 'client']),
  batch: z.string().max(120),
  /** The edge of an odd remnant, counter-clockwise, as it lies; null where it is a whole width. */
  outline: z
    .array(z.object({ x: z.number().finite(), y: z.number().finite() }))
    .min(3)
    .max(200)
    .nullable()
});
export type Given = z.infer<typeof givenSchema>;

export const stripSchema = z.object({
  spread: z.array(zoneSchema).min(1).max(20),
  usableWidth: z.number().finite().min(10).max(10_000),
  /** Full width with both selvedges; for utilisation and the guide's frame. */
  fullWidth: z.number().finite().min(10).max(10_000),
  /** From x = 0 to the end line, end allowances excluded; null while the length is open. */
  length: z.number().finite().min(1).max(200_000).nullable(),
  /** none: no nap; oneWay: every piece the same way; garmentWay: each garment one way, garments may alternate. */
  nap: z.enum(['none', 'oneWay', 'garmentWay']),
  /** Whether both sides of the cloth are alike, so that a flip keeps the hand free. */
  sidesAlike: z.boolean(),
  repeat: z.object({ along: repeatSchema.nullable(), across: repeatSchema.nullable() }),
  flaws: z.array(flawSchema).max(1000),
  /** null: cloth that is still to be bought, or that nobody has measured in. */
  given: givenSchema.nullable(),
  /** How this cloth's shrinking is met. The measures of the strip are those of the cloth as it lies. */
  shrinkage: shrinkageSchema,
  splices: splicesSchema,
  /** Whether the length to buy is a whole number of repeats. */
  wholeRepeats: z.boolean(),
  endAllowance: z.object({ start: mm.max(2000), end: mm.max(2000) }),
  /** Added to the length to buy, before rounding up. */
  reserve: mm.max(10_000),
  /** What the studio buys in whole multiples of. */
  buyStep: z.number().finite().min(0.1).max(10_000),
  /** The least distance between two cut lines, and between a cut line and a flaw. */
  clearance: z.number().finite().min(0).max(100)
});
export type Strip = z.infer<typeof stripSchema>;

/** How wide the cloth lies on the table, margins excluded: where its last zone ends. Open cloth lies as wide as it is usable. */
export function laidWidth(strip: Pick<Strip, 'spread'>): number {
  return strip.spread[strip.spread.length - 1]!.to;
}

/** Which side of the cloth looks up: that of the top ply nearest to y = 0. */
export function sideUp(strip: Strip): 'right' | 'wrong' {
  return strip.spread[0]!.layers[0]!.sideUp;
}

/** Open cloth, one ply, over the whole usable width. */
export function openSpread(usableWidth: number, side: 'right' | 'wrong' = 'right'): Zone[] {
  return [{ from: 0, to: usableWidth, layers: [{ sideUp: side, nap: 'along' }], fold: 'none' }];
}
