import { IDENTITY, multiply, rotation, scaling, translation, type Matrix } from './matrix';

/** CSS absolute lengths in px, 96 to the inch (CSS Values and Units 3, section 6.2). */
export const PX_PER: Readonly<Record<string, number>> = {
  px: 1,
  in: 96,
  cm: 96 / 2.54,
  mm: 96 / 25.4,
  q: 96 / 101.6,
  pt: 96 / 72,
  pc: 16
};
export const MM_PER_PX = 25.4 / 96;

const NUMBER = /[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?/;
const LENGTH = new RegExp(`^\\s*(${NUMBER.source})\\s*([a-zA-Z]+|%)?\\s*$`);

/** A length as written: its number and its unit ('' for none). Null when it is none. */
export function parseLength(text: string | undefined): { value: number; unit: string } | null {
  const match = text === undefined ? null : LENGTH.exec(text);
  if (!match) return null;
  const value = Number(match[1]);
  return Number.isFinite(value) ? { value, unit: (match[2] ?? '').toLowerCase() } : null;
}

/**
 * A length in user units. `percentOf` is what 100 % is. Null when it is missing or in a unit that depends on a font.
 */
export function userLength(text: string | undefined, percentOf: number): number | null {
  const length = parseLength(text);
  if (!length) return null;
  if (length.unit === '') return length.value;
  if (length.unit === '%') return (length.value / 100) * percentOf;
  const factor = PX_PER[length.unit];
  return factor === undefined ? null : length.value * factor;
}

/** A list of numbers as SVG writes them: parted by spaces, commas, signs. Null when something else is in between. */
export function parseNumbers(text: string): number[] | null {
  const numbers: number[] = [];
  const scan = new RegExp(`[\\s,]*(${NUMBER.source})|[\\s,]*$`, 'y');
  while (scan.lastIndex < text.length) {
    const match = scan.exec(text);
    if (!match) return null;
    if (match[1] === undefined) break;
    numbers.push(Number(match[1]));
  }
  return numbers;
}

/** A `transform` attribute as one map. Null when it is not understood. */
export function parseTransform(text: string): Matrix | null {
  const scan = /[\s,]*([a-zA-Z]+)\s*\(([^()]*)\)/y;
  let matrix: Matrix = IDENTITY;
  while (scan.lastIndex < text.length) {
    if (/^[\s,]*$/.test(text.slice(scan.lastIndex))) break;
    const match = scan.exec(text);
    if (!match) return null;
    const numbers = parseNumbers(match[2]!);
    const step = numbers && oneTransform(match[1]!, numbers);
    if (!step || !step.every(Number.isFinite)) return null;
    matrix = multiply(matrix, step);
  }
  return matrix;
}

function oneTransform(name: string, n: readonly number[]): Matrix | null {
  const tangent = (degrees: number): number => Math.tan((degrees * Math.PI) / 180);
  switch (name) {
    case 'matrix':
      return n.length === 6 ? [n[0]!, n[1]!, n[2]!, n[3]!, n[4]!, n[5]!] : null;
    case 'translate':
      return n.length === 1 || n.length === 2 ? translation(n[0]!, n[1] ?? 0) : null;
    case 'scale':
      return n.length === 1 || n.length === 2 ? scaling(n[0]!, n[1] ?? n[0]!) : null;
    case 'rotate':
      if (n.length === 1) return rotation(n[0]!);
      if (n.length !== 3) return null;
      return multiply(translation(n[1]!, n[2]!), multiply(rotation(n[0]!), translation(-n[1]!, -n[2]!)));
    case 'skewX':
      return n.length === 1 ? [1, 0, tangent(n[0]!), 1, 0, 0] : null;
    case 'skewY':
      return n.length === 1 ? [1, tangent(n[0]!), 0, 1, 0, 0] : null;
    default:
      return null;
  }
}

/** The map of a viewBox into a viewport (SVG 2, 8.2: computing the equivalent transform of an SVG viewport). */
export function viewBoxMatrix(
  viewBox: { x: number; y: number; width: number; height: number },
  width: number,
  height: number,
  preserve: string | undefined
): Matrix {
  const [align = 'xMidYMid', fit = 'meet'] = (preserve ?? '')
    .trim()
    .replace(/^defer\s+/, '')
    .split(/\s+/);
  let scaleX = width / viewBox.width;
  let scaleY = height / viewBox.height;
  const how = /^x(Min|Mid|Max)Y(Min|Mid|Max)$/.exec(align) ?? ['', 'Mid', 'Mid'];
  if (align !== 'none') {
    const scale = fit === 'slice' ? Math.max(scaleX, scaleY) : Math.min(scaleX, scaleY);
    scaleX = scale;
    scaleY = scale;
  }
  const slack = (room: number, size: number, where: string): number =>
    where === 'Min' || align === 'none' ? 0 : (room - size) * (where === 'Mid' ? 0.5 : 1);
  return [
    scaleX,
    0,
    0,
    scaleY,
    -viewBox.x * scaleX + slack(width, viewBox.width * scaleX, how[1]!),
    -viewBox.y * scaleY + slack(height, viewBox.height * scaleY, how[2]!)
  ];
}

/** A viewBox attribute; null when it is missing or no box with an extent. */
export function parseViewBox(text: string | undefined) {
  const n = text === undefined ? null : parseNumbers(text);
  if (!n || n.length !== 4 || !(n[2]! > 0) || !(n[3]! > 0) || !n.every(Number.isFinite)) return null;
  return { x: n[0]!, y: n[1]!, width: n[2]!, height: n[3]! };
}

/** The declarations of a style attribute, names in lower case. */
export function parseStyle(text: string | undefined): Map<string, string> {
  const declarations = new Map<string, string>();
  for (const part of (text ?? '').split(';')) {
    const colon = part.indexOf(':');
    if (colon > 0) declarations.set(part.slice(0, colon).trim().toLowerCase(), part.slice(colon + 1).trim());
  }
  return declarations;
}
