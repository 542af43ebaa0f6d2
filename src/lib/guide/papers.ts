import type { Millimetres } from '$lib/units/measure';

/*
 * Papers that a guide can be printed on. Sizes are exact: the A series after ISO 216, the others in whole or half
 * inches (ASME Y14.1 calls Letter 'A' and Tabloid 'B').
 */

const INCH = 25.4;

/** Units of a PDF page in one millimetre: a unit is 1/72 inch. */
export const UNITS_PER_MM = 72 / INCH;

/** The longest side that a PDF page may have everywhere: 14,400 units, 200 inches. */
export const LONGEST_SIDE: Millimetres = 200 * INCH;

/** The shortest side that still holds the bands with their check of 100 mm and their words. */
export const SHORTEST_SIDE: Millimetres = 200;

export const paperNames = [
  'A4',
  'A3',
  'A2',
  'A1',
  'A0',
  'Letter',
  'Tabloid',
  'ASME C',
  'ASME D',
  'ASME E',
  'Roll 36 in'
] as const;
export type PaperName = (typeof paperNames)[number];

/** A sheet upright: width ≤ height. A roll has the height null: it is cut off as long as needed. */
export interface Paper {
  readonly name: string;
  readonly width: Millimetres;
  readonly height: Millimetres | null;
}

/** The sizes by name, upright. */
export const papers: Readonly<Record<PaperName, Paper>> = {
  A4: { name: 'A4', width: 210, height: 297 },
  A3: { name: 'A3', width: 297, height: 420 },
  A2: { name: 'A2', width: 420, height: 594 },
  A1: { name: 'A1', width: 594, height: 841 },
  A0: { name: 'A0', width: 841, height: 1189 },
  Letter: { name: 'Letter', width: 8.5 * INCH, height: 11 * INCH },
  Tabloid: { name: 'Tabloid', width: 11 * INCH, height: 17 * INCH },
  'ASME C': { name: 'ASME C', width: 17 * INCH, height: 22 * INCH },
  'ASME D': { name: 'ASME D', width: 22 * INCH, height: 34 * INCH },
  'ASME E': { name: 'ASME E', width: 34 * INCH, height: 44 * INCH },
  'Roll 36 in': { name: 'Roll 36 in', width: 36 * INCH, height: null }
};

/** A paper of any size, upright. */
export function customPaper(width: Millimetres, height: Millimetres): Paper {
  return {
    name: `${width} × ${height} mm`,
    width: Math.min(width, height),
    height: Math.max(width, height)
  };
}
