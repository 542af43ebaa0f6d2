import { existsSync, readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { openSpread } from '$lib/cloth/strip';
import type { Outline } from '$lib/geometry/point';
import { check } from '$lib/lay/check';
import type { LayDocument } from '$lib/lay/document';
import { leastLength } from '$lib/lay/least-length';
import { readingsOf } from '$lib/lay/readings';
import { bookOf, lay, panel, placement, strip } from '../unit/lay/workroom';

/*
 * Readings, least length and the check against the open strip packing data of the EURO special interest group on cutting and
 * packing (ESICUP/datasets, 2d_irregular, CC0 1.0; gardeyn0 and gardeyn2 derive from Lallier et al. 2022, CC BY 4.0) and the
 * densities of Gardeyn, Vanden Berghe & Wauters 2025, arXiv 2509.13329, tables 2 and 3. The data are read from beside the
 * project; without them these tests are skipped.
 */

const folder = new URL('../../../shared/data/strip-packing/', import.meta.url);
const absent = !existsSync(folder);
if (absent) console.log('The open strip packing data are not beside the project: skipped.');

interface Instance {
  readonly stripWidth: number;
  readonly pieces: readonly {
    readonly id: string;
    readonly quantity: number;
    readonly rotations: readonly number[];
    readonly outline: readonly (readonly [number, number])[];
  }[];
}
interface Published {
  readonly totalArea: number;
  readonly stripWidth: number;
  readonly lengthLowerBound: number;
  readonly bestKnown: { readonly density: number; readonly src: string; readonly impliedLength: number };
}

const read = <T>(name: string): T => JSON.parse(readFileSync(new URL(name, folder), 'utf8')) as T;
/** What is published of the instances whose outlines are there. */
const published = absent
  ? {}
  : Object.fromEntries(
      Object.entries(read<{ instances: Record<string, Published> }>('published.json').instances).filter(
        ([name]) => existsSync(new URL(`${name}.json`, folder))
      )
    );

/** Lengths of the data in millimetres: widths of 38 to 20,000 units become 380 to 10,000 mm. */
const scaleOf = ({ stripWidth }: Instance): number =>
  stripWidth < 1000 ? 10 : stripWidth > 10_000 ? 0.5 : 1;

/** The instance with everything on the Rail. A piece of four turns is free here: no bound is greater for that. */
function bare(instance: Instance): { document: LayDocument; book: ReturnType<typeof bookOf> } {
  const scale = scaleOf(instance);
  const book = bookOf(
    ...instance.pieces.map(({ id, quantity, rotations, outline }) => {
      const cut: Outline = outline.map(([x, y]) => ({ x: x * scale, y: y * scale }));
      const turns = rotations.length === 1 ? 'oneWay' : rotations.length === 2 ? 'bothWays' : 'free';
      return panel(`p${id}`, cut, { howMany: quantity, turns });
    })
  );
  const width = instance.stripWidth * scale;
  const cloth = strip({ usableWidth: width, fullWidth: width, spread: openSpread(width), clearance: 0 });
  return { document: lay(book, [], cloth), book };
}

describe.skipIf(absent)('open strip packing data', () => {
  test.each(Object.keys(published))('%s: counts, area and least length fit what is published', (name) => {
    const instance = read<Instance>(`${name}.json`);
    const { totalArea, stripWidth, lengthLowerBound, bestKnown } = published[name]!;
    const { document, book } = bare(instance);
    const scale = scaleOf(instance);
    expect(stripWidth).toBe(instance.stripWidth);

    const pieces = instance.pieces.reduce((sum, { quantity }) => sum + quantity, 0);
    expect(readingsOf(document, book).pieces).toEqual({ needed: pieces, placed: 0, loose: pieces });

    // Everything on one heap: the area is that of all pieces, wherever they lie.
    const heap = {
      ...document,
      placements: instance.pieces.flatMap(({ id, quantity }) =>
        Array.from({ length: quantity }, (_, k) => placement(`${id}-${k}`, `p${id}`))
      )
    };
    const readings = readingsOf(heap, book);
    expect(readings.pieces.loose).toBe(0);
    expect(readings.area / scale ** 2 / totalArea).toBeCloseTo(1, 6);

    // No less than the published area bound, no more than the best lay that anybody found (on a strip up to 0.01 % wider).
    const least = leastLength(document, book).length / scale;
    expect(least).toBeGreaterThanOrEqual(lengthLowerBound - 0.001);
    expect(least).toBeLessThanOrEqual(bestKnown.impliedLength * 1.0002);
    // density = area ÷ (width × length), as efficiency is.
    expect((totalArea / (stripWidth * bestKnown.impliedLength)) * 100).toBeCloseTo(bestKnown.density, 1);
  });

  test('the lay of dighe1 without any waste passes the check, at an efficiency of one and its least length', () => {
    const instance = read<Instance>('dighe1.json');
    const optimal = read<{
      placements: readonly { id: string; rotation: number; translate: readonly [number, number] }[];
    }>('dighe1-optimal.json');
    const { document, book } = bare(instance);
    const scale = scaleOf(instance);
    const { findings, readings } = check(
      {
        ...document,
        placements: optimal.placements.map(({ id, rotation, translate: [x, y] }) =>
          placement(id, `p${id}`, { x: x * scale, y: y * scale, turn: rotation })
        )
      },
      book
    );
    expect(findings).toEqual([]);
    expect(readings.efficiency).toBeCloseTo(1, 9);
    expect(readings.lengthUsed).toBe(100 * scale);
    expect(readings.leastLength.length).toBeCloseTo(100 * scale, 3);
  });
});
