import type { Point } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';
import { arrowHead, CAPITAL, line, pen, ring, words, type Lettering, type Mark } from './drawing';
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
  return hand === 'either' ? '' : `${hand} hand`;
}

/** Everything of `piece`, in cloth coordinates. */
export function drawPiece(piece: LaidPiece, label: LabelWords, lettering: Lettering): Mark[] {
  const marks: Mark[] = [];
  if (piece.sew) marks.push(line(piece.sew, SEW_PEN, true));
  for (const { points } of piece.internalLines) marks.push(line(points, INNER_PEN));
  if (piece.foldLine) marks.push(line([piece.foldLine.from, piece.foldLine.to], FOLD_PEN));
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
  marks.push(line(piece.cut, CUT_PEN, true));
  return marks;
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
