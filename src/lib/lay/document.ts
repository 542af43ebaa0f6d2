import { z } from 'zod';
import { stripSchema } from '$lib/cloth/strip';
import { snap } from '$lib/geometry/point';
import { snapTurn } from '$lib/geometry/placement';
import { hands } from '$lib/pattern/panel';

/*
 * The lay document: the one thing that the Lay table edits, the API carries and the database keeps. Readings,
 * findings and what hangs on the Rail are computed from it, never stored as truth.
 */

const id = z.string().min(1).max(64);

/** One garment of an order on this cloth: the third copy of an order line, say. */
export const garmentSchema = z.object({
  id,
  orderItem: id,
  styleVersion: id,
  /** What the cutter reads: 'Ada bodice 38 · 2'. */
  label: z.string().max(120)
});
export type Garment = z.infer<typeof garmentSchema>;

/** `either`: the piece is its own mirror image, or the cloth has both sides alike and the panel is no pair. */
export const needHands = [...hands, 'either'] as const;
export type NeedHand = (typeof needHands)[number];

/** Pieces that the order still asks of this cloth. */
export const needSchema = z.object({
  garment: id,
  panel: id,
  hand: z.enum(needHands),
  count: z.int().min(1).max(1000)
});
export type Need = z.infer<typeof needSchema>;

const coordinate = z.number().finite().min(-1e6).max(1e6).transform(snap);

export const layPlacementSchema = z.object({
  id,
  panel: id,
  garment: id,
  x: coordinate,
  y: coordinate,
  turn: z.number().finite().transform(snapTurn),
  flip: z.boolean(),
  locked: z.boolean()
});
export type LayPlacement = z.infer<typeof layPlacementSchema>;

export const layRulesSchema = z.object({
  /** What an overlap, an off-grain angle and a mismatch may be is the panel's and the cloth's; these are the lay's own. */
  matchGroups: z
    .array(
      z.object({
        id,
        /**
         * false: all points fall on the same place of the repeat, so that the pattern runs on across the seam (centre fronts, a pocket on
         * its front). true: flipped pieces show the repeat mirrored, as the two sleeves of a pair do.
         */
        mirrored: z.boolean(),
        /** Match points that must fall on the same place of the repeat. */
        points: z.array(z.object({ garment: id, panel: id, point: id })).max(50)
      })
    )
    .max(100),
  matchTolerance: z.number().finite().min(0).max(50),
  /** Panels that may lie over a flaw, because nobody will see it there: a facing, a pocket bag. */
  mayCoverFlaws: z.array(z.object({ styleVersion: id, panel: id })).max(500)
});

export const LAY_SCHEMA = 3;
export const layDocumentSchema = z.object({
  schema: z.literal(LAY_SCHEMA),
  strip: stripSchema,
  garments: z.array(garmentSchema).max(500),
  needs: z.array(needSchema).max(5000),
  placements: z.array(layPlacementSchema).max(5000),
  rules: layRulesSchema
});
export type LayDocument = z.infer<typeof layDocumentSchema>;
