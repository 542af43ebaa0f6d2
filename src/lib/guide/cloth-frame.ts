import { flawsAsLaid } from '$lib/cloth/flaws-as-laid';
import { sideMargin, spreadMarks } from '$lib/cloth/spread';
import { laidWidth, type Given, type Strip } from '$lib/cloth/strip';
import type { Box, Outline, Point } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';
import { formatDecimal, type LengthUnit } from '$lib/units/length';
import { line, pen, words, type Mark } from './drawing';
import { foldsOf } from '$lib/lay/on-fold';
import type { LaidPiece } from './laid-piece';
import { onTape } from './measure-words';

/*
 * The cloth around the pieces: selvedges or fold, zero and end line, and its words.
 */

/** The cloth of a lay as the guide shows it. */
export interface ClothFrame {
  /** The edges of what may be laid on: y = 0, and this far one. */
  readonly usableWidth: Millimetres;
  /** Where the lay ends: the greatest x of its pieces. */
  readonly lengthUsed: Millimetres;
  /** The cloth itself: full width, ends included. */
  readonly cloth: Box;
  /** The cloth, and whatever hangs over it. */
  readonly extent: Box;
  readonly near: 'fold' | 'selvedge';
  readonly far: 'fold' | 'selvedge';
  /** Flaws, each as the box that no piece may touch. */
  readonly flaws: readonly Box[];
  /** Borders between cloth of one and of several layers. */
  readonly borders: readonly { readonly y: Millimetres; readonly words: string }[];
  readonly repeat: Strip['repeat'];
  /** The edge of an odd remnant; null for a whole width. */
  readonly edge: Outline | null;
}

/** The frame of a lay. A fold has no margin beside it; what the full width is wider is shared by the selvedges. */
export function clothFrame(strip: Strip, pieces: readonly LaidPiece[], lengthUsed: Millimetres): ClothFrame {
  const folds = foldsOf(strip).map(({ side }) => side);
  const near = folds.includes('near') ? 'fold' : 'selvedge';
  const far = folds.includes('far') ? 'fold' : 'selvedge';
  const margin = sideMargin(strip);
  const width = laidWidth(strip);
  const cloth = {
    minX: -strip.endAllowance.start,
    maxX: Math.max(lengthUsed, 1) + strip.endAllowance.end,
    minY: near === 'fold' ? 0 : -margin,
    maxY: width + (far === 'fold' ? 0 : margin)
  };
  return {
    usableWidth: width,
    lengthUsed,
    cloth,
    extent: pieces.reduce(
      (all, { box }) => ({
        minX: Math.min(all.minX, box.minX),
        minY: Math.min(all.minY, box.minY),
        maxX: Math.max(all.maxX, box.maxX),
        maxY: Math.max(all.maxY, box.maxY)
      }),
      cloth
    ),
    near,
    far,
    flaws: flawsAsLaid(strip).map((flaw) => {
      const reach = { x: flaw.along / 2 + flaw.radius, y: flaw.across / 2 + flaw.radius };
      return {
        minX: flaw.x - reach.x,
        minY: flaw.y - reach.y,
        maxX: flaw.x + reach.x,
        maxY: flaw.y + reach.y
      };
    }),
    borders: strip.spread.slice(1).map(({ from, layers }) => ({
      y: from,
      words:
        layers.length === 0
          ? 'selvedge of the upper ply'
          : `${layers.length === 1 ? 'single layer' : `${layers.length} layers`} from here`
    })),
    repeat: strip.repeat,
    edge: strip.given?.outline ?? null
  };
}

const FLAW_PEN = pen(0.3, [2, 1]);

const BORDER_PEN = pen(0.3, [8, 2, 2, 2]);
const REPEAT_PEN = pen(0.12, [1, 2]);

/** Where the lines of the repeat lie: along the warp from the zero line, across from y = 0. */
function repeatLines({ repeat, cloth, usableWidth }: ClothFrame, at: (point: Point) => Point): Mark[] {
  const { along, across } = repeat;
  const marks: Mark[] = [];
  if (along)
    for (let k = Math.ceil((0 - along.offset) / along.size); ; k++) {
      const x = along.offset + k * along.size;
      if (x > cloth.maxX) break;
      marks.push(line([at({ x, y: 0 }), at({ x, y: usableWidth })], REPEAT_PEN));
    }
  if (across)
    for (let k = Math.ceil((0 - across.offset) / across.size); ; k++) {
      const y = across.offset + k * across.size;
      if (y > usableWidth) break;
      marks.push(line([at({ x: cloth.minX, y }), at({ x: cloth.maxX, y })], REPEAT_PEN));
    }
  return marks;
}

/** The lines of the repeat, borders between layers, the flaws crossed out and the edge of an odd remnant, through `at` to the paper. */
export function drawFlawsAndEdge(frame: ClothFrame, at: (point: Point) => Point = (point) => point): Mark[] {
  const crossed = frame.flaws.flatMap(({ minX, minY, maxX, maxY }) => {
    const corners = [
      { x: minX, y: minY },
      { x: maxX, y: minY },
      { x: maxX, y: maxY },
      { x: minX, y: maxY }
    ].map(at);
    return [
      line(corners, FLAW_PEN, true),
      line([corners[0]!, corners[2]!], FLAW_PEN),
      line([corners[1]!, corners[3]!], FLAW_PEN)
    ];
  });
  return [
    ...repeatLines(frame, at),
    ...frame.borders.map(({ y }) =>
      line([at({ x: frame.cloth.minX, y }), at({ x: frame.cloth.maxX, y })], BORDER_PEN)
    ),
    ...crossed,
    ...(frame.edge ? [line(frame.edge.map(at), EDGE_PEN, true)] : [])
  ];
}

export const EDGE_PEN = pen(0.35);
const OUTER_PEN = pen(0.25, [6, 3]);

/** How far apart the words and the numbers along an edge stand, so that a small sheet still shows one. */
const WORDS_STEP: Millimetres = 160;

/** The frame's lines, ticks and words, in cloth coordinates. */
export function drawFrame(frame: ClothFrame, unit: LengthUnit): Mark[] {
  const { cloth, usableWidth, lengthUsed } = frame;
  const across = (x: Millimetres, withPen = EDGE_PEN): Mark =>
    line(
      [
        { x, y: cloth.minY },
        { x, y: cloth.maxY }
      ],
      withPen
    );
  const along = (y: Millimetres, withPen = EDGE_PEN): Mark =>
    line(
      [
        { x: cloth.minX, y },
        { x: cloth.maxX, y }
      ],
      withPen
    );
  const marks: Mark[] = [along(0), along(usableWidth), across(0), across(lengthUsed)];
  if (cloth.minY < 0) marks.push(along(cloth.minY, OUTER_PEN));
  if (cloth.maxY > usableWidth) marks.push(along(cloth.maxY, OUTER_PEN));
  if (cloth.minX < 0) marks.push(across(cloth.minX, OUTER_PEN));
  if (cloth.maxX > lengthUsed) marks.push(across(cloth.maxX, OUTER_PEN));
  marks.push(...tape(frame, unit), ...drawFlawsAndEdge(frame));
  for (const border of frame.borders)
    for (let x = WORDS_STEP / 2; x < lengthUsed; x += 2 * WORDS_STEP)
      marks.push(words({ x, y: border.y + 1.4 }, border.words, 3.6));
  for (const { minX, maxY } of frame.flaws) marks.push(words({ x: minX, y: maxY + 1.4 }, 'flaw', 3.6));
  for (let x = WORDS_STEP / 4; x < lengthUsed; x += WORDS_STEP) {
    marks.push(edgeWords({ x, y: 0 }, `near ${frame.near}`, 0, frame.near === 'fold' ? 0 : -cloth.minY, -1));
    marks.push(edgeWords({ x, y: usableWidth }, `far ${frame.far}`, 0, cloth.maxY - usableWidth, 1));
  }
  for (let y = WORDS_STEP / 4; y < usableWidth; y += WORDS_STEP) {
    marks.push(edgeWords({ x: 0, y }, 'zero line', 90, -cloth.minX, 1));
    marks.push(
      edgeWords(
        { x: lengthUsed, y },
        `end line, ${onTape(lengthUsed, unit)}`,
        90,
        cloth.maxX - lengthUsed,
        -1
      )
    );
  }
  return marks;
}

/**
 * Words along an edge, outside it (`out` tells on which side of its reading direction) where `room` allows, just
 * inside it otherwise.
 */
function edgeWords(
  at: { x: number; y: number },
  text: string,
  turn: 0 | 90,
  room: number,
  out: 1 | -1
): Mark {
  const size = 3.6;
  const above = room >= 6 ? out : -out;
  const off = above > 0 ? 1.4 : -1.4 - size * 0.7;
  return turn === 0
    ? words({ x: at.x, y: at.y + off }, text, size)
    : words({ x: at.x - off, y: at.y }, text, size, { turn });
}

/** A tape along both edges of the usable width: a tick each 10 cm with its number, 4 in for a studio in inches. */
function tape(frame: ClothFrame, unit: LengthUnit): Mark[] {
  const step = unit === 'cm' ? 100 : 101.6;
  const marks: Mark[] = [];
  const thin = pen(0.2);
  for (let i = 0; i * step <= frame.lengthUsed + 1e-6; i++) {
    const x = i * step;
    for (const [y, into] of [
      [0, 3],
      [frame.usableWidth, -3]
    ] as const)
      marks.push(
        line(
          [
            { x, y },
            { x, y: y + into }
          ],
          thin
        )
      );
    if (i > 0 && (i * step) % (2 * step) < 1e-6)
      marks.push(words({ x: x + 0.8, y: 0.8 }, `${unit === 'cm' ? i * 10 : i * 4} ${unit}`, 2.6));
  }
  return marks;
}

/** Which side looks up and what a placement gives, as it is printed: 'RIGHT SIDE UP · FOLD: gives L + R'. */
export function sideUpWords(strip: Strip): string {
  return spreadMarks(strip).join(' · ');
}

/** The repeat of the cloth in words; null where it has none. */
export function repeatWords({ repeat }: Strip, length: (mm: number) => string): string | null {
  const parts = [
    repeat.along &&
      `${length(repeat.along.size)} along, first line ${length(repeat.along.offset)} from the zero line`,
    repeat.across &&
      `${length(repeat.across.size)} across, first line ${length(repeat.across.offset)} from the near edge`
  ].filter((part) => part !== null);
  if (parts.length === 0) return null;
  const oneWay = [repeat.along, repeat.across].some((one) => one !== null && !one.symmetric);
  return parts.join('; ') + (oneWay ? '; one way, no mirror image matches' : '');
}

/** The roll or remnant, as the workroom calls it, with its batch. */
export function givenWords({ name, batch }: Given): string {
  return batch === '' ? name : `${name}, batch ${batch}`;
}

/** What is done about shrinking, in lines; none where the cloth does not shrink. */
export function shrinkingWords({ shrinkage }: Strip): string[] {
  const { treatment, warp, weft } = shrinkage;
  const percent = (share: number): string => `${formatDecimal(share * 100, 1)} %`;
  const shares = `warp ${percent(warp)}, weft ${percent(weft)}`;
  switch (treatment) {
    case 'none':
      return [];
    case 'enlarged':
      return [`pieces drawn here are enlarged for it: ${shares}`];
    case 'shrunkFirst':
      return [`shrink the cloth before laying: ${shares}`];
    case 'boughtShrunk':
      return ['bought shrunk: cut as it is'];
  }
}

/** Plies on the table, all zones' deepest. */
export function plies(strip: Strip): number {
  return Math.max(...strip.spread.map((zone) => zone.layers.length));
}

/** Whether and which way the nap runs on the top ply: along the warp arrow, against it, or not at all. */
export function napWords(strip: Strip): string {
  if (strip.nap === 'none') return 'no nap';
  const way =
    strip.spread[0]!.layers[0]!.nap === 'along' ? 'runs with the warp arrow' : 'runs against the warp arrow';
  return strip.nap === 'oneWay' ? `one way, ${way}` : `one way for each garment, ${way}`;
}
