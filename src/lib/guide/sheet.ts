import { boxesMeet, growBox } from '$lib/geometry/polygon';
import type { Box, Point } from '$lib/geometry/point';
import type { Strip } from '$lib/cloth/strip';
import type { Millimetres } from '$lib/units/measure';
import { formatDecimal } from '$lib/units/length';
import { sideUpWords } from './cloth-frame';
import {
  arrowHead,
  fitText,
  line,
  pen,
  rectangle,
  ring,
  words,
  type Lettering,
  type Mark,
  type Page
} from './drawing';
import { FOOT_BAND, SIDE_BAND, type JoinMark, type TapedUpChecks, type Tile, type Tiling } from './tiling';

/*
 * One sheet: the window on the cloth at true size, and the bands beside it with checks, arrows and words.
 */

/** What is drawn on the cloth, with the box that it can't reach beyond. */
export interface Spot {
  readonly box: Box;
  readonly marks: readonly Mark[];
}

export interface SheetWords {
  /** Which lay and which revision this is: 'Order 27 · Day dress · revision 3 · 1a2b3c4d'. */
  readonly identity: string;
  readonly strip: Strip;
  readonly released: boolean;
  /** What the window's distances across count from; null where the sheet is no part of the cloth. */
  readonly near: 'fold' | 'selvedge' | null;
}

const THIN = pen(0.2);
const PALE = 0.91;
const MEDIUM = pen(0.35);

/** The page of `tile`. `spots` are what lies on the cloth; only those that reach the window are drawn. */
export function drawSheet(
  tile: Tile,
  tiling: Tiling,
  spots: readonly Spot[],
  joins: readonly JoinMark[],
  checks: TapedUpChecks,
  say: SheetWords,
  lettering: Lettering,
  name = tile.label
): Page {
  const { page, rules } = tiling;
  const left = rules.margin + SIDE_BAND;
  const foot = rules.margin + FOOT_BAND;
  const window = {
    minX: left,
    minY: foot,
    maxX: left + tile.window.maxX - tile.window.minX,
    maxY: foot + tile.window.maxY - tile.window.minY
  };
  const origin = { x: left - tile.window.minX, y: foot - tile.window.minY };
  const onCloth = [
    ...spots.filter((spot) => boxesMeet(growBox(spot.box, 5), tile.window)).flatMap((spot) => spot.marks),
    ...joins
      .filter(({ between }) => between.includes(tile.label))
      .flatMap(drawJoin(rules.overlap, lettering)),
    ...checks.targets.flatMap((target) => drawTarget(target))
  ];
  const page0: Point = { x: 0, y: 0 };
  return {
    ...page,
    name: `Sheet ${name}`,
    layers: [
      { origin: page0, scale: 1, window, marks: behind(window, name, say.released) },
      { origin, scale: 1, window, marks: onCloth },
      {
        origin: page0,
        scale: 1,
        window: null,
        marks: [
          line(rectangle(window), THIN, true),
          ...footBand(window, rules.margin, name, say, lettering),
          ...sideBand(window, rules.margin, tile, say, lettering)
        ]
      }
    ]
  };
}

/** Pale words behind the pieces: they still name the sheet when its bands are trimmed off. */
function behind(window: Box, name: string, released: boolean): Mark[] {
  const width = window.maxX - window.minX;
  const height = window.maxY - window.minY;
  const middle = { x: (window.minX + window.maxX) / 2, y: (window.minY + window.maxY) / 2 };
  const size = Math.min(60, width / 5, height / 4);
  const marks: Mark[] = [
    words({ x: middle.x, y: middle.y - size * 0.35 }, name, size, {
      align: 'middle',
      weight: 'bold',
      shade: PALE
    })
  ];
  if (released) return marks;
  // Repeated on large sheets, so that it is read wherever one stands.
  const columns = Math.max(1, Math.round(width / 600));
  const rows = Math.max(1, Math.round(height / 450));
  const letters = Math.min(width / columns / 8, 30);
  for (let i = 0; i < columns; i++)
    for (let k = 0; k < rows; k++)
      marks.push(
        words(
          {
            x: window.minX + (width * (i + 0.5)) / columns,
            y: window.minY + (height * (k + 0.5)) / rows - size * 0.35 - letters * 1.2
          },
          'NOT RELEASED',
          letters,
          { align: 'middle', weight: 'bold', shade: PALE }
        )
      );
  return marks;
}

/** How long the checks of a sheet are: 100 mm, and on to 500 mm where the sheet is large. */
export function checkLength(room: Millimetres): Millimetres {
  return room >= 640 ? 500 : 100;
}

/** A line of 100 mm (or 500 mm) with ticks each 10 mm, from `start` along x or y; ticks on the side of `ticks`. */
export function checkLine(start: Point, along: 'x' | 'y', length: Millimetres, ticks: 1 | -1): Mark[] {
  const at = (distance: number, off: number): Point =>
    along === 'x'
      ? { x: start.x + distance, y: start.y + off * ticks }
      : { x: start.x + off * ticks, y: start.y + distance };
  const marks: Mark[] = [line([at(0, 0), at(length, 0)], THIN)];
  for (let d = 0; d <= length; d += d < 100 ? 10 : 100) {
    const whole = d % 100 === 0;
    marks.push(line([at(d, 0), at(d, whole ? 3.5 : d % 50 === 0 ? 2.4 : 1.4)], THIN));
  }
  return marks;
}

function footBand(window: Box, margin: number, name: string, say: SheetWords, lettering: Lettering): Mark[] {
  const left = window.minX;
  const width = window.maxX - window.minX;
  const length = checkLength(width);
  const marks = checkLine({ x: left, y: margin + 0.5 }, 'x', length, 1);
  marks.push(words({ x: left + length + 1.5, y: margin + 0.6 }, `${length} mm`, 3.2));

  // The warp, the nap and the side that looks up.
  const y = margin + 8.6;
  const tail = { x: left, y };
  const tip = { x: left + 20, y };
  marks.push(line([tail, tip], MEDIUM), arrowHead(tail, tip, 4));
  let x = left + 22;
  const put = (text: string, weight: 'regular' | 'bold' = 'regular'): void => {
    marks.push(words({ x, y: y - 1.2 }, text, 3.6, { weight }));
    x += lettering.width(text, 3.6, weight) + 4;
  };
  put('warp');
  if (say.strip.nap !== 'none') {
    const along = say.strip.spread[0]!.layers[0]!.nap === 'along';
    const ends = [
      { x, y },
      { x: x + 14, y }
    ] as const;
    const [from, to] = along ? ends : [ends[1], ends[0]];
    marks.push(line([from, to], MEDIUM), arrowHead(from, to, 4));
    x += 16;
    put('nap');
  }
  put(sideUpWords(say.strip), 'bold');

  // Which sheet this is.
  const right = window.maxX;
  marks.push(words({ x: right, y: margin + 1.5 }, name, 9, { weight: 'bold', align: 'end' }));
  if (!say.released) {
    const end = right - lettering.width(name, 9, 'bold') - 4;
    const text = 'NOT RELEASED';
    const size = Math.min(4.6, Math.max(2.4, (end - left - length - 18) / 9));
    const wide = lettering.width(text, size, 'bold');
    marks.push(words({ x: end - 2, y: margin + 2 }, text, size, { weight: 'bold', align: 'end' }));
    marks.push(
      line(
        rectangle({ minX: end - wide - 4, maxX: end, minY: margin + 0.4, maxY: margin + 3.4 + size * 0.7 }),
        MEDIUM,
        true
      )
    );
  }
  return marks;
}

function sideBand(window: Box, margin: number, tile: Tile, say: SheetWords, lettering: Lettering): Mark[] {
  const foot = window.minY;
  const height = window.maxY - window.minY;
  const length = checkLength(height);
  const marks = checkLine({ x: margin + 0.5, y: foot }, 'y', length, 1);
  marks.push(words({ x: margin + 7.6, y: foot + 1 }, `${length} mm`, 3.2, { turn: 90 }));
  const start = foot + length + 4;
  const room = window.maxY - start;
  const put = (text: string, x: number, weight: 'regular' | 'bold'): void => {
    marks.push(
      words({ x, y: start }, fitText(text, 2.9, room, weight, lettering), 2.9, { turn: 90, weight })
    );
  };
  put(say.identity, margin + 3, 'bold');
  if (say.near) put(`Corner: ${cornerWords(tile.window, say.near)}`, margin + 7.2, 'regular');
  return marks;
}

/** Where the window's lower left corner lies on the cloth: 'zero + 167 mm, near selvedge − 10 mm'. */
function cornerWords({ minX, minY }: Box, near: 'fold' | 'selvedge'): string {
  const distance = (value: number): string =>
    `${value < 0 ? '−' : '+'} ${formatDecimal(Math.abs(value), 1)} mm`;
  return `zero ${distance(minX)}, near ${near} ${distance(minY)}`;
}

/** A join mark: a ring and a cross, and the names of the two sheets that meet there. */
function drawJoin(overlap: Millimetres, lettering: Lettering): (join: JoinMark) => Mark[] {
  const arm = Math.min(5, overlap / 2 - 0.5);
  return ({ at, between, seam }) => {
    const text = between.join(' · ');
    const size = Math.min(2.8, overlap / 3);
    const wide = lettering.width(text, size, 'regular');
    return [
      ring(at, arm * 0.6, THIN),
      line(
        [
          { x: at.x - arm, y: at.y },
          { x: at.x + arm, y: at.y }
        ],
        THIN
      ),
      line(
        [
          { x: at.x, y: at.y - arm },
          { x: at.x, y: at.y + arm }
        ],
        THIN
      ),
      seam === 'y'
        ? words({ x: at.x + size * 0.35, y: at.y + arm + 1.5 }, text, size, { turn: 90 })
        : words({ x: at.x + arm + 1.5 + wide / 2, y: at.y - size * 0.35 }, text, size, { align: 'middle' })
    ];
  };
}

/** A target of the taped-up checks: a larger ring and cross with its letter. */
function drawTarget({ name, at }: TapedUpChecks['targets'][number]): Mark[] {
  return [
    ring(at, 3, MEDIUM),
    line(
      [
        { x: at.x - 6, y: at.y },
        { x: at.x + 6, y: at.y }
      ],
      THIN
    ),
    line(
      [
        { x: at.x, y: at.y - 6 },
        { x: at.x, y: at.y + 6 }
      ],
      THIN
    ),
    words(
      {
        x: at.x + (name === 'B' || name === 'C' ? -4 : 4),
        y: at.y + (name === 'A' || name === 'B' ? 2.5 : -6)
      },
      name,
      6,
      { weight: 'bold', align: name === 'B' || name === 'C' ? 'end' : 'start' }
    )
  ];
}
