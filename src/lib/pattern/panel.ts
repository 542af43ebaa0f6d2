import { z } from 'zod';

/*
 * A panel: one outline of a style, drawn once, as stored in a style version. Millimetres; y points up, so that a
 * counter-clockwise outline is positive. The drawing shows the panel with the right side of the cloth towards
 * the viewer.
 */

const coordinate = z.number().finite().min(-1e6).max(1e6);
export const pointSchema = z.object({ x: coordinate, y: coordinate });

const id = z.string().min(1).max(64);
const text = z.string().max(200);

/** A stretch of a path from the end of the one before it: straight, or a cubic Bézier curve. */
export const segmentSchema = z.discriminatedUnion('kind', [
  z.object({ kind: z.literal('line'), to: pointSchema }),
  z.object({ kind: z.literal('cubic'), c1: pointSchema, c2: pointSchema, to: pointSchema })
]);
export type Segment = z.infer<typeof segmentSchema>;

/** An open or closed path. A closed one ends where it starts. */
export const pathSchema = z.object({ from: pointSchema, segments: z.array(segmentSchema).min(1).max(5000) });
export type Path = z.infer<typeof pathSchema>;

/**
 * One edge of the outline, from its corner to the corner of the next edge. `allowance` is the seam allowance
 * outside the sew line (0 on a fold). On a panel drawn as a cut line it says how far inside the sew line runs and
 * changes nothing that is cut.
 */
export const edgeSchema = z.object({
  id,
  from: pointSchema,
  segments: z.array(segmentSchema).min(1).max(5000),
  allowance: z.number().finite().min(0).max(300),
  role: z.enum(['seam', 'hem', 'opening', 'fold'])
});
export type Edge = z.infer<typeof edgeSchema>;

/** How the allowances of two edges meet at the corner where an edge starts. */
export const cornerTreatments = ['square', 'mitred', 'mirrored', 'blunt'] as const;
export const cornerSchema = z.object({ id, treatment: z.enum(cornerTreatments) });
export type Corner = z.infer<typeof cornerSchema>;

/** A notch at `distance` along the sew line of an edge. */
export const notchSchema = z.object({
  id,
  edge: id,
  distance: z.number().finite().min(0),
  outward: z.boolean(),
  count: z.int().min(1).max(3)
});
export type Notch = z.infer<typeof notchSchema>;

export const drillHoleSchema = z.object({ id, at: pointSchema, note: text });
export const internalLineSchema = z.object({ id, path: pathSchema, note: text });

/** The grain line. `confirmed` is false while it is a guess of the import: such a panel can't be released. */
export const grainSchema = z.object({ from: pointSchema, to: pointSchema, confirmed: z.boolean() });

/** A place of the sew line that must fall on a chosen place of the cloth's repeat. */
export const matchPointSchema = z.object({ id, name: text, edge: id, distance: z.number().finite().min(0) });

/**
 * Which turns against the warp a panel allows. Napped cloth narrows `bothWays` to one way at the lay.
 * across = weft along the grain line, bias = 45° either way.
 */
export const turnSets = ['bothWays', 'oneWay', 'across', 'bias', 'free'] as const;
export type TurnSet = (typeof turnSets)[number];

export const clothRoles = ['main', 'lining', 'interlining', 'contrast', 'toile'] as const;
export type ClothRole = (typeof clothRoles)[number];

export const hands = ['left', 'right'] as const;
/** Which hand of the body a piece belongs to. */
export type Hand = (typeof hands)[number];

export const panelSchema = z
  .object({
    id,
    name: z.string().trim().min(1).max(80),
    /** Whether the outline is the sew line (allowances are added outside it) or the cut line (laid untouched). */
    drawn: z.enum(['sew', 'cut']),
    /** In order around the outline, counter-clockwise. Edge i starts at corner i. */
    edges: z.array(edgeSchema).min(1).max(500),
    corners: z.array(cornerSchema).min(1).max(500),
    /** Closed paths inside that are cut out. */
    cutOuts: z.array(pathSchema).max(50),
    notches: z.array(notchSchema).max(500),
    drillHoles: z.array(drillHoleSchema).max(500),
    internalLines: z.array(internalLineSchema).max(500),
    grain: grainSchema,
    matchPoints: z.array(matchPointSchema).max(100),
    /** Pieces per garment. A pair counts two: half left, half right. */
    howMany: z.int().min(1).max(200),
    /** Whether the pieces are left and right in pairs; then `howMany` is even. */
    paired: z.boolean(),
    /** The hand of the piece as drawn, right side of the cloth towards the viewer. */
    hand: z.enum(hands),
    /**
     * Whether a mirrored copy is the same piece: then a flip is free. Always so for a panel on the fold.
     */
    symmetric: z.boolean(),
    /** The straight edge on grain that lies on the fold: no allowance, not cut; the piece is mirrored over it. */
    fold: id.nullable(),
    role: z.enum(clothRoles),
    turns: z.enum(turnSets),
    /** How far off its allowed turns a piece may lie, degrees either way. */
    grainTolerance: z.number().finite().min(0).max(45),
    note: z.string().max(500)
  })
  .superRefine((panel, context) => {
    if (panel.corners.length !== panel.edges.length)
      context.addIssue({
        code: 'custom',
        path: ['corners'],
        message: `${panel.edges.length} edges need ${panel.edges.length} corners, got ${panel.corners.length}`
      });
    if (panel.paired && panel.howMany % 2 !== 0)
      context.addIssue({
        code: 'custom',
        path: ['howMany'],
        message: `A pair is an even count, half left, half right; got ${panel.howMany}`
      });
    const edges = new Set(panel.edges.map((edge) => edge.id));
    if (edges.size !== panel.edges.length)
      context.addIssue({ code: 'custom', path: ['edges'], message: 'Two edges have the same id' });
    panel.edges.forEach((edge, i) => {
      const end = edge.segments[edge.segments.length - 1]!.to;
      const next = panel.edges[(i + 1) % panel.edges.length]!.from;
      if (Math.hypot(end.x - next.x, end.y - next.y) > 0.001)
        context.addIssue({
          code: 'custom',
          path: ['edges', i],
          message: `Edge ${edge.id} ends at (${end.x}, ${end.y}), the next one starts at (${next.x}, ${next.y})`
        });
    });
    for (const [list, items] of [
      ['notches', panel.notches],
      ['matchPoints', panel.matchPoints]
    ] as const)
      items.forEach((item, i) => {
        if (!edges.has(item.edge))
          context.addIssue({ code: 'custom', path: [list, i, 'edge'], message: `No edge ${item.edge}` });
      });
    if (panel.fold !== null) {
      const fold = panel.edges.find((edge) => edge.id === panel.fold);
      if (!fold) context.addIssue({ code: 'custom', path: ['fold'], message: `No edge ${panel.fold}` });
      else if (fold.allowance !== 0)
        context.addIssue({
          code: 'custom',
          path: ['fold'],
          message: 'An edge on the fold takes no allowance'
        });
      if (panel.paired || !panel.symmetric)
        context.addIssue({
          code: 'custom',
          path: ['fold'],
          message: 'A panel on the fold is one whole, symmetric piece, not a pair'
        });
    }
  });
export type Panel = z.infer<typeof panelSchema>;

/** The panels of one version of a style, as stored. */
export const PANEL_SET_SCHEMA = 1;
export const panelSetSchema = z.object({
  schema: z.literal(PANEL_SET_SCHEMA),
  panels: z.array(panelSchema).min(1).max(300)
});
export type PanelSet = z.infer<typeof panelSetSchema>;
