/**
 * Names for what a number means. They are aliases: the compiler does not tell them apart, the reader does.
 * Inside the product lengths are always millimetres and angles always degrees, counter-clockwise.
 */
export type Millimetres = number;
export type SquareMillimetres = number;
export type Degrees = number;
/** A share of one, for example 0.82 for 82 %. */
export type Share = number;
/** Whole minor units of a currency: pence, cents. */
export type Minor = number;
