import { boundingBox } from '$lib/geometry/polygon';
import type { Point } from '$lib/geometry/point';
import { formatDecimal, type LengthUnit } from '$lib/units/length';
import { drawFlawsAndEdge, type ClothFrame } from './cloth-frame';
import { DeskPage, setTable, type Desk } from './desk-page';
import { arrowHead, line, pen, surface, words, type Lettering, type Mark, type Page } from './drawing';
import type { GuideInput } from './guide-input';
import { placeLabel } from './label-place';
import type { LaidPiece } from './laid-piece';
import { onTape } from './measure-words';
import { handWords } from './piece-drawing';
import { identity, notice } from './identity';

/*
 * The lay to scale with a ruler, and the distances by which every piece can be chalked by hand.
 */

/** The least height of the cloth on paper: a longer lay goes on in further stretches below. */
const LEAST_HEIGHT = 70;
const RULER = 9;

/** The overview: the drawing in one or more stretches, then the table over as many pages as it takes. */
export function drawOverview(
  input: GuideInput,
  frame: ClothFrame,
  pieces: readonly LaidPiece[],
  desk: Desk,
  lettering: Lettering
): Page[] {
  const pages: Page[] = [];
  const begin = (): DeskPage => {
    const page = new DeskPage(desk, 'Overview', lettering);
    page.title('Overview', identity(input));
    return page;
  };
  const next = (full: DeskPage): DeskPage => {
    pages.push(full.done(notice(input)));
    return begin();
  };
  let page = begin();
  const length = frame.extent.maxX - frame.extent.minX;
  const width = frame.extent.maxY - frame.extent.minY;
  const room = page.width - RULER - 2;
  // A short lay fills the page; the table then starts on the next one.
  const tallest = page.top - page.foot - RULER - 20;
  const scale = Math.min(tallest / width, Math.max(room / length, Math.min(LEAST_HEIGHT / width, 0.2)));
  const stretch = room / scale;
  for (let from = frame.extent.minX; from < frame.extent.maxX - 1e-6; from += stretch) {
    const high = width * scale + RULER + 11;
    if (page.top - high < page.foot) page = next(page);
    drawStretch(page, frame, pieces, {
      from,
      to: Math.min(from + stretch, frame.extent.maxX),
      scale,
      left: page.left + RULER,
      bottom: page.top - high + RULER + 4,
      unit: input.lengthUnit
    });
    page.top -= high;
  }
  page.put(
    `1 : ${formatDecimal(1 / scale, 1)}. Distances are from the zero line and from the near ${frame.near}${
      frame.cloth.minY < 0
        ? `’s line, ${onTape(-frame.cloth.minY, input.lengthUnit)} inside the cloth’s edge`
        : ''
    }. Grain lines run from their tail to their head.`,
    page.left,
    page.top - 3,
    3.4,
    { room: page.width }
  );
  page.top -= 7;
  const last = setTable(
    page,
    columns(page.width, input.lengthUnit),
    pieces.map(rowOf(input.lengthUnit)),
    next
  );
  return [...pages, last.done(notice(input))];
}

function columns(width: number, unit: LengthUnit) {
  const figure = (word: string, group?: string) => ({
    word,
    width: 20,
    align: 'end' as const,
    ...(group && { group })
  });
  const rest = width - 9 - 13 - 8 * 20;
  return [
    { word: 'no.', width: 9, align: 'end' as const, weight: 'bold' as const },
    { word: 'piece', width: rest * 0.54, align: 'start' as const, weight: 'bold' as const },
    { word: 'hand', width: 13, align: 'start' as const, weight: 'bold' as const },
    { word: `garment (lengths in ${unit})`, width: rest * 0.46, align: 'start' as const },
    figure('from zero', 'grain line, tail'),
    figure('from near'),
    figure('from zero', 'grain line, head'),
    figure('from near'),
    figure('nearest', 'edges from zero'),
    figure('farthest'),
    figure('nearest', 'edges from near'),
    figure('farthest')
  ];
}

/** A row of distances: both ends of the grain line, then the bounding edges, from the zero line and the near selvedge. */
function rowOf(unit: LengthUnit): (piece: LaidPiece) => string[] {
  const length = (mm: number): string => onTape(mm, unit, { bare: true, fixed: true });
  return (piece) => [
    String(piece.number),
    piece.panel,
    piece.hand === 'either' ? '' : piece.hand,
    piece.garment,
    length(piece.grain.from.x),
    length(piece.grain.from.y),
    length(piece.grain.to.x),
    length(piece.grain.to.y),
    length(piece.box.minX),
    length(piece.box.maxX),
    length(piece.box.minY),
    length(piece.box.maxY)
  ];
}

interface Stretch {
  readonly from: number;
  readonly to: number;
  readonly scale: number;
  readonly left: number;
  readonly bottom: number;
  readonly unit: LengthUnit;
}

const THIN = pen(0.18);
const LINE = pen(0.35);
const OUTER = pen(0.18, [1.5, 1]);

/** One stretch of the cloth with its rulers; what reaches beyond it is cut off at its ends. */
function drawStretch(page: DeskPage, frame: ClothFrame, pieces: readonly LaidPiece[], view: Stretch): void {
  const { from, to, scale, left, bottom } = view;
  const at = ({ x, y }: Point): Point => ({
    x: left + (x - from) * scale,
    y: bottom + (y - frame.extent.minY) * scale
  });
  const { cloth, extent } = frame;
  const marks: Mark[] = pieces
    .filter(({ box }) => box.maxX > from && box.minX < to)
    .flatMap((piece) => drawSmall(piece, at, view, page.lettering));
  for (const [y, withPen] of [
    [cloth.minY, OUTER],
    [cloth.maxY, OUTER],
    [0, LINE],
    [frame.usableWidth, LINE]
  ] as const)
    marks.push(line([at({ x: cloth.minX, y }), at({ x: cloth.maxX, y })], withPen));
  for (const [x, withPen] of [
    [cloth.minX, OUTER],
    [cloth.maxX, OUTER],
    [0, LINE],
    [frame.lengthUsed, LINE]
  ] as const)
    marks.push(line([at({ x, y: cloth.minY }), at({ x, y: cloth.maxY })], withPen));
  marks.push(...drawFlawsAndEdge(frame, at));
  page.drawings.push({
    origin: { x: 0, y: 0 },
    scale: 1,
    window: {
      minX: left - 0.3,
      maxX: left + (to - from) * scale + 0.3,
      minY: bottom - 0.3,
      maxY: bottom + (extent.maxY - extent.minY) * scale + 0.3
    },
    marks
  });
  page.marks.push(...rulers(frame, view));
}

function drawSmall(
  piece: LaidPiece,
  at: (point: Point) => Point,
  { from, to }: Stretch,
  lettering: Lettering
): Mark[] {
  const holes = piece.cutOuts.map((hole) => hole.map(at));
  const tail = at(piece.grain.from);
  const head = at(piece.grain.to);
  const cut = piece.cut.map(at);
  // What of it is seen here; the whole of it but where it runs on into the next stretch.
  const seen = clipped(piece.cut, from, to).map(at);
  const small = seen.length < 3 || smallest(seen) < 7;
  return [
    surface([cut, ...holes], 0.93),
    line(cut, pen(0.3), true),
    ...holes.map((hole) => line(hole, THIN, true)),
    // On a piece this small the number is worth more than the arrow; its distances are in the table.
    ...(small ? [] : [line([tail, head], THIN), arrowHead(tail, head, 1.8)]),
    ...label(piece, seen, small ? holes : [[tail, head], ...holes], lettering)
  ];
}

/** The shorter side of the box around `points`. */
function smallest(points: readonly Point[]): number {
  const { minX, minY, maxX, maxY } = boundingBox(points);
  return Math.min(maxX - minX, maxY - minY);
}

/** The number, with the name where it fits. */
function label(
  piece: LaidPiece,
  seen: readonly Point[],
  lines: readonly (readonly Point[])[],
  lettering: Lettering
): Mark[] {
  const box = boundingBox(seen);
  const middle = { x: (box.minX + box.maxX) / 2, y: (box.minY + box.maxY) / 2 };
  const size = 4;
  const number = String(piece.number);
  const name = `${number} ${piece.panel}`;
  for (const text of [[name, handWords(piece.hand)].filter(Boolean).join(', '), name, number]) {
    const found = placeLabel(seen, lines, middle, lettering.width(text, size, 'bold') + 2, size * 1.5);
    const fits = size * found.scale;
    if (fits < 2.4 && text !== number) continue;
    // A number that finds no room inside is still read: it may touch the lines.
    const shown = Math.max(fits, 2.2);
    const turned = (found.turn * Math.PI) / 180;
    const down = shown * 0.35;
    return [
      words(
        { x: found.centre.x + Math.sin(turned) * down, y: found.centre.y - Math.cos(turned) * down },
        text,
        shown,
        { weight: 'bold', align: 'middle', turn: found.turn }
      )
    ];
  }
  return [];
}

/** `outline` between x = `from` and x = `to`. */
function clipped(outline: readonly Point[], from: number, to: number): Point[] {
  return cutAt(cutAt(outline, from, 1), to, -1);
}

/** The part of `outline` on one side of x = `at`: greater for `keep` 1, less for −1. */
function cutAt(outline: readonly Point[], at: number, keep: 1 | -1): Point[] {
  return outline.flatMap((a, i) => {
    const b = outline[(i + 1) % outline.length]!;
    const inA = keep * (a.x - at) >= 0;
    const inB = keep * (b.x - at) >= 0;
    if (inA === inB) return inA ? [a] : [];
    const crossing = { x: at, y: a.y + ((b.y - a.y) * (at - a.x)) / (b.x - a.x) };
    return inA ? [a, crossing] : [crossing];
  });
}

/** A ruler along the warp below the cloth, and one across it at the left. */
function rulers(frame: ClothFrame, view: Stretch): Mark[] {
  const { from, to, scale, left, bottom, unit } = view;
  const marks: Mark[] = [];
  const small = unit === 'cm' ? 100 : 101.6;
  // Numbers stand at least 11 mm apart.
  const every = [1, 2, 5, 10, 20].find((n) => n * small * scale >= 11) ?? 50;
  const y = bottom - 2;
  const x0 = left - 2;
  const number = (i: number): string => String(unit === 'cm' ? i * 10 : i * 4);
  for (let i = Math.max(0, Math.ceil(from / small)); i * small <= Math.min(to, frame.cloth.maxX); i++) {
    const x = left + (i * small - from) * scale;
    const tall = i % every === 0 ? 2 : 1;
    marks.push(
      line(
        [
          { x, y },
          { x, y: y - tall }
        ],
        THIN
      )
    );
    if (i % every === 0) marks.push(words({ x, y: y - 5 }, number(i), 2.8, { align: 'middle' }));
  }
  marks.push(
    line(
      [
        { x: left + Math.max(0, -from) * scale, y },
        { x: left + (to - from) * scale, y }
      ],
      THIN
    ),
    words({ x: left + (to - from) * scale, y: y - 7.6 }, `${unit} from the zero line`, 2.6, { align: 'end' })
  );
  const base = bottom - frame.extent.minY * scale;
  for (let i = 0; i * small <= frame.usableWidth + 1e-6; i++) {
    const at = base + i * small * scale;
    marks.push(
      line(
        [
          { x: x0, y: at },
          { x: x0 - (i % every === 0 ? 2 : 1), y: at }
        ],
        THIN
      )
    );
    if (i % every === 0) marks.push(words({ x: x0 - 2.4, y: at - 1 }, number(i), 2.8, { align: 'end' }));
  }
  marks.push(
    line(
      [
        { x: x0, y: base },
        { x: x0, y: base + frame.usableWidth * scale }
      ],
      THIN
    )
  );
  return marks;
}
