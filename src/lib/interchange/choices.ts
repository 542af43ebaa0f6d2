import { z } from 'zod';
import {
  clothRoles,
  cornerTreatments,
  hands,
  pointSchema,
  turnSets,
  type ClothRole
} from '$lib/pattern/panel';
import { boxOf, distance, flatten, nearestOnPolyline, signedArea } from './path-measure';
import { angleBetween, cornersOf, edgesAt, straightness } from './edges';
import type { Reading, ReadOutline } from './reading';
import type { Point } from '$lib/geometry/point';
import type { Degrees } from '$lib/units/measure';

/* What the person says of each outline of an import. Places are those of the reading, before the scale check. */

export const innerUses = ['sew', 'cutOut', 'internal', 'drill', 'leaveOut'] as const;
export type InnerUse = (typeof innerUses)[number];

const position = z.number().finite().min(0).max(10_000);
const millimetres = z.number().finite().min(0).max(300);

export const panelChoiceSchema = z.object({
  outline: z.string().min(1).max(64),
  take: z.boolean(),
  name: z.string().trim().max(80),
  /** No default: the person must choose. */
  drawn: z.enum(['sew', 'cut']).nullable(),
  /** For all edges but the exceptions. */
  allowance: millimetres,
  treatment: z.enum(cornerTreatments),
  /** By the corner that the edge starts at; null leaves what holds for all. */
  exceptions: z
    .array(
      z.object({
        at: position,
        allowance: millimetres.nullable(),
        role: z.enum(['seam', 'hem', 'opening']).nullable(),
        treatment: z.enum(cornerTreatments).nullable()
      })
    )
    .max(500),
  corners: z.array(position).min(1).max(500),
  howMany: z.int().min(1).max(200),
  paired: z.boolean(),
  hand: z.enum(hands),
  symmetric: z.boolean(),
  /** The corner that the edge on the fold starts at. */
  fold: position.nullable(),
  role: z.enum(clothRoles),
  turns: z.enum(turnSets),
  grainTolerance: z.number().finite().min(0).max(45),
  grain: z.object({ from: pointSchema, to: pointSchema, confirmed: z.boolean() }),
  /** What each outline inside this one is. */
  inner: z.record(z.string(), z.enum(innerUses)),
  note: z.string().max(500)
});
export type PanelChoice = z.infer<typeof panelChoiceSchema>;

export const importChoicesSchema = z.object({
  /** What the scale check found: true length ÷ length in the reading. */
  scale: z.number().finite().min(0.0001).max(10_000),
  panels: z.array(panelChoiceSchema).max(300)
});
export type ImportChoices = z.infer<typeof importChoicesSchema>;

/** 1 cm: general in the trade (D. C. Lo, Pattern Cutting, 2011, p. 107). */
const USUAL_ALLOWANCE = 10;

/** Every outline inside another one, directly or further in, smallest last. */
export function innerOf(reading: Reading, outline: string): ReadOutline[] {
  const parents = new Map(reading.outlines.map(({ id, inside }) => [id, inside]));
  const isWithin = (id: string): boolean => {
    let up = parents.get(id) ?? null;
    for (let steps = 0; up !== null && steps < 100; steps += 1) {
      if (up === outline) return true;
      up = parents.get(up) ?? null;
    }
    return false;
  };
  return reading.outlines.filter(({ id }) => isWithin(id)).sort((a, b) => b.area - a.area);
}

/** What an inner outline most likely is: what the file says, else by its size. */
export function likelyUse(inner: ReadOutline, outer: ReadOutline): InnerUse {
  if (inner.meaning === 'sew') return 'sew';
  if (inner.meaning === 'cutOut') return 'cutOut';
  if (inner.meaning === 'internal') return 'internal';
  if (inner.area < 30) return 'drill';
  return inner.area > outer.area * 0.6 ? 'sew' : 'cutOut';
}

const ROLE_WORDS: Readonly<Record<string, ClothRole>> = {
  lining: 'lining',
  interlining: 'interlining',
  interfacing: 'interlining',
  contrast: 'contrast',
  toile: 'toile'
};

/** A grain line for an outline: the one found, else a guess that must be confirmed. */
export function likelyGrain(reading: Reading, outline: ReadOutline): PanelChoice['grain'] {
  const found = reading.grains.find((grain) => grain.outline === outline.id);
  if (found) return { from: found.from, to: found.to, confirmed: true };
  const straight = edgesAt(outline.path, cornersOf(outline.path, outline.turnPoints))
    .map((edge) => ({ edge, line: straightness(edge) }))
    .filter(({ line }) => line !== null)
    .sort((a, b) => b.line!.length - a.line!.length);
  const { box } = outline;
  const [width, height] = [box.maxX - box.minX, box.maxY - box.minY];
  const longer = Math.max(width, height);
  // The longest straight edge, when it is long enough to mean something and nearly upright or level.
  const along = straight.find(
    ({ line }) =>
      line!.length > 0.35 * longer &&
      Math.min(angleBetween(line!.angle, 0), angleBetween(line!.angle, 90)) < 3
  );
  const angle = along ? along.line!.angle : width > height ? 0 : 90;
  return { ...grainThrough(outline, angle), confirmed: false };
}

/** A line of `angle` through the middle of an outline, half as long as the outline is large. */
export function grainThrough(outline: Pick<ReadOutline, 'box'>, angle: Degrees): { from: Point; to: Point } {
  const { box } = outline;
  const [cx, cy] = [(box.minX + box.maxX) / 2, (box.minY + box.maxY) / 2];
  const [cos, sin] =
    angle === 0
      ? [1, 0]
      : angle === 90
        ? [0, 1]
        : [Math.cos((angle * Math.PI) / 180), Math.sin((angle * Math.PI) / 180)];
  const reach = 0.3 * (Math.abs(cos) * (box.maxX - box.minX) + Math.abs(sin) * (box.maxY - box.minY));
  const round = (value: number): number => Math.round(value * 1e6) / 1e6;
  return {
    from: { x: round(cx - cos * reach), y: round(cy - sin * reach) },
    to: { x: round(cx + cos * reach), y: round(cy + sin * reach) }
  };
}

/** Whether the mirror image of a polygon over a line of `angle` is the polygon again, within half a millimetre. */
export function isSymmetric(outline: ReadOutline, angle: Degrees): boolean {
  const polygon = flatten(outline.path, 0.2);
  polygon.pop();
  const { box } = outline;
  const radians = (angle * Math.PI) / 180;
  const [ux, uy] = [Math.cos(radians), Math.sin(radians)];
  // The mirror axis runs through the middle of the extent square to the line.
  const across = polygon.map(({ x, y }) => -x * uy + y * ux);
  const middle = (Math.min(...across) + Math.max(...across)) / 2;
  const ring = [...polygon, polygon[0]!];
  const step = Math.max(1, Math.floor(polygon.length / 200));
  for (let i = 0; i < polygon.length; i += step) {
    const p = polygon[i]!;
    const off = 2 * (middle - across[i]!);
    const mirrored = { x: p.x - uy * off, y: p.y + ux * off };
    if (mirrored.x < box.minX - 1 || mirrored.x > box.maxX + 1) return false;
    if (nearestOnPolyline(mirrored, ring).distance > 0.5) return false;
  }
  return true;
}

export function angleOf(line: { from: Point; to: Point }): Degrees {
  return (Math.atan2(line.to.y - line.from.y, line.to.x - line.from.x) * 180) / Math.PI;
}

/** The corner that the likely fold edge starts at: the edge on a mirror line, or the longest straight one on grain. */
function likelyFold(reading: Reading, outline: ReadOutline, choice: PanelChoice): number | null {
  const mirrors = reading.mirrorLines.filter((line) => line.outline === outline.id);
  if (mirrors.length === 0 && !outline.says.onFold) return null;
  const straight = edgesAt(outline.path, choice.corners)
    .map((edge) => ({ edge, line: straightness(edge) }))
    .filter(({ line }) => line !== null)
    .sort((a, b) => b.line!.length - a.line!.length);
  for (const mirror of mirrors) {
    const ends = [mirror.path.from, mirror.path.segments[mirror.path.segments.length - 1]!.to];
    const on = straight.find(({ edge }) =>
      ends.every(
        (end) => nearestOnPolyline(end, flatten({ from: edge.from, segments: edge.segments })).distance < 1
      )
    );
    if (on) return on.edge.at;
  }
  const grain = angleOf(choice.grain);
  return straight.find(({ line }) => angleBetween(line!.angle, grain) < 1)?.edge.at ?? null;
}

/** What is filled in before the person has chosen anything. Whether an outline is sewn or cut is left open. */
export function defaultChoices(reading: Reading): ImportChoices {
  const taken = new Map<string, number>();
  const unique = (name: string): string => {
    const count = (taken.get(name.toLowerCase()) ?? 0) + 1;
    taken.set(name.toLowerCase(), count);
    return count === 1 ? name : `${name.slice(0, 74)} ${count}`;
  };
  return {
    scale: 1,
    panels: reading.outlines
      .filter(({ offered }) => offered)
      .slice(0, 300)
      .map((outline, i) => choiceFor(reading, outline, unique(outline.name || `Panel ${i + 1}`)))
  };
}

function choiceFor(reading: Reading, outline: ReadOutline, name: string): PanelChoice {
  const { says } = outline;
  const grain = likelyGrain(reading, outline);
  const symmetric = isSymmetric(outline, angleOf(grain));
  const howMany = says.howMany ?? 1;
  const choice: PanelChoice = {
    outline: outline.id,
    take: outline.gap === 0 && Math.abs(signedArea(outline.path)) > 100,
    name,
    drawn: null,
    allowance: USUAL_ALLOWANCE,
    treatment: 'square',
    exceptions: [],
    corners: cornersOf(outline.path, outline.turnPoints),
    howMany,
    paired: (says.paired ?? !symmetric) && howMany % 2 === 0,
    hand: /\bleft\b/i.test(name) ? 'left' : 'right',
    symmetric,
    fold: null,
    role: ROLE_WORDS[says.material ?? ''] ?? 'main',
    turns: 'bothWays',
    grainTolerance: 0,
    grain,
    inner: Object.fromEntries(
      innerOf(reading, outline.id).map((inner) => [inner.id, likelyUse(inner, outline)])
    ),
    note: ''
  };
  const fold = likelyFold(reading, outline, choice);
  return fold === null
    ? choice
    : { ...choice, fold, paired: false, symmetric: true, howMany: says.howMany ?? 1 };
}

/** How large an outline is in the reading, in mm. */
export function sizeOf({ box }: Pick<ReadOutline, 'box'>): { width: number; height: number } {
  return { width: box.maxX - box.minX, height: box.maxY - box.minY };
}

/** The ends of the longest thing that a person could measure: for the scale check. */
export function longestStraight(outline: ReadOutline): { from: Point; to: Point; length: number } | null {
  const best = edgesAt(outline.path, cornersOf(outline.path, outline.turnPoints))
    .filter((edge) => straightness(edge) !== null)
    .map((edge) => ({ from: edge.from, to: edge.segments[edge.segments.length - 1]!.to }))
    .map((line) => ({ ...line, length: distance(line.from, line.to) }))
    .sort((a, b) => b.length - a.length)[0];
  return best ?? null;
}

/** The box around several outlines. */
export function boxAround(outlines: readonly Pick<ReadOutline, 'box'>[]) {
  return boxOf(
    outlines.flatMap(({ box }) => [
      { x: box.minX, y: box.minY },
      { x: box.maxX, y: box.maxY }
    ])
  );
}
