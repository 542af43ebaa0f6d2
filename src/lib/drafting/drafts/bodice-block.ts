import { mapPath, pathLength, placeAt, splitAt, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { length, oneOf } from '../choices';
import { Construction, joined, straight } from '../construction';
import { between, towards, turned } from '../curves';
import { dartBetween, dartInto, type Dart } from '../darts';
import type { Draft } from '../draft';
import { INLAY, Pieces, type DrawnEdge } from '../pieces';
import { armholeOf, drawBodice, SHOULDER_EASE, type BackFrame, type FrontFrame } from './bodice-frame';

/*
 * Bodice block, front and back, with waist darts and a bust dart that may lie at the armhole, shoulder, neck or side.
 */

export const bodiceChoices = [
  length('bustEase', 'Ease at the bust', 'Added to the whole bust; woven cloth needs 4 to 5 cm at least.', {
    default: 60,
    min: 20,
    max: 160
  }),
  length('waistEase', 'Ease at the waist', 'Added to the whole waist.', { default: 30, min: 10, max: 100 })
] as const;

/** Notches of the armhole, from the underarm, which the sleeve shares. */
export const armholeNotches = { front: 75, back: 85 } as const;

export const bodiceBlock: Draft = {
  id: 'bodice-block',
  version: 1,
  name: 'Bodice block',
  about:
    'Front and back to the waist with waist and bust darts. Proportions of neck, front and bust dart after the published formulas of the Bunka blocks, as remembered; widths and lengths from the body.',
  needs: [
    'bust',
    'waist',
    'backNeckToWaist',
    'shoulderLength',
    'armscyeDepth',
    'backWidth',
    'bustSpan',
    'shoulderToBustPoint'
  ],
  mayUse: [],
  choices: [
    oneOf('bustDart', 'Place of the bust dart', 'The same intake, closed here and opened there.', [
      ['shoulder', 'Shoulder'],
      ['side', 'Side'],
      ['armhole', 'Armhole'],
      ['neck', 'Neck']
    ]),
    ...bodiceChoices,
    oneOf('opening', 'Opening', 'Where the bodice is put on: the other centre lies on the fold.', [
      ['back', 'Centre back'],
      ['front', 'Centre front']
    ])
  ],
  draw(body, chosen) {
    const s = new Construction();
    const frames = drawBodice(s, body, chosen);
    const pieces = new Pieces();
    const opensBack = chosen.word('opening') === 'back';
    const back = drawBackPiece(pieces, frames.back, opensBack);
    const front = drawFrontPiece(s, pieces, frames.front, chosen.word('bustDart') as DartPlace, !opensBack);
    pieces.seam('Shoulder', ['front', ...front.shoulder], ['back', 'shoulder'], {
      ease: SHOULDER_EASE,
      smooth: ['start', 'end']
    });
    pieces.seam('Side', ['front', ...front.side], ['back', 'side'], { smooth: ['start', 'end'] });
    const armhole = armholeOf(frames);
    s.length('Armhole, front', armhole.front, 'along the curve, dart closed');
    s.length('Armhole, back', armhole.back, 'along the curve');
    const B = body.bust!;
    const W = body.waist!;
    return {
      panels: pieces.panels,
      sheet: s.sheet(),
      seams: pieces.seams,
      totals: [
        {
          level: 'bust',
          body: B,
          ease: chosen.number('bustEase'),
          gap: 0,
          finished: 2 * (frames.back.width + frames.front.width)
        },
        {
          level: 'waist',
          body: W,
          ease: chosen.number('waistEase'),
          gap: 0,
          finished: 2 * (back + front.waist)
        },
        {
          level: 'armhole',
          body: body.armscyeGirth ?? null,
          ease: armhole.front + armhole.back - (body.armscyeGirth ?? 0),
          gap: 0,
          finished: armhole.front + armhole.back
        }
      ],
      bones: [],
      supplies: [],
      warnings: [],
      cautions: []
    };
  }
};

function waistDart(waist: Path, at: number, width: number, point: number): Dart | null {
  if (width < 3) return null;
  return dartInto(waist, Math.max(width / 2 + 10, at), width, placeAt(waist, at).point.y - point, {
    x: 0,
    y: -1
  });
}

/** The edges of a waist with its dart, drawn from the centre out. */
function waistEdges(waist: Path, dart: Dart | null): { edges: DrawnEdge[]; finished: number } {
  if (!dart) return { edges: [{ id: 'waist', path: waist, backward: true }], finished: pathLength(waist) };
  return {
    edges: [
      { id: 'waist-2', path: dart.after, backward: true },
      { id: 'waist-dart', path: dart.cap, backward: true },
      { id: 'waist-1', path: dart.before, backward: true }
    ],
    finished: pathLength(dart.before) + pathLength(dart.after)
  };
}

function drawBackPiece(pieces: Pieces, frame: BackFrame, opens: boolean): number {
  const dart = waistDart(
    frame.waist,
    frame.dartAt,
    frame.dart,
    placeAt(frame.armhole, pathLength(frame.armhole)).point.y + 5
  );
  const { edges, finished } = waistEdges(frame.waist, dart);
  const armhole = pathLength(frame.armhole);
  pieces.piece({
    id: 'back',
    name: 'Back',
    hand: 'right',
    ...(opens ? { paired: true } : { fold: 'centre' }),
    grain: [
      { x: frame.width * 0.3, y: 60 },
      { x: frame.width * 0.3, y: 260 }
    ],
    edges: [
      { id: 'neck', path: frame.neck },
      { id: 'shoulder', path: frame.shoulder },
      {
        id: 'armhole',
        path: frame.armhole,
        notches: [armhole - armholeNotches.back, armhole - armholeNotches.back + 8]
      },
      { id: 'side', path: frame.side, allowance: INLAY },
      ...edges,
      { id: 'centre', path: frame.centre, backward: true, ...(opens ? { allowance: INLAY } : {}) }
    ],
    lines: dart ? dart.legs.map((path) => ({ path, note: 'Dart' })) : [],
    drills: dart ? [{ at: dart.drill, note: 'Dart, just short of its point' }] : []
  });
  return finished;
}

type DartPlace = 'armhole' | 'shoulder' | 'neck' | 'side';

/** The bust dart ends this far from the bust point. From memory: 1.3 to 2.5 cm for darts that run up or down, up to 5 for the side. */
const SHORT = 25;

function drawFrontPiece(
  s: Construction,
  pieces: Pieces,
  frame: FrontFrame,
  place: DartPlace,
  opens: boolean
): { shoulder: [string, ...string[]]; side: [string, ...string[]]; waist: number } {
  const P = frame.bustPoint;
  const by = (path: Path, degrees: number) => mapPath(path, (p) => turned(p, P, degrees));
  const { angle } = frame;
  let neck: Path[] = [frame.neck];
  let shoulder: Path[] = [frame.shoulder];
  let armhole: Path[];
  let side: Path[] = [frame.side];
  let bust: Dart;
  if (place === 'armhole') {
    bust = dartTo(frame.armholeUpper, frame.armholeLower, P);
    armhole = [frame.armholeUpper, frame.armholeLower];
  } else if (place === 'shoulder') {
    const [inner, outer] = splitAt(frame.shoulder, pathLength(frame.shoulder) / 2);
    const swung = by(outer, angle);
    bust = dartTo(inner, swung, P);
    shoulder = [inner, swung];
    armhole = [joined(by(frame.armholeUpper, angle), frame.armholeLower)];
  } else if (place === 'neck') {
    const [inner, outer] = splitAt(frame.neck, pathLength(frame.neck) / 2);
    const swung = by(outer, angle);
    bust = dartTo(inner, swung, P);
    neck = [inner, swung];
    shoulder = [by(frame.shoulder, angle)];
    armhole = [joined(by(frame.armholeUpper, angle), frame.armholeLower)];
  } else {
    const [upper, lower] = splitAt(frame.side, pathLength(frame.side) * 0.3);
    const swung = by(upper, -angle);
    bust = dartTo(swung, lower, P);
    side = [swung, lower];
    armhole = [joined(frame.armholeUpper, by(frame.armholeLower, -angle))];
  }
  s.line(
    'Bust dart, where it is sewn',
    joined(bust.legs[0], straight(bust.point, bust.after.from)),
    `opened at the ${place}`
  );
  const waist = waistDart(frame.waist, frame.dartAt, frame.dart, P.y + SHORT);
  const { edges: waistline, finished } = waistEdges(frame.waist, waist);
  const cap = (after: boolean): DrawnEdge[] => (after ? [{ id: 'bust-dart', path: bust.cap }] : []);
  const numbered = (id: string, paths: readonly Path[], more: Partial<DrawnEdge> = {}): DrawnEdge[] =>
    paths.length === 1
      ? [{ id, path: paths[0]!, ...more }]
      : [
          { id: `${id}-1`, path: paths[0]!, ...more },
          ...cap(true),
          { id: `${id}-2`, path: paths[1]!, ...more }
        ];
  const edgesOfArmhole = numbered('armhole', armhole);
  const lastArmhole = edgesOfArmhole[edgesOfArmhole.length - 1]!;
  edgesOfArmhole[edgesOfArmhole.length - 1] = notchedArmhole(lastArmhole);
  pieces.piece({
    id: 'front',
    name: 'Front',
    hand: 'left',
    ...(opens ? { paired: true } : { fold: 'centre' }),
    grain: [
      { x: frame.width * 0.16, y: P.y - 90 },
      { x: frame.width * 0.16, y: P.y + 60 }
    ],
    edges: [
      ...numbered('neck', neck),
      ...numbered('shoulder', shoulder),
      ...edgesOfArmhole,
      ...numbered('side', side, { allowance: INLAY }),
      ...waistline,
      { id: 'centre', path: frame.centre, backward: true, ...(opens ? { allowance: INLAY } : {}) }
    ],
    lines: [...bust.legs, ...(waist?.legs ?? [])].map((path) => ({ path, note: 'Dart' })),
    drills: [bust, ...(waist ? [waist] : [])].map(({ drill }) => ({
      at: drill,
      note: 'Dart, just short of its point'
    }))
  });
  const names = (id: string, paths: readonly Path[]): [string, ...string[]] =>
    paths.length === 1 ? [id] : [`${id}-1`, `${id}-2`];
  return { shoulder: names('shoulder', shoulder), side: names('side', side), waist: finished };
}

/** A notch at its distance from the underarm, where the edge is that long. */
function notchedArmhole(edge: DrawnEdge): DrawnEdge {
  const size = pathLength(edge.path);
  return size > armholeNotches.front + 5 ? { ...edge, notches: [size - armholeNotches.front] } : edge;
}

/** The dart between two edges that were turned apart about the bust point; sewn it ends short of it. */
function dartTo(before: Path, after: Path, bustPoint: Point): Dart {
  const open = dartBetween(before, after, bustPoint);
  const middle = between(endOf(before), after.from, 0.5);
  const short = towards(bustPoint, middle, SHORT);
  return dartBetween(open.before, open.after, short);
}

const endOf = (path: Path): Point => path.segments[path.segments.length - 1]!.to;
