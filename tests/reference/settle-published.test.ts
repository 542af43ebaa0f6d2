import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
// A general geometry library that the product does not use, as an independent judge of overlaps.
import Coordinate from 'jsts/org/locationtech/jts/geom/Coordinate.js';
import GeometryFactory from 'jsts/org/locationtech/jts/geom/GeometryFactory.js';
import OverlayOp from 'jsts/org/locationtech/jts/operation/overlay/OverlayOp.js';
import { describe, expect, it } from 'vitest';
import { placeOutline } from '$lib/geometry/placement';
import type { Outline } from '$lib/geometry/point';
import { createSolver } from '$lib/settle/solver';
import { outlineArea } from '$lib/settle/task';
import { validate } from '$lib/settle/validate';
import { stripProblem, type StripFile } from '../bench/strip-file';

/*
 * Open strip packing instances of the EURO special interest group on cutting and packing (ESICUP, 2d_irregular, CC0), and
 * the densities that papers published for them. Most figures were read in Gardeyn, Vanden Berghe and Wauters 2025
 * (arXiv 2509.13329, tables 2 and 3); those marked M in published.json are from memory of the paper named there.
 */

const folder = path.resolve('../shared/data/strip-packing');
const there = existsSync(folder);
if (!there) console.log(`The open strip packing data are not at ${folder}: their checks are left out.`);

interface Published {
  readonly instances: Record<
    string,
    {
      readonly totalArea: number;
      readonly stripWidth: number;
      readonly lengthLowerBound: number;
      readonly bestKnown: { readonly density: number; readonly src: 'V' | 'M' };
    }
  >;
}
const read = <T>(name: string) => JSON.parse(readFileSync(path.join(folder, name), 'utf8')) as T;
const published = there ? read<Published>('published.json') : { instances: {} };
const names = Object.keys(published.instances).filter((name) =>
  existsSync(path.join(folder, `${name}.json`))
);

const factory = new GeometryFactory();
function polygon(outline: Outline) {
  const ring = [...outline, outline[0]!].map(({ x, y }) => new Coordinate(x, y));
  return factory.createPolygon(factory.createLinearRing(ring));
}

describe.skipIf(!there)('open instances', () => {
  // Number of pieces: the ESICUP descriptions of the data sets (from memory), by which the papers' tables list them.
  const counts: Record<string, number> = {
    albano: 24,
    dagli: 30,
    dighe1: 16,
    fu: 12,
    jakobs1: 25,
    marques: 24,
    shapes0: 43,
    shapes1: 43,
    shirts: 99
  };

  it.each(names)('%s has the published area, width and count', (name) => {
    const problem = stripProblem(read<StripFile>(`${name}.json`));
    const { totalArea, stripWidth, lengthLowerBound } = published.instances[name]!;
    const area = problem.pieces.reduce((sum, piece) => sum + piece.copies * outlineArea(piece.outline), 0);
    expect(area).toBeCloseTo(totalArea, 3);
    expect(problem.width).toBe(stripWidth);
    expect(createSolver(problem, { seed: 1 }).least).toBeGreaterThanOrEqual(lengthLowerBound * (1 - 1e-6));
    expect(problem.pieces.reduce((sum, piece) => sum + piece.copies, 0)).toBe(counts[name]);
  });

  it.each(names)(
    'a short run on %s is overlap-free for another library and no denser than the best published',
    (name) => {
      const problem = stripProblem(read<StripFile>(`${name}.json`));
      const { totalArea, bestKnown } = published.instances[name]!;
      const solver = createSolver(problem, { seed: 1, floor: 0.01 });
      for (let k = 0; k < 8 && !solver.done(); k++) solver.step(25_000, k / 8);
      const result = solver.result();
      expect(result.leftOver).toEqual([]);
      expect(validate(problem, result)).toEqual([]);

      const outlines = result.placements.map((one) =>
        placeOutline(problem.pieces.find(({ id }) => id === one.piece)!.outline, one)
      );
      const polygons = outlines.map(polygon);
      let shared = 0;
      for (let i = 0; i < polygons.length; i++)
        for (let j = 0; j < i; j++) {
          if (!polygons[i]!.getEnvelopeInternal().intersects(polygons[j]!.getEnvelopeInternal())) continue;
          shared += sharedArea(outlines[i]!, outlines[j]!);
        }
      expect(shared / totalArea).toBeLessThan(1e-5);
      const length = Math.max(...outlines.flatMap((outline) => outline.map(({ x }) => x)));
      const density = (100 * totalArea) / (problem.width * length);
      expect(density).toBeCloseTo(100 * result.density, 3);
      // Published densities are rounded to 0.01.
      expect(density).toBeLessThanOrEqual(Math.min(100.0001, bestKnown.density + 0.005));
      expect(density).toBeGreaterThan(0.75 * bestKnown.density);
    }
  );

  it('dighe1, a jigsaw, closes at its published optimum of 100 % (Gomes and Oliveira 2006, from memory)', () => {
    const problem = stripProblem(read<StripFile>('dighe1.json'));
    const lengths = [1, 2, 3].map((seed) => {
      const solver = createSolver(problem, { seed });
      for (let k = 0; k < 400 && !solver.done(); k++) solver.step(20_000, (k % 100) / 100);
      expect(validate(problem, solver.result())).toEqual([]);
      return solver.result().length;
    });
    expect(Math.min(...lengths)).toBeCloseTo(100, 5);
  });

  it('the check accepts the published lay of dighe1 at 100 % and refuses it any shorter', () => {
    const problem = stripProblem(read<StripFile>('dighe1.json'));
    const optimal = read<{ placements: { id: string; rotation: number; translate: [number, number] }[] }>(
      'dighe1-optimal.json'
    );
    const placements = optimal.placements.map(({ id, rotation, translate: [x, y] }) => ({
      piece: id,
      copy: 0,
      x,
      y,
      turn: rotation,
      flip: false
    }));
    const result = { placements, length: 100, density: 1, leftOver: [], evaluations: 0 };
    expect(validate(problem, result)).toEqual([]);
    expect(validate({ ...problem, length: 99.99 }, result).map(({ rule }) => rule)).toContain('outside');
    const squeezed = placements.map((one) => ({ ...one, x: one.x * 0.9999 }));
    expect(validate(problem, { ...result, placements: squeezed }).map(({ rule }) => rule)).toContain(
      'overlap'
    );
  });
});

/** Area that two outlines share; snapped to a fine grid when the library stumbles over borders that touch. */
function sharedArea(a: Outline, b: Outline): number {
  for (const digits of [12, 6, 5, 4]) {
    const rounded = (outline: Outline) =>
      polygon(outline.map(({ x, y }) => ({ x: Number(x.toFixed(digits)), y: Number(y.toFixed(digits)) })));
    try {
      return OverlayOp.intersection(rounded(a), rounded(b)).getArea();
    } catch (error) {
      // The library's own error for borders that nearly coincide; anything else is ours.
      if (!/TopologyException|topology|side location|non-noded/i.test(String(error))) throw error;
    }
  }
  throw new Error('No grid on which the two outlines can be compared');
}
