import Papa from 'papaparse';
import { z } from 'zod';
import { pointIds, pointOf, type Body, type PointId } from '$lib/drafting/measurement-points';
import { doubts } from '$lib/drafting/plausibility';
import type { SizeTable } from '$lib/drafting/size-tables';
import { MM_PER, parseLength, type LengthUnit } from '$lib/units/length';
import { database } from './database';
import { newId } from './ids';
import { notFound, Problem } from './problem';
import type { Scope } from './scope';

/*
 * The studio's own size tables, in and out as CSV: a row per measurement point, a column per size.
 */

const sizesSchema = z.object({
  schema: z.literal(1),
  sizes: z
    .array(
      z.object({
        size: z.string().min(1).max(20),
        body: z.partialRecord(z.enum(pointIds), z.number().finite().positive())
      })
    )
    .min(1)
    .max(40)
});

/** The studio's own tables, as the published ones look. */
export async function list(scope: Scope): Promise<SizeTable[]> {
  const rows = await database()('size_charts')
    .where({ studio_id: scope.studio })
    .orderBy('name')
    .select<{ id: string; name: string; sizes: string }[]>('id', 'name', 'sizes');
  return rows.map(({ id, name, sizes }) => ({
    id,
    name,
    source: 'Made by the studio',
    mark: 'the studio’s own' as const,
    sizes: sizesSchema.parse(JSON.parse(sizes)).sizes as SizeTable['sizes'],
    filled: []
  }));
}

export async function create(
  scope: Scope,
  name: string,
  sizes: SizeTable['sizes'],
  now = Date.now()
): Promise<string> {
  const id = newId(now);
  await database()('size_charts').insert({
    id,
    studio_id: scope.studio,
    name,
    sizes: JSON.stringify(sizesSchema.parse({ schema: 1, sizes })),
    created_at: now,
    updated_at: now
  });
  return id;
}

export async function remove(scope: Scope, id: string): Promise<void> {
  if ((await database()('size_charts').where({ studio_id: scope.studio, id }).delete()) === 0)
    throw notFound('size table');
}

/** A table as CSV: 'point, unit, size, size …'; lengths in the studio's unit. */
export function toCsv(table: SizeTable, unit: LengthUnit): string {
  const points = pointIds.filter((id) => table.sizes.some(({ body }) => body[id] !== undefined));
  const cell = (mm: number | undefined) =>
    mm === undefined ? '' : String(Math.round((mm / MM_PER[unit]) * 1000) / 1000);
  return Papa.unparse(
    [
      ['point', 'unit', ...table.sizes.map(({ size }) => size)],
      ...points.map((id) => [id, unit, ...table.sizes.map(({ body }) => cell(body[id]))])
    ],
    { escapeFormulae: true }
  );
}

const MOST_BYTES = 200_000;

/**
 * The sizes of a CSV. Points by id or label, lengths with or without a unit of their own. @throws Problem 400 naming row and column of what
 * can't be read.
 */
export function readCsv(text: string): SizeTable['sizes'] {
  if (text.length > MOST_BYTES) throw wrong('The file is larger than 200 kB: a size table is far smaller.');
  const { data, errors } = Papa.parse<string[]>(text.replace(/^\uFEFF/, ''), { skipEmptyLines: 'greedy' });
  const broken = errors.find(({ type }) => type === 'Quotes');
  if (broken) throw wrong(`Row ${(broken.row ?? 0) + 1}: ${broken.message}.`);
  const [head, ...rows] = data;
  if (!head || head.length < 3 || rows.length === 0)
    throw wrong('Expected a first row “point, unit, size, size …” and a row for each measurement point.');
  const sizes = head.slice(2).map((size) => size.trim());
  const double = sizes.find((size, i) => sizes.indexOf(size) !== i);
  if (sizes.some((size) => size === '')) throw wrong('Row 1: every column needs the name of its size.');
  if (double !== undefined) throw wrong(`Row 1: size ${double} stands there twice.`);
  if (sizes.length > 40) throw wrong(`At most 40 sizes, got ${sizes.length}.`);
  const bodies: Partial<Record<PointId, number>>[] = sizes.map(() => ({}));
  rows.forEach((row, r) => {
    const name = (row[0] ?? '').trim();
    const id = pointIds.find(
      (one) => one === name || pointOf(one).label.toLowerCase() === name.toLowerCase()
    );
    if (!id)
      throw wrong(
        `Row ${r + 2}: “${name.slice(0, 40)}” is no measurement point. Known: ${pointIds.join(', ')}.`
      );
    const unit = (row[1] ?? '').trim() || 'cm';
    if (unit !== 'cm' && unit !== 'in')
      throw wrong(`Row ${r + 2}, column 2: the unit is cm or in, got “${unit.slice(0, 20)}”.`);
    sizes.forEach((size, c) => {
      const cell = (row[c + 2] ?? '').trim();
      if (cell === '') return;
      const reading = parseLength(cell, unit, { least: 1, most: 3000 });
      if (reading.error !== undefined) throw wrong(`Row ${r + 2}, size ${size}: ${reading.error}`);
      bodies[c]![id] = reading.mm;
    });
  });
  const read = sizes.map((size, i) => ({ size, body: bodies[i] as Body }));
  for (const { size, body } of read) {
    if (Object.keys(body).length === 0) throw wrong(`Size ${size} has no measurement at all.`);
    const refused = doubts(body).find(({ weight }) => weight === 'refused');
    if (refused) throw wrong(`Size ${size}: ${refused.message}`);
  }
  return read;
}

const wrong = (detail: string): Problem =>
  new Problem(400, 'bad-size-table', 'This size table can’t be read', detail, { fields: { file: detail } });
