import { endOf, pathLength, splitAt, straightPath, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import type { ClothRole, Panel } from '$lib/pattern/panel';
import type { Millimetres } from '$lib/units/measure';
import type { Chosen } from '../choices';
import { straight } from '../construction';
import type { Bone } from '../draft';
import { distanceAcross, distanceAtLevel } from '../levels';
import { Pieces, SEAM, type DrawnEdge, type DrawnPiece } from '../pieces';
import type { BustierLines } from './lines';

/*
 * From the lines of the bustier to its pieces, seams and bones. The front is drawn with its dart closed.
 */

export interface BustierPieces {
  readonly pieces: Pieces;
  readonly centreCup: Panel;
  readonly sideCup: Panel;
  readonly front: Panel;
  readonly back: Panel;
  readonly bones: readonly Bone[];
  /** Loops along one edge of the centre back. */
  readonly loops: number;
  readonly backLength: Millimetres;
}

/** How far from the edge of the centre back the outermost loops and the bone stand. */
const EDGE: Millimetres = 10;
/** A bone is this much shorter than its channel at each end. */
export const SHORT: Millimetres = 10;
const FACING_BELOW_UNDER_BUST: Millimetres = 30;

export function bustierPieces(lines: BustierLines, chosen: Chosen): BustierPieces {
  const pieces = new Pieces();
  const { y, under } = lines;
  const cb = chosen.number('openingHalf');
  const backLength = y.sideEnd - y.chest;
  const spacing = chosen.number('loopSpacing');
  const loops = Math.floor((backLength - 2 * EDGE) / spacing) + 1;
  const firstLoop = (backLength - (loops - 1) * spacing) / 2;
  const loopPlaces = Array.from({ length: loops }, (_, i) => firstLoop + i * spacing);
  const boned = chosen.yes('boning');
  const stay = chosen.yes('waistStay');
  const channel = (path: Path) => ({ path, note: 'Boning channel' });
  const sideNotches = [y.underBust, y.waist].map((level) => distanceAtLevel(lines.side, level));
  const sideAllowance = chosen.number('sideAllowance');
  const waistAcross = (from: number, side: Path) => ({
    path: straight({ x: from, y: y.waist }, pointAt(side, y.waist)),
    note: 'Waist stay'
  });

  const centreCupDrawn: DrawnPiece = {
    id: 'centre-cup',
    name: 'Centre cup',
    paired: true,
    hand: 'left',
    grain: upright(lines.bridge.x + (under.x - lines.bridge.x) * 0.7, y.underBust - 35, y.chest + 15),
    edges: [
      { id: 'seam', path: lines.innerSeam, notches: [lines.toBustPoint] },
      { id: 'lower', path: lines.innerLower, backward: true, notches: [pathLength(lines.innerLower) / 2] },
      { id: 'top', path: lines.innerTop }
    ]
  };
  const bustX = endOf(lines.outerLower).x;
  const sideCupDrawn: DrawnPiece = {
    id: 'side-cup',
    name: 'Side cup',
    paired: true,
    hand: 'left',
    grain: upright((bustX + lines.outerLower.from.x) / 2, y.underBust - 45, y.chest + 25),
    edges: [
      { id: 'seam', path: lines.outerSeam, notches: [lines.toBustPoint] },
      { id: 'lower', path: lines.outerLower, backward: true, notches: [pathLength(lines.outerLower) / 2] },
      { id: 'top', path: lines.outerTop, backward: true }
    ]
  };
  const onFold = chosen.word('centreFront') === 'fold';
  const closed = lines.outerLowerClosed;
  const frontDrawn: DrawnPiece = {
    id: 'front',
    name: 'Front',
    ...(onFold ? { fold: 'centre' } : { paired: true, hand: 'left' as const }),
    grain: upright(under.x * 0.6, y.hem - 20, y.underBust + 20),
    edges: [
      { id: 'bridge', path: straight({ x: 0, y: y.chest }, lines.bridge) },
      { id: 'inner-cup', path: lines.innerLower, notches: [pathLength(lines.innerLower) / 2] },
      { id: 'outer-cup', path: closed, backward: true, notches: [pathLength(closed) / 2] },
      { id: 'top', path: lines.frontTop },
      { id: 'side', path: lines.side, notches: sideNotches, allowance: sideAllowance },
      { id: 'hem', path: lines.basque },
      ...(lines.bluntEnd ? [{ id: 'end', path: lines.bluntEnd }] : []),
      { id: 'centre', path: straight({ x: 0, y: y.basque }, { x: 0, y: y.chest }) }
    ],
    lines: [
      ...(boned
        ? [
            channel(straight({ x: 0, y: y.chest }, { x: 0, y: y.basque })),
            channel(straight(under, { x: under.x, y: hemUnder(lines) }))
          ]
        : []),
      ...(stay ? [waistAcross(0, lines.side)] : [])
    ]
  };
  const sideEnd = endOf(lines.side);
  const backDrawn: DrawnPiece = {
    id: 'back',
    name: 'Back',
    paired: true,
    hand: 'right',
    grain: upright(cb + (sideEnd.x - cb) * 0.4, y.sideEnd - 20, y.chest + 20),
    edges: [
      { id: 'top', path: straight({ x: cb, y: y.chest }, lines.side.from) },
      { id: 'side', path: lines.side, notches: sideNotches, allowance: sideAllowance },
      { id: 'hem', path: straight(sideEnd, { x: cb, y: y.sideEnd }) },
      {
        id: 'centre',
        path: straight({ x: cb, y: y.chest }, { x: cb, y: y.sideEnd }),
        backward: true,
        role: 'opening',
        allowance: chosen.number('backTurning'),
        notches: loopPlaces
      }
    ],
    lines: [
      ...(boned ? [channel(straight({ x: cb + EDGE, y: y.chest }, { x: cb + EDGE, y: y.sideEnd }))] : []),
      ...(stay ? [waistAcross(cb, lines.side)] : [])
    ]
  };

  const centreCup = pieces.piece(centreCupDrawn);
  const sideCup = pieces.piece(sideCupDrawn);
  const front = pieces.piece(frontDrawn);
  const back = pieces.piece(backDrawn);
  pieces.seam('Cup seam', ['centre-cup', 'seam'], ['side-cup', 'seam'], { smooth: ['start', 'end'] });
  pieces.seam('Under the centre cup', ['front', 'inner-cup'], ['centre-cup', 'lower']);
  pieces.seam('Under the side cup', ['front', 'outer-cup'], ['side-cup', 'lower'], { smooth: ['start'] });
  pieces.seam('Side', ['front', 'side'], ['back', 'side'], { smooth: ['start', 'end'] });
  if (!onFold)
    pieces.seam('Centre front', ['front', 'centre'], ['front', 'centre'], {
      smooth: lines.bluntEnd ? ['start', 'end'] : ['end']
    });

  const body = [centreCupDrawn, sideCupDrawn, frontDrawn, backDrawn];
  if (chosen.yes('facing')) facings(pieces, lines, [centreCupDrawn, sideCupDrawn], frontDrawn, backDrawn, cb);
  if (chosen.yes('lining')) for (const one of body) pieces.piece(copyOf(one, 'lining', 'lining', 'lining'));
  if (chosen.yes('interlining'))
    for (const one of body) pieces.piece(copyOf(one, 'interlining', 'interlining', 'interlining'));
  if (chosen.yes('foamCups'))
    for (const one of [centreCupDrawn, sideCupDrawn])
      pieces.piece({
        ...copyOf(one, 'foam', 'foam', 'interlining', 0),
        note: 'Foam butts: no allowances.'
      });
  laced(pieces, chosen, { backLength, loops, loopPlaces });

  const bone = (name: string, count: number, length: Millimetres): Bone => ({
    name,
    count,
    length: length - 2 * SHORT
  });
  const bones = boned
    ? [
        bone('Centre front', 1, y.basque - y.chest),
        bone('Under the cup', 2, hemUnder(lines) - y.underBust),
        bone('Side seam', 2, pathLength(lines.side)),
        bone('Centre back', 2, backLength)
      ]
    : [];
  return { pieces, centreCup, sideCup, front, back, bones, loops, backLength };
}

/** Where the line under the cup meets the lower edge. */
function hemUnder({ basque, bluntEnd, under, y }: BustierLines): Millimetres {
  const end = endOf(basque);
  if (bluntEnd && end.x >= under.x) return y.basque;
  return splitAt(basque, distanceAcross(basque, under.x))[1].from.y;
}

const pointAt = (path: Path, level: Millimetres): Point =>
  splitAt(path, distanceAtLevel(path, level))[1].from;

const upright = (x: Millimetres, bottom: Millimetres, top: Millimetres): [Point, Point] => [
  { x, y: bottom },
  { x, y: top }
];

/** The same piece in another cloth, its marks for bones left out. */
function copyOf(
  piece: DrawnPiece,
  id: string,
  word: string,
  role: ClothRole,
  allowance?: Millimetres
): DrawnPiece {
  return {
    ...piece,
    id: `${piece.id}-${id}`,
    name: `${piece.name}, ${word}`,
    role,
    lines: [],
    edges: piece.edges.map((edge) => (allowance === undefined ? edge : { ...edge, allowance }))
  };
}

/** The cups again whole, front and back down to a little below the under-bust. */
function facings(
  pieces: Pieces,
  lines: BustierLines,
  cups: readonly DrawnPiece[],
  front: DrawnPiece,
  back: DrawnPiece,
  cb: Millimetres
): void {
  for (const cup of cups) pieces.piece(copyOf(cup, 'facing', 'facing', 'main'));
  const { y } = lines;
  const level = Math.min(y.underBust + FACING_BELOW_UNDER_BUST, y.waist - 5);
  const [side] = splitAt(lines.side, distanceAtLevel(lines.side, level));
  const sideEdge: DrawnEdge = {
    id: 'side',
    path: side,
    allowance: front.edges.find(({ id }) => id === 'side')!.allowance ?? SEAM,
    notches: [distanceAtLevel(side, y.underBust)]
  };
  const bottom = (x: Millimetres): DrawnEdge => ({
    id: 'bottom',
    path: straight(endOf(side), { x, y: level })
  });
  const keep = (piece: DrawnPiece, ids: readonly string[]) =>
    piece.edges.filter(({ id }) => ids.includes(id));
  pieces.piece({
    ...copyOf(front, 'facing', 'facing', 'main'),
    grain: upright(lines.under.x * 0.3, level - 5, y.chest + 10),
    edges: [
      ...keep(front, ['bridge', 'inner-cup', 'outer-cup', 'top']),
      sideEdge,
      bottom(0),
      { id: 'centre', path: straight({ x: 0, y: level }, { x: 0, y: y.chest }) }
    ]
  });
  pieces.piece({
    ...copyOf(back, 'facing', 'facing', 'main'),
    grain: upright(cb + 30, level - 5, y.chest + 10),
    edges: [
      ...keep(back, ['top']),
      sideEdge,
      bottom(cb),
      {
        id: 'centre',
        path: straight({ x: cb, y: level }, { x: cb, y: y.chest }),
        role: 'opening',
        allowance: back.edges.find(({ id }) => id === 'centre')!.allowance ?? SEAM
      }
    ]
  });
  pieces.seam('Side of the facing', ['front-facing', 'side'], ['back-facing', 'side'], {
    smooth: ['start']
  });
}

interface Lacing {
  readonly backLength: Millimetres;
  readonly loops: number;
  readonly loopPlaces: readonly Millimetres[];
}

const STRIP_WIDTH: Millimetres = 30;
const LOOP_STRIP_WIDTH: Millimetres = 25;
/** Bias strips longer than this find no place on narrow cloth; more of them are cut instead. */
const LONGEST_BIAS: Millimetres = 600;
/** A modesty panel is this much wider than the opening. */
const BEHIND: Millimetres = 50;

function laced(pieces: Pieces, chosen: Chosen, { backLength, loops, loopPlaces }: Lacing): void {
  if (chosen.yes('lacingStrip')) {
    pieces.piece({
      ...rectangle('lacing-strip', 'Lacing strip', 2 * STRIP_WIDTH, backLength, { right: loopPlaces }),
      howMany: 2,
      symmetric: true,
      note: 'Folded lengthwise along its middle; the loops lie between it and the centre back, at the notches.',
      lines: [{ path: straight({ x: STRIP_WIDTH, y: 0 }, { x: STRIP_WIDTH, y: backLength }), note: 'Fold' }]
    });
    pieces.seam('Lacing strip', ['back', 'centre'], ['lacing-strip', 'right']);
  }
  const cord = 2 * loops * chosen.number('loopLength');
  const strips = Math.ceil(cord / LONGEST_BIAS);
  pieces.piece({
    ...rectangle('loop-strip', 'Loop strip, bias', LOOP_STRIP_WIDTH, cord / strips, { allowance: 0 }),
    howMany: strips,
    symmetric: true,
    turns: 'bias',
    note: `For ${loops} loops on each side.`
  });
  if (chosen.yes('modesty'))
    pieces.piece({
      ...rectangle('modesty', 'Modesty panel', 2 * chosen.number('openingHalf') + BEHIND, backLength, {}),
      symmetric: true,
      note: 'Sewn to one side of the centre back, loose at the other.'
    });
}

/** Width across and length down, grain along the length. */
function rectangle(
  id: string,
  name: string,
  width: Millimetres,
  length: Millimetres,
  { allowance, right }: { readonly allowance?: Millimetres; readonly right?: readonly Millimetres[] }
): DrawnPiece {
  const [a, b, c, d] = [
    { x: 0, y: 0 },
    { x: width, y: 0 },
    { x: width, y: length },
    { x: 0, y: length }
  ] as const;
  const given = allowance === undefined ? {} : { allowance };
  return {
    id,
    name,
    grain: upright(width / 2, length * 0.8, length * 0.2),
    edges: [
      { id: 'top', path: straightPath([a, b]), ...given },
      { id: 'right', path: straightPath([b, c]), ...given, ...(right ? { notches: right } : {}) },
      { id: 'bottom', path: straightPath([c, d]), ...given },
      { id: 'left', path: straightPath([d, a]), ...given }
    ]
  };
}
