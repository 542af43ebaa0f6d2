import type { Millimetres } from '$lib/units/measure';

/** Up to this depth two cut lines that run into each other count as touching. */
export const TOUCHING: Millimetres = 0.01;

/**
 * Distances that differ by less are equal: a thousandth of the grid, well above what floating point loses on the longest
 * cloth (about 1e-10 mm).
 */
export const NOISE: Millimetres = 1e-6;
