import { boundingBox } from '$lib/geometry/polygon';
import type { Point } from '$lib/geometry/point';
import { formatDecimal, formatLength, type LengthUnit } from '$lib/units/length';
import type { ClothFrame } from './cloth-frame';
import { DeskPage, setTable, type Desk } from './desk-page';
import { arrowHead, line, pen, surface, words, type Lettering, type Mark, type Page } from './drawing';
import type { GuideInput } from './guide-input';
import { placeLabel } from './label-place';
import type { LaidPiece } from './laid-piece';
import { handWords } from './piece-drawing';
import { identity, notice } from './ticket';

/*
 * The lay to scale with a ruler, and the distances by which every piece can be chalked by hand.
 */

/** The least height of the cloth on paper: a longer lay goes on in further stretches below. */
const LEAST_HEIGHT = 70;
const TALLEST = 105;
const RULER = 7;

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
  const scale = Math.min(TALLEST / width, Math.max(room / length, Math.min(LEAST_HEIGHT / width, 0.2)));
  const stretch = room / scale;
  for (let from = frame.extent.minX; from < frame.extent.maxX - 1e-6; from += stretch) {
    const high = width * scale + RULER + 9;
    if (page.top - high < page.foot) page = next(page);
    page.marks.push(
      ...drawStretch(frame, pieces, {
        from,
        to: Math.min(from + stretch, frame.extent.maxX),
        scale,
        left: page.left + RULER,
        bottom: page.top - high + RULER + 3,
        unit: input.lengthUnit,
        lettering
      })
    );
    page.top -= high;
  }
  page.put(
    `1 : ${formatDecimal(1 / scale, 1)}. Distances are from the zero line and from the near ${frame.near}${
      frame.cloth.minY < 0
        ? `’s line, ${formatLength(-frame.cloth.minY, input.lengthUnit, { decimals: 1 })} inside the cloth’s edge`
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
  const figure = (word: string) => ({ word, width: 20, align: 'end' as const });
  const rest = width - 9 - 8 * 20;
  return [
    { word: 'no.', width: 9, align: 'end' as const, weight: 'bold' as const },
    { word: 'piece', width: rest * 0.56, align: 'start' as const, weight: 'bold' as const },
    { word: `garment (all in ${unit})`, width: rest * 0.44, align: 'start' as const },
    figure('tail: zero'),
    figure('tail: near'),
    figure('head: zero'),
    figure('head: near'),
    figure('edges: from'),
    figure('to, zero'),
    figure('from'),
    figure('to, near')
  ];
}

/** A row of distances: both ends of the grain line, then the bounding edges, from the zero line and the near selvedge. */
function rowOf(unit: LengthUnit): (piece: LaidPiece) => string[] {
  const length = (mm: number): string => formatLength(mm, unit, { bare: true, decimals: 1, fixed: true });
  return (piece) => [
    String(piece.number),
    [piece.panel, handWords(piece.hand)].filter(Boolean).join(', '),
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
  readonly lettering: Lettering;
}

const THIN = pen(0.18);

/** One stretch of the cloth with its rulers; what reaches beyond it is cut off at its ends. */
function drawStretch(frame: ClothFrame, pieces: readonly LaidPiece[], view: Stretch): Mark[] {
  const { from, to, scale, left, bottom } = view;
  const at = (x: number, y: number): Point => ({
    x: left + (Math.min(Math.max(x, from), to) - from) * scale,
    y: bottom + (y - frame.extent.minY) * scale
  });
  const { cloth, usableWidth, lengthUsed } = frame;
  const marks: Mark[] = [];
  const along = (y: number, withPen = THIN): void => {
    marks.push(line([at(cloth.minX, y), at(cloth.maxX, y)], withPen));
  };
  const across = (x: number, withPen = THIN): void => {
    if (x >= from && x <= to) marks.push(line([at(x, cloth.minY), at(x, cloth.maxY)], withPen));
  };
  for (const piece of pieces) {
    if (piece.box.maxX <= from || piece.box.minX >= to) continue;
    const cut = clipped(piece.cut, from, to).map((p) => at(p.x, p.y));
    if (cut.length < 3) continue;
    marks.push(
      surface([cut, ...piece.cutOuts.map((hole) => clipped(hole, from, to).map((p) => at(p.x, p.y)))], 0.93),
      line(cut, pen(0.3), true)
    );
    for (const hole of piece.cutOuts)
      marks.push(
        line(
          clipped(hole, from, to).map((p) => at(p.x, p.y)),
          THIN,
          true
        )
      );
    const [tail, head] = [at(piece.grain.from.x, piece.grain.from.y), at(piece.grain.to.x, piece.grain.to.y)];
    if (
      piece.grain.to.x > from &&
      piece.grain.to.x < to &&
      piece.grain.from.x > from &&
      piece.grain.from.x < to
    ) {
      marks.push(line([tail, head], THIN), arrowHead(tail, head, 1.8));
    }
    marks.push(...label(piece, cut, [tail, head], view.lettering));
  }
  const dashed = pen(0.18, [1.5, 1]);
  along(cloth.minY, dashed);
  along(cloth.maxY, dashed);
  along(0, pen(0.35));
  along(usableWidth, pen(0.35));
  across(cloth.minX, dashed);
  across(cloth.maxX, dashed);
  across(0, pen(0.35));
  across(lengthUsed, pen(0.35));
  marks.push(...rulers(frame, view));
  return marks;
}

/** The number, with the name where it fits. */
function label(
  piece: LaidPiece,
  cut: readonly Point[],
  grain: readonly Point[],
  lettering: Lettering
): Mark[] {
  const box = boundingBox(cut);
  const middle = { x: (box.minX + box.maxX) / 2, y: (box.minY + box.maxY) / 2 };
  const size = 4;
  for (const text of [
    `${piece.number} ${[piece.panel, handWords(piece.hand)].filter(Boolean).join(', ')}`,
    `${piece.number} ${piece.panel}`,
    String(piece.number)
  ]) {
    const found = placeLabel(cut, [grain], middle, lettering.width(text, size, 'bold') + 1, size);
    const shown = size * found.scale;
    if (shown < 2.4 && text !== String(piece.number)) continue;
    const scaled = Math.max(shown, 1.6);
    const turned = (found.turn * Math.PI) / 180;
    return [
      words(
        {
          x: found.centre.x + Math.sin(turned) * scaled * 0.35,
          y: found.centre.y - Math.cos(turned) * scaled * 0.35
        },
        text,
        scaled,
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
