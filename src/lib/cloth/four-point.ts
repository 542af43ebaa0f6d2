import { MM_PER } from '$lib/units/length';
import type { Millimetres } from '$lib/units/measure';

/*
 * The four-point system of ASTM D5430 for faults of cloth. A fault counts by its longest measure: up to 3 in 1 point, up
 * to 6 in 2, up to 9 in 3, longer 4; a hole up to 1 in 2 points, larger 4. No linear yard counts more than 4 points. The
 * sum is told per 100 square yards or per 100 square metres of cloth.
 */

export type Points = 1 | 2 | 3 | 4;

export interface Fault {
  /** From the cloth's end to its middle, mm. */
  readonly fromEnd: Millimetres;
  /** Its longest measure, mm. */
  readonly size: Millimetres;
  readonly hole: boolean;
}

const INCH = MM_PER.in;
/** Sizes typed in millimetres are inches rounded: 76 mm is 3 in. */
const ROUNDED: Millimetres = 0.5;

/** What one fault counts. */
export function pointsOf({ size, hole }: Pick<Fault, 'size' | 'hole'>): Points {
  if (hole) return size <= INCH + ROUNDED ? 2 : 4;
  if (size <= 3 * INCH + ROUNDED) return 1;
  if (size <= 6 * INCH + ROUNDED) return 2;
  return size <= 9 * INCH + ROUNDED ? 3 : 4;
}

/** The points of a cloth: those of its faults, at most 4 in each linear yard counted from its end. */
export function totalPoints(faults: readonly Fault[]): number {
  const yards = new Map<number, number>();
  for (const fault of faults) {
    const yard = Math.floor(fault.fromEnd / MM_PER.yd);
    yards.set(yard, Math.min(4, (yards.get(yard) ?? 0) + pointsOf(fault)));
  }
  return [...yards.values()].reduce((sum, points) => sum + points, 0);
}

/** Points per 100 m²: P × 100,000 ÷ (metres × width in mm). Throws for cloth without length or width. */
export function perHundredSquareMetres(points: number, length: Millimetres, width: Millimetres): number {
  refuseEmpty(length, width);
  return (points * 100_000) / ((length / MM_PER.m) * width);
}

/** Points per 100 yd²: P × 3600 ÷ (yards × width in inches). Throws for cloth without length or width. */
export function perHundredSquareYards(points: number, length: Millimetres, width: Millimetres): number {
  refuseEmpty(length, width);
  return (points * 3600) / ((length / MM_PER.yd) * (width / INCH));
}

function refuseEmpty(length: Millimetres, width: Millimetres): void {
  if (!(length > 0 && width > 0)) throw new RangeError(`No cloth: ${length} mm by ${width} mm`);
}

/**
 * What one roll is commonly accepted up to, in points per 100 yd² (per 100 m² it is nearly a fifth more). Acceptance is a matter of
 * agreement between buyer and seller: common practice, no published source.
 */
export const COMMONLY_ACCEPTED = 40;
