import { clothCost } from '$lib/cloth/cost';
import type { LayPanel, PanelBook } from '$lib/lay/panel-book';
import type { Readings } from '$lib/lay/verdict';
import { formatDecimal, formatLength, type LengthUnit } from '$lib/units/length';
import { formatMoney } from '$lib/units/money';

/*
 * The readings of a lay as the Slip says them.
 */

/** A share of one as a percentage, or a dash. */
export function percent(share: number | null): string {
  return share === null ? '–' : `${formatDecimal(share * 100, 1, true)} %`;
}

/** A length of cloth: metres and centimetres, or yards and inches, as the studio buys. */
export function clothLength(mm: number, unit: LengthUnit): string {
  if (unit === 'cm') return formatLength(mm, 'm', { decimals: 2, fixed: true });
  return formatLength(mm, 'yd', { fraction: 8 });
}

function short(mm: number, unit: LengthUnit): string {
  return unit === 'cm'
    ? formatLength(mm, 'cm', { decimals: 1, fixed: true })
    : formatLength(mm, 'in', { fraction: 16 });
}

export interface ReadingWords {
  readonly lengthUsed: string;
  readonly efficiency: string;
  readonly soFar: boolean;
  readonly utilisation: string;
  readonly leastLength: string;
  readonly clothToBuy: string;
  readonly terms: readonly { readonly name: string; readonly value: string }[];
}

export function readingWords(readings: Readings, unit: LengthUnit): ReadingWords {
  const { clothToBuy: buy } = readings;
  const added = (name: string, mm: number) => (mm > 0 ? [{ name, value: `+ ${short(mm, unit)}` }] : []);
  return {
    lengthUsed: short(readings.lengthUsed, unit),
    efficiency: percent(readings.efficiency),
    soFar: readings.pieces.loose > 0,
    utilisation: percent(readings.utilisation),
    leastLength: short(readings.leastLength.length, unit),
    clothToBuy: clothLength(buy.total, unit),
    terms: [
      { name: 'Length used', value: short(buy.lengthUsed, unit) },
      { name: 'Zero end', value: `+ ${short(buy.start, unit)}` },
      { name: 'Far end', value: `+ ${short(buy.end, unit)}` },
      ...added('Further plies', buy.furtherPlies),
      ...added('Splices', buy.splices),
      { name: 'Reserve', value: `+ ${short(buy.reserve, unit)}` },
      ...added('Shrinking', buy.shrinkage),
      ...added('Whole repeats', buy.repeats),
      { name: 'Rounded up to whole', value: short(buy.roundedUpTo, unit) }
    ]
  };
}

/** Why no lay of these pieces can be shorter. */
export function leastLengthWords(readings: Readings, book: PanelBook, unit: LengthUnit): string {
  return leastLengthReason(
    readings.leastLength.reason,
    (panel) => panelNamed(book, panel)?.shape.name ?? panel,
    unit
  );
}

/** The same where the panels are named by other means. */
export function leastLengthReason(
  reason: Readings['leastLength']['reason'],
  name: (panel: string) => string,
  unit: LengthUnit
): string {
  switch (reason.kind) {
    case 'nothing':
      return 'Nothing is needed of this cloth.';
    case 'area':
      return `The pieces cover ${formatDecimal(reason.area / 1e6, 2)} m², the cloth is ${short(reason.width, unit)} wide.`;
    case 'longest':
      return `${name(reason.panel)} alone is this long.`;
    case 'blade':
      return `The pieces cover ${formatDecimal(reason.area / 1e6, 2)} m², each with half of ${formatDecimal(reason.clearance, 1)} mm for the blade around it; the cloth is ${short(reason.width, unit)} wide.`;
    case 'side-by-side': {
      const { panels, places = 1 } = reason;
      if (places === 1) return `${panels.map(name).join(' and ')} can’t lie beside each other.`;
      return `At most ${places} of ${panels.map(name).join(', ')} fit beside each other, wide ones fewer.`;
    }
  }
}

function panelNamed(book: PanelBook, panel: string): LayPanel | undefined {
  return book[panel] ?? Object.values(book).find(({ shape }) => shape.panel === panel);
}

/** What the cloth to buy costs; null without a price (a cutter's page has none). */
export function costWords(
  toBuy: number,
  price: { minor: number; unit: 'metre' | 'yard'; currency: string } | null
): { per: string; total: string } | null {
  if (!price) return null;
  return {
    per: `${formatMoney(price.minor, price.currency)} a ${price.unit}`,
    total: formatMoney(clothCost(toBuy, price.minor, price.unit), price.currency)
  };
}
