import { z } from 'zod';
import { pathSchema, pointSchema } from '$lib/pattern/panel';

/*
 * What a file was read as, before the person has said what it means. Millimetres at the scale that the file gives,
 * y points up. The stored form of an import.
 */

const text = z.string().max(300);
const id = z.string().min(1).max(64);

export const severities = ['stops', 'warns', 'tells'] as const;
export const importFindingSchema = z.object({
  /** Stable: `not-closed`, `crosses-itself`, `unsupported` … */
  kind: z.string(),
  /** stops: this outline can't become a panel. warns: look at it. tells: good to know. */
  severity: z.enum(severities),
  place: pointSchema.nullable(),
  /** The outline or line that it is about. */
  about: id.nullable(),
  /** A length, area or count, as the kind has it. */
  measure: z.number().nullable(),
  message: z.string()
});
export type ImportFinding = z.infer<typeof importFindingSchema>;

/** What the file itself says that a line is; `plain` when it says nothing. */
export const meanings = [
  'plain',
  'boundary',
  'sew',
  'cutOut',
  'internal',
  'grain',
  'mirror',
  'notch',
  'drill',
  'reference'
] as const;
export type Meaning = (typeof meanings)[number];

const boxSchema = z.object({ minX: z.number(), minY: z.number(), maxX: z.number(), maxY: z.number() });

export const readOutlineSchema = z.object({
  id,
  name: text,
  /** Closed and counter-clockwise: the last segment ends where the first starts. */
  path: pathSchema,
  box: boxSchema,
  area: z.number(),
  /** The smallest outline around this one. */
  inside: id.nullable(),
  layer: text,
  /** The DXF block or SVG group that it stands in. */
  group: text,
  meaning: z.enum(meanings),
  /** How far apart its ends were; 0 when they met. */
  gap: z.number(),
  /** Points that the file marks as corners (layer 2 of pattern files). */
  turnPoints: z.array(pointSchema),
  /** Counted among the panels unless the person leaves it out. */
  offered: z.boolean(),
  /** What the texts beside it say. */
  says: z.object({
    howMany: z.number().int().nullable(),
    paired: z.boolean().nullable(),
    onFold: z.boolean(),
    material: text.nullable()
  })
});
export type ReadOutline = z.infer<typeof readOutlineSchema>;

export const readLineSchema = z.object({
  id,
  name: text,
  path: pathSchema,
  layer: text,
  group: text,
  meaning: z.enum(meanings),
  /** The smallest outline around its middle. */
  outline: id.nullable()
});
export type ReadLine = z.infer<typeof readLineSchema>;

export const readGrainSchema = z.object({
  id,
  from: pointSchema,
  to: pointSchema,
  outline: id.nullable(),
  /** layer: the file's layer says so; name: its name says so; arrow: it is drawn as an arrow. */
  source: z.enum(['layer', 'name', 'arrow'])
});
export type ReadGrain = z.infer<typeof readGrainSchema>;

export const readMarkSchema = z.object({ id, at: pointSchema, outline: id.nullable(), note: text });
export const readTextSchema = z.object({
  text,
  at: pointSchema,
  layer: text,
  group: text,
  outline: id.nullable()
});
export type ReadText = z.infer<typeof readTextSchema>;

export const READING_SCHEMA = 1;
export const readingSchema = z.object({
  schema: z.literal(READING_SCHEMA),
  format: z.enum(['svg', 'dxf']),
  /** A name that the file gives to the whole: the style. */
  title: text,
  units: z.object({
    /** Whether the file says what its numbers mean; otherwise a guess that the scale check must confirm. */
    known: z.boolean(),
    unit: text,
    /** Millimetres per unit of the file. */
    scale: z.number().positive(),
    /** Where that was found, in words. */
    source: text
  }),
  outlines: z.array(readOutlineSchema),
  openLines: z.array(readLineSchema),
  grains: z.array(readGrainSchema),
  notches: z.array(readMarkSchema),
  drillHoles: z.array(readMarkSchema),
  mirrorLines: z.array(readLineSchema),
  texts: z.array(readTextSchema),
  /** The blocks of a DXF file or groups of an SVG that hold outlines, with the fields that their texts give. */
  groups: z.array(z.object({ name: text, fields: z.record(z.string(), text) })),
  findings: z.array(importFindingSchema)
});
export type Reading = z.infer<typeof readingSchema>;
