import { z } from 'zod';
import { measurementPoints, type Body, type PointId } from '$lib/drafting/measurement-points';
import { doubts } from '$lib/drafting/plausibility';
import { parseLength, type LengthUnit } from '$lib/units/length';
import { line } from './forms';
import { bodyOf, type Measured, type MeasurementSetInput } from './measurement-sets';

/*
 * The form of a set of measurements: for each point `bust`, where they differ `armLength.left` and `armLength.right`, and for girths
 * a second reading `bust.second`. Doubts are told at their fields once; sent again with `sure` they are taken as they are, refusals never.
 */

const head = z.looseObject({
  takenOn: z
    .string({ error: 'When were they taken?' })
    .trim()
    .regex(/^\d{4}-\d{2}-\d{2}$/, 'A day is written like 2026-05-31.')
    .refine((text) => {
      const date = new Date(`${text}T00:00:00Z`);
      return !Number.isNaN(date.valueOf()) && date.toISOString().startsWith(text);
    }, 'There is no such day.'),
  takenBy: line('Who took them?', 80),
  posture: z.string().trim().max(1000, 'At most 1000 characters, please.').default(''),
  worn: z.string().trim().max(200, 'At most 200 characters, please.').default('')
});

export type ReadMeasurements =
  | { readonly ok: true; readonly set: MeasurementSetInput }
  | { readonly ok: false; readonly errors: Record<string, string>; readonly onlyDoubts: boolean };

export function readMeasurements(
  values: Readonly<Record<string, string>>,
  unit: LengthUnit
): ReadMeasurements {
  const errors: Record<string, string> = {};
  const parsed = head.safeParse(values);
  if (!parsed.success)
    for (const issue of parsed.error.issues) errors[String(issue.path[0] ?? '')] ??= issue.message;
  const measured: Measured[] = [];
  const second: Partial<Record<PointId, number>> = {};
  const lengthAt = (name: string): { mm: number; typed: string } | null => {
    const typed = (values[name] ?? '').trim();
    if (typed === '') return null;
    const reading = parseLength(typed, unit, { least: 1, most: 3000 });
    if (reading.error !== undefined) {
      errors[name] = reading.error;
      return null;
    }
    return { mm: reading.mm, typed };
  };
  for (const { id, kind, sided } of measurementPoints) {
    const again = kind === 'girth' ? lengthAt(`${id}.second`) : null;
    if (again) second[id] = again.mm;
    for (const side of ['both', 'left', 'right'] as const) {
      if (side !== 'both' && !sided) continue;
      const value = lengthAt(side === 'both' ? id : `${id}.${side}`);
      if (value) measured.push({ point: id, side, ...value, second: side === 'both' ? again : null });
    }
    if (again && !measured.some(({ point, side }) => point === id && side === 'both'))
      errors[`${id}.second`] ??= 'The first reading is missing.';
  }
  if (measured.length === 0) errors[''] ??= 'Not one measurement is given.';
  const plain = Object.keys(errors).length === 0;
  const found = doubts({ ...bodyOf(measured), ...firstReadings(measured) }, second);
  for (const { point, weight, message } of found)
    if (weight === 'refused' || values.sure !== 'yes') errors[point] ??= message;
  if (Object.keys(errors).length > 0 || !parsed.success)
    return { ok: false, errors, onlyDoubts: plain && found.every(({ weight }) => weight === 'look') };
  const { takenOn, takenBy, posture, worn } = parsed.data;
  return { ok: true, set: { takenOn, takenBy, posture, worn, measured } };
}

/** First readings, so that a doubt compares the two as they were read. */
const firstReadings = (measured: readonly Measured[]): Body =>
  Object.fromEntries(measured.filter(({ second }) => second).map(({ point, mm }) => [point, mm]));
