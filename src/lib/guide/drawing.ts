import type { Box, Outline, Point } from '$lib/geometry/point';
import type { Degrees, Millimetres } from '$lib/units/measure';

/*
 * What is drawn, before it is a PDF: strokes, areas and words in millimetres, y up. Lines and words are pure black or
 * white: a printer dithers grey, and a dithered line has no exact edge. Shades are for surfaces and for words that
 * stand behind.
 */

/** 0 is black, 1 is paper. */
export type Shade = number;

export interface Pen {
  readonly width: Millimetres;
  readonly shade: Shade;
  /** Lengths of strokes and gaps; empty for an unbroken line. */
  readonly dash: readonly Millimetres[];
}

export interface Stroke {
  readonly kind: 'stroke';
  readonly points: readonly Point[];
  readonly closed: boolean;
  readonly pen: Pen;
}

export interface Surface {
  readonly kind: 'surface';
  /** Filled by the even-odd rule. */
  readonly outlines: readonly Outline[];
  readonly shade: Shade;
}

export type Weight = 'regular' | 'bold';

export interface Words {
  readonly kind: 'words';
  /** On the baseline: start, middle or end of the words, by `align`. */
  readonly at: Point;
  readonly text: string;
  /** Height of the type's square; capitals are 0.7 of it. */
  readonly size: Millimetres;
  readonly weight: Weight;
  readonly align: 'start' | 'middle' | 'end';
  readonly turn: Degrees;
  readonly shade: Shade;
}

export type Mark = Stroke | Surface | Words;

/** Marks that share an origin, a scale and a window on the page. */
export interface Layer {
  /** Where the marks' zero lies on the page, from its lower left corner. */
  readonly origin: Point;
  /** 1 for true size. */
  readonly scale: number;
  /** What of the page it may touch; all of it with null. */
  readonly window: Box | null;
  readonly marks: readonly Mark[];
}

export interface Page {
  readonly width: Millimetres;
  readonly height: Millimetres;
  /** For the reader's outline and for progress: 'Ticket', 'Sheet B3'. */
  readonly name: string;
  readonly layers: readonly Layer[];
}

/** How wide words come out: a page's layout asks the fonts through this. */
export interface Lettering {
  /** Width of `text` in `size`. */
  width(text: string, size: Millimetres, weight: Weight): Millimetres;
}

/** Capitals' height as a share of the type's size (IBM Plex Sans). */
export const CAPITAL = 0.698;

export function pen(width: Millimetres, dash: readonly Millimetres[] = [], shade: Shade = 0): Pen {
  return { width, shade, dash };
}

export function line(points: readonly Point[], withPen: Pen, closed = false): Stroke {
  return { kind: 'stroke', points, closed, pen: withPen };
}

export function surface(outlines: readonly Outline[], shade: Shade): Surface {
  return { kind: 'surface', outlines, shade };
}

/** An upright rectangle as an outline. */
export function rectangle(box: Box): Point[] {
  return [
    { x: box.minX, y: box.minY },
    { x: box.maxX, y: box.minY },
    { x: box.maxX, y: box.maxY },
    { x: box.minX, y: box.maxY }
  ];
}

export function words(
  at: Point,
  text: string,
  size: Millimetres,
  more: Partial<Pick<Words, 'weight' | 'align' | 'turn' | 'shade'>> = {}
): Words {
  return { kind: 'words', at, text, size, weight: 'regular', align: 'start', turn: 0, shade: 0, ...more };
}

/** A circle as a closed stroke of 24 chords. */
export function ring(at: Point, radius: Millimetres, withPen: Pen): Stroke {
  const points = Array.from({ length: 24 }, (_, i) => {
    const angle = (i * Math.PI) / 12;
    return { x: at.x + radius * Math.cos(angle), y: at.y + radius * Math.sin(angle) };
  });
  return line(points, withPen, true);
}

/** A filled arrow head with its point at `tip`, seen coming from `from`. */
export function arrowHead(from: Point, tip: Point, length: Millimetres): Surface {
  const distance = Math.hypot(tip.x - from.x, tip.y - from.y) || 1;
  const ux = (tip.x - from.x) / distance;
  const uy = (tip.y - from.y) / distance;
  const back = { x: tip.x - ux * length, y: tip.y - uy * length };
  const half = length * 0.3;
  return surface(
    [
      [
        tip,
        { x: back.x - uy * half, y: back.y + ux * half },
        { x: back.x + uy * half, y: back.y - ux * half }
      ]
    ],
    0
  );
}

/** `text` cut off with an ellipsis where it is wider than `width`. */
export function fitText(
  text: string,
  size: Millimetres,
  width: Millimetres,
  weight: Weight,
  lettering: Lettering
): string {
  if (lettering.width(text, size, weight) <= width) return text;
  const letters = [...text];
  let low = 0;
  let high = letters.length;
  while (low < high) {
    const middle = Math.ceil((low + high) / 2);
    if (lettering.width(`${letters.slice(0, middle).join('').trimEnd()}…`, size, weight) <= width)
      low = middle;
    else high = middle - 1;
  }
  return `${letters.slice(0, low).join('').trimEnd()}…`;
}

/** `text` in lines no wider than `width`, broken at spaces; a longer word gets a line of its own. */
export function wrapText(
  text: string,
  size: Millimetres,
  width: Millimetres,
  weight: Weight,
  lettering: Lettering
): string[] {
  const lines: string[] = [];
  let current = '';
  for (const word of text.split(/\s+/).filter(Boolean)) {
    const longer = current ? `${current} ${word}` : word;
    if (current && lettering.width(longer, size, weight) > width) {
      lines.push(current);
      current = word;
    } else current = longer;
  }
  if (current) lines.push(current);
  return lines;
}
