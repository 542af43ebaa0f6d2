import type { Outline, Point } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';
import { arrowHead, CAPITAL, line, pen, ring, words, type Lettering, type Mark, type Pen } from './drawing';
import { placeLabel } from './label-place';
import type { LaidPiece } from './laid-piece';

/*
 * One piece at true size: cut line, sew line, notches, drill holes, grain, label.
 */

/** Wide enough to be followed from a metre away; its middle is the line. */
export const CUT_PEN = pen(0.5);
const SEW_PEN = pen(0.25, [3, 2]);
const INNER_PEN = pen(0.25, [1, 1.5]);
const FOLD_PEN = pen(0.25, [8, 2, 2, 2]);
/** The fold edge of a half: bold, so that nobody takes it for a cut. */
const ON_FOLD_PEN = pen(0.6, [8, 2, 2, 2]);
const GRAIN_PEN = pen(0.35);
const THIN = pen(0.2);

const LARGEST_NAME: Millimetres = 12;
const SMALLEST_NAME: Millimetres = 2.2;

/** What the label says beside the piece's own words. */
export interface LabelWords {
  readonly order: string;
  /** Whether one ply lies on the table: then drill holes are marked, never pierced. */
  readonly singlePly: boolean;
  /** Whether pieces may lie either way along the warp. */
  readonly bothWays: boolean;
}

/** The hand of a piece in words; empty where it has none. */
export function handWords(hand: LaidPiece['hand']): string {
  if (hand === 'pair') return 'left + right';
  return hand === 'either' ? '' : `${hand} hand`;
}

/** Everything of `piece`, in cloth coordinates. */
export function drawPiece(piece: LaidPiece, label: LabelWords, lettering: Lettering): Mark[] {
  const marks: Mark[] = [];
  if (piece.sew) marks.push(alongEdge(piece, piece.sew, SEW_PEN));
  for (const { points } of piece.internalLines) marks.push(line(points, INNER_PEN));
  if (piece.foldLine) {
    marks.push(line([piece.foldLine.from, piece.foldLine.to], piece.onFold ? ON_FOLD_PEN : FOLD_PEN));
    if (piece.onFold) marks.push(foldWords(piece, piece.foldLine));
  }
  marks.push(line([piece.grain.from, piece.grain.to], GRAIN_PEN));
  marks.push(arrowHead(piece.grain.from, piece.grain.to, 7));
  if (label.bothWays) marks.push(arrowHead(piece.grain.to, piece.grain.from, 7));
  marks.push(...drawLabel(piece, label, lettering));
  for (const note of notes(piece, label)) marks.push(...note);
  for (const notch of piece.notches) {
    marks.push(line([notch.sew, notch.edge], THIN));
    marks.push(line([notch.edge, notch.tip], CUT_PEN));
    marks.push(tick(notch.sew, notch.edge));
  }
  for (const outline of piece.cutOuts) marks.push(line(outline, CUT_PEN, true));
  marks.push(alongEdge(piece, piece.cut, CUT_PEN));
  return marks;
}

/** An outline of a piece; of one on the fold without the fold edge, which is not cut. */
export function alongEdge(piece: LaidPiece, outline: Outline, withPen: Pen): Mark {
  const open = piece.onFold && piece.foldLine ? withoutFold(outline, piece.foldLine) : null;
  return open ? line(open, withPen) : line(outline, withPen, true);
}

/** The outline from one end of its stretch on the fold to the other; null where none of it lies there. */
function withoutFold(outline: Outline, fold: NonNullable<LaidPiece['foldLine']>): Outline | null {
  const along = Math.abs(fold.to.x - fold.from.x) > Math.abs(fold.to.y - fold.from.y);
  const on = (p: Point): boolean => Math.abs(along ? p.y - fold.from.y : p.x - fold.from.x) < 0.002;
  const count = outline.length;
  const at = outline.findIndex((p, i) => on(p) && on(outline[(i + 1) % count]!));
  return at < 0 ? null : Array.from({ length: count }, (_, i) => outline[(at + 1 + i) % count]!);
}

/** 'FOLD: not cut here', along the fold edge of a half, inside it. */
function foldWords(piece: LaidPiece, { from, to }: NonNullable<LaidPiece['foldLine']>): Mark {
  const middle = { x: (from.x + to.x) / 2, y: (from.y + to.y) / 2 };
  const upright = Math.abs(to.y - from.y) > Math.abs(to.x - from.x);
  const size = 3.6;
  const inside = upright ? piece.label.x > middle.x : piece.label.y > middle.y;
  const off = inside ? 1.6 : -1.6 - size * 0.7;
  const at = upright
    ? { x: middle.x - (inside ? -1.6 - size * 0.7 : 1.6), y: middle.y }
    : { x: middle.x, y: middle.y + off };
  return words(at, 'FOLD: this edge lies on the fold and is not cut', size, {
    align: 'middle',
    turn: upright ? 90 : 0,
    weight: 'bold'
  });
}

/** A short stroke across a notch's own line, where it stands on the sew line. */
function tick(sew: Point, edge: Point): Mark {
  const length = Math.hypot(edge.x - sew.x, edge.y - sew.y);
  if (length < 0.01) return line([sew], THIN);
  const ux = (edge.x - sew.x) / length;
  const uy = (edge.y - sew.y) / length;
  return line(
    [
      { x: sew.x - uy * 1.5, y: sew.y + ux * 1.5 },
      { x: sew.x + uy * 1.5, y: sew.y - ux * 1.5 }
    ],
    THIN
  );
}

/** Holes closer than this to one that says how to mark them don't say it again: the words would run into each other. */
const WORDED_WITHIN: Millimetres = 90;

/** Drill holes and the words at them, and the words of internal lines. */
function notes(piece: LaidPiece, label: LabelWords): Mark[][] {
  const worded: Point[] = [];
  const holes = piece.drillHoles.map(({ at, note }) => {
    const said = worded.some((other) => Math.hypot(other.x - at.x, other.y - at.y) < WORDED_WITHIN);
    if (!said) worded.push(at);
    return [
      ring(at, 2, THIN),
      line(
        [
          { x: at.x - 3.5, y: at.y },
          { x: at.x + 3.5, y: at.y }
        ],
        THIN
      ),
      line(
        [
          { x: at.x, y: at.y - 3.5 },
          { x: at.x, y: at.y + 3.5 }
        ],
        THIN
      ),
      ...(note ? [words({ x: at.x + 4.5, y: at.y + 1 }, note, 3.2)] : []),
      ...(label.singlePly && !said
        ? [words({ x: at.x + 4.5, y: at.y - 3.4 }, 'mark with thread or chalk, don’t pierce', 3)]
        : [])
    ];
  });
  const lines = piece.internalLines.map(({ points, note }) => {
    const from = points[Math.floor((points.length - 1) / 2)];
    const to = points[Math.floor((points.length - 1) / 2) + 1];
    if (!note || !from || !to) return [];
    const turn = readable((Math.atan2(to.y - from.y, to.x - from.x) * 180) / Math.PI);
    const middle = { x: (from.x + to.x) / 2, y: (from.y + to.y) / 2 };
    const up = ((turn + 90) * Math.PI) / 180;
    return [
      words({ x: middle.x + Math.cos(up), y: middle.y + Math.sin(up) }, note, 3.2, { align: 'middle', turn })
    ];
  });
  return [...holes, ...lines];
}

/** A direction turned by half a circle where words along it would stand on their heads. */
function readable(turn: number): number {
  return turn > 90 ? turn - 180 : turn <= -90 ? turn + 180 : turn;
}

interface LabelLine {
  readonly text: string;
  readonly size: number;
  readonly weight: 'regular' | 'bold';
}

/** The label's lines for a name of size 1, fullest first: what does not fit is shortened, down to the number. */
function labelForms(piece: LaidPiece, label: LabelWords): LabelLine[][] {
  const name: LabelLine = { text: piece.panel, size: 1, weight: 'bold' };
  const hand = handWords(piece.hand);
  const second = (text: string): LabelLine => ({ text, size: 0.72, weight: 'regular' });
  const copies = piece.copies > 1 ? `gives ${piece.copies}` : '';
  const last = [hand, copies, `order ${label.order}`, `no. ${piece.number}`].filter(Boolean).join(' · ');
  return [
    [name, second(piece.garment), second(last)],
    [{ ...name, text: [piece.panel, hand].filter(Boolean).join(', ') }, second(piece.garment)],
    [{ ...name, text: `${piece.number} ${piece.panel}${hand ? `, ${hand}` : ''}` }],
    [{ ...name, text: String(piece.number) }]
  ];
}

function drawLabel(piece: LaidPiece, label: LabelWords, lettering: Lettering): Mark[] {
  const obstacles = [
    [piece.grain.from, piece.grain.to],
    ...piece.cutOuts.map((outline) => [...outline, outline[0]!]),
    ...piece.internalLines.map(({ points }) => points),
    ...(piece.foldLine ? [[piece.foldLine.from, piece.foldLine.to]] : []),
    ...piece.drillHoles.map(({ at }) => [
      { x: at.x - 4, y: at.y },
      { x: at.x + 4, y: at.y }
    ])
  ];
  const outline = piece.sew ?? piece.cut;
  const forms = labelForms(piece, label);
  for (const [i, form] of forms.entries()) {
    const block = blockOf(form, lettering);
    const found = placeLabel(
      outline,
      obstacles,
      piece.label,
      block.width * LARGEST_NAME,
      block.height * LARGEST_NAME
    );
    const size = found.scale * LARGEST_NAME;
    const least = i === forms.length - 1 ? 0 : SMALLEST_NAME;
    if (size >= least) return setLines(form, found.centre, Math.max(size, 1.5), found.turn, block.height);
  }
  return [];
}

/** Space that a block of lines takes when its name is of size 1, with air all round. */
function blockOf(form: readonly LabelLine[], lettering: Lettering): { width: number; height: number } {
  return {
    width: Math.max(...form.map(({ text, size, weight }) => lettering.width(text, size, weight))) + 0.6,
    height: form.reduce((sum, { size }) => sum + size * LEADING, 0) + 0.3
  };
}

const LEADING = 1.2;

function setLines(
  form: readonly LabelLine[],
  centre: Point,
  scale: number,
  turn: number,
  height: number
): Mark[] {
  const radians = (turn * Math.PI) / 180;
  let down = ((height - 0.3) / 2) * scale;
  return form.map(({ text, size, weight }) => {
    // The capitals stand in the middle of their line.
    const base = down - (size * (LEADING + CAPITAL) * scale) / 2;
    down -= size * LEADING * scale;
    return words(
      { x: centre.x - base * Math.sin(radians), y: centre.y + base * Math.cos(radians) },
      text,
      size * scale,
      { weight, align: 'middle', turn }
    );
  });
}
