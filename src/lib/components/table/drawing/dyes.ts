/*
 * The dye pot for the canvas, which knows no style sheets, and the tints of garments.
 */

export const dyes = {
  undyed: '#F6F1E7',
  bleached: '#FFFDF8',
  charcoal: '#23262B',
  ash: '#6E6A62',
  hem: '#DDD5C6',
  woad: '#2F5D7C',
  weld: '#C9971C',
  madder: '#A63A2B',
  lichen: '#6A4C7D',
  fern: '#4B7046',
  walnut: '#6B4A32'
} as const;

/** The tape measure: weld at low strength. */
export const TAPE = '#F3E3B6';

/** The dyes of garments, in turn. Madder stays free: it means 'stops a release'. */
const garmentDyes = [dyes.woad, dyes.lichen, dyes.walnut, dyes.fern, dyes.weld] as const;

/** The dye of the `index`-th garment of a lay. */
export function garmentDye(index: number): string {
  return garmentDyes[index % garmentDyes.length]!;
}

/** The letter of the `index`-th garment: A to Z, then AA, AB … The tint never stands alone. */
export function garmentLetter(index: number): string {
  const letter = String.fromCharCode(65 + (index % 26));
  return index < 26 ? letter : garmentLetter(Math.floor(index / 26) - 1) + letter;
}

/** `a` with `share` of `b` mixed in; both as #rrggbb. */
export function mix(a: string, b: string, share: number): string {
  const channel = (hex: string, i: number): number => parseInt(hex.slice(1 + i * 2, 3 + i * 2), 16);
  const part = (i: number): string =>
    Math.round(channel(a, i) * (1 - share) + channel(b, i) * share)
      .toString(16)
      .padStart(2, '0');
  return `#${part(0)}${part(1)}${part(2)}`;
}

/** The paper of a garment's pieces: bleached with a little of its dye. */
export function garmentPaper(index: number): string {
  return mix(dyes.bleached, garmentDye(index), 0.15);
}

/** How light a colour is, 0 to 1 (relative luminance of WCAG 2.2). */
export function lightness(hex: string): number {
  const linear = [0, 1, 2].map((i) => {
    const c = parseInt(hex.slice(1 + i * 2, 3 + i * 2), 16) / 255;
    return c <= 0.03928 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4;
  });
  return 0.2126 * linear[0]! + 0.7152 * linear[1]! + 0.0722 * linear[2]!;
}

/** A colour for marks on `cloth`: the cloth's own, darker on light cloth and lighter on dark. */
export function inkOn(cloth: string, strength: number): string {
  return lightness(cloth) > 0.35 ? mix(cloth, dyes.charcoal, strength) : mix(cloth, dyes.bleached, strength);
}
