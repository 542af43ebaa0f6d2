import { formatDecimal, formatLength, type LengthUnit } from '$lib/units/length';
import type { Millimetres } from '$lib/units/measure';

/** A length on the cloth as the studio's tape shows it: to the millimetre in cm, to the sixteenth in inches. */
export function onTape(
  mm: Millimetres,
  unit: LengthUnit,
  style: { bare?: boolean; fixed?: boolean } = {}
): string {
  return formatLength(mm, unit, unit === 'cm' ? { ...style, decimals: 1 } : { ...style, fraction: 16 });
}

/** A length on paper, where tenths of a millimetre count; beside it what an inch tape shows. */
export function onPaper(mm: Millimetres, unit: LengthUnit): string {
  const shown = `${formatDecimal(mm, 1, true)} mm`;
  return unit === 'in' ? `${shown} (${onTape(mm, unit)})` : shown;
}
