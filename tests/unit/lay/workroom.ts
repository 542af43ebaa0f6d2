import fc from 'fast-check';
import { noShrinkage } from '$lib/cloth/shrinkage';
import { noSplices } from '$lib/cloth/what-to-buy';
import { openSpread, type Strip } from '$lib/cloth/strip';
import { snapPoint, type Outline, type Point } from '$lib/geometry/point';
import type { Garment, LayDocument, LayPlacement } from '$lib/lay/document';
import { needsOf } from '$lib/lay/needs';
import { panelKey, type LayPanel, type PanelBook } from '$lib/lay/panel-book';

/*
 * Invented pieces, cloth and lays for the tests of the lay.
 */

/** Open cloth, right side up, right and wrong side, no nap, nothing rounded away. */
export function strip(changes: Partial<Strip> = {}): Strip {
  const usableWidth = changes.usableWidth ?? 1000;
  return {
    spread: openSpread(usableWidth),
    usableWidth,
    fullWidth: usableWidth + 20,
    length: null,
    nap: 'none',
    sidesAlike: false,
    repeat: { along: null, across: null },
    flaws: [],
    given: null,
    shrinkage: noShrinkage,
    splices: noSplices,
    wholeRepeats: false,
    endAllowance: { start: 20, end: 20 },
    reserve: 0,
    buyStep: 100,
    clearance: 3,
    ...changes
  };
}

const points = (...pairs: [number, number][]): Point[] => pairs.map(([x, y]) => ({ x, y }));

/** A rectangle of `length` along the grain by `width`, its corner at the origin. */
export const rectangle = (length: number, width: number): Point[] =>
  points([0, 0], [length, 0], [length, width], [0, width]);

/** An L without any symmetry: 300 along the grain, 200 across, a bay of 180 × 120 at its far upper corner. */
export const ell: Outline = points([0, 0], [300, 0], [300, 80], [120, 80], [120, 200], [0, 200]);

/** A panel of a style. */
export function panel(
  id: string,
  cut: Outline,
  changes: Partial<Omit<LayPanel, 'shape'>> &
    Partial<Pick<LayPanel['shape'], 'symmetric' | 'hand' | 'cutOuts'>> = {}
): LayPanel {
  const { symmetric = false, hand = 'left', cutOuts = [], ...rules } = changes;
  const middle = {
    x: cut.reduce((sum, p) => sum + p.x, 0) / cut.length,
    y: cut.reduce((sum, p) => sum + p.y, 0) / cut.length
  };
  // The mean of an L lies in its bay; its own corner does not.
  const label = id.startsWith('ell') ? { x: 60, y: 60 } : middle;
  return {
    shape: {
      panel: id,
      name: id[0]!.toUpperCase() + id.slice(1),
      hand,
      symmetric,
      cut,
      sew: cut,
      cutOuts,
      notches: [],
      drillHoles: [],
      internalLines: [],
      grain: { from: label, to: { x: label.x + 50, y: label.y } },
      matchPoints: [],
      label,
      foldLine: null
    },
    role: 'main',
    howMany: 1,
    paired: false,
    turns: 'bothWays',
    grainTolerance: 0,
    grainConfirmed: true,
    ...rules
  };
}

export function bookOf(...panels: LayPanel[]): PanelBook {
  return Object.fromEntries(panels.map((one) => [panelKey('style', one.shape.panel), one]));
}

export function garment(id = 'ada'): Garment {
  return { id, orderItem: 'line', styleVersion: 'style', label: id[0]!.toUpperCase() + id.slice(1) };
}

export function placement(id: string, panelId: string, at: Partial<LayPlacement> = {}): LayPlacement {
  return { id, panel: panelId, garment: 'ada', x: 0, y: 0, turn: 0, flip: false, locked: false, ...at };
}

/** A lay of everything in `book` for one garment (or those given), with these placements. */
export function lay(
  book: PanelBook,
  placements: readonly LayPlacement[],
  cloth: Strip = strip(),
  garments: readonly Garment[] = [garment()]
): LayDocument {
  return {
    schema: 3,
    strip: cloth,
    garments: [...garments],
    needs: needsOf(garments, book, cloth),
    placements: [...placements],
    rules: { matchGroups: [], matchTolerance: 2, mayCoverFlaws: [] }
  };
}

/** A simple outline around the origin, a star as seen from there, with `corners` points on the grid. */
export function star(radii: readonly number[]): Point[] {
  return radii.map((radius, i) => {
    const angle = (2 * Math.PI * i) / radii.length;
    return snapPoint({ x: radius * Math.cos(angle), y: radius * Math.sin(angle) });
  });
}

/** Stars of 5 to 24 corners, 20 to 150 mm out. */
export const stars: fc.Arbitrary<Point[]> = fc
  .array(fc.integer({ min: 20_000, max: 150_000 }), { minLength: 5, maxLength: 24 })
  .map((radii) => star(radii.map((radius) => radius / 1000)));

/** A label point that lies inside every star: the origin. */
export function starPanel(id: string, cut: Outline, changes: Parameters<typeof panel>[2] = {}): LayPanel {
  const made = panel(id, cut, changes);
  return { ...made, shape: { ...made.shape, label: { x: 0, y: 0 } } };
}
