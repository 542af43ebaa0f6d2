import { mapPath, pathLength, reversed, splitAt, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { lacingCaution } from '../cautions';
import { amount, count, length, oneOf, yesNo, type Chosen } from '../choices';
import { Construction, straight } from '../construction';
import { through } from '../curves';
import type { Bone, Draft, Supply, Total } from '../draft';
import { totalOff } from '../draft';
import type { Body } from '../measurement-points';
import { INLAY, Pieces, SEAM, type DrawnPiece } from '../pieces';
import { crossing, distanceAtLevel, drawFrame, IN, type Frame } from './bustier-frame';

/*
 * A strapless bustier with cups, a dipped basque front and a laced back. Common practice of the trade, no published source.
 */

const moved = (path: Path, dx: number): Path => mapPath(path, (p) => ({ x: p.x + dx, y: p.y }));

export const bustier: Draft = {
  id: 'bustier',
  version: 1,
  name: 'Fitted bustier',
  about:
    'Strapless, with cups seamed over the bust, a front that dips to a basque, and a laced back. A hand method; common practice of the trade, without a published source.',
  needs: [
    'bust',
    'underBust',
    'waist',
    'hip',
    'bustSpan',
    'acrossShoulder',
    'armscyeDepth',
    'shoulderToBustPoint',
    'shoulderToUnderBust',
    'shoulderToWaist'
  ],
  mayUse: ['hemGirth', 'highBust'],
  choices: [
    length('length', 'Length below the waist', 'Where the full length lies; the basque dips 3 in lower.', {
      default: 6 * IN,
      min: 3 * IN,
      max: 9 * IN
    }),
    length(
      'neck',
      'Neck width',
      'Where the neck point lies on the shoulder line: the seam over the bust starts from the middle of the shoulder.',
      {
        default: 2.75 * IN,
        min: 2 * IN,
        max: 4 * IN
      }
    ),
    length('rise', 'Cups above the chest line', 'How high the seam over the bust ends.', {
      default: 0.5 * IN,
      min: 0.25 * IN,
      max: IN
    }),
    length('bridge', 'Bridge between the cups', 'How far apart the cups stand at the centre front.', {
      default: IN,
      min: 0.5 * IN,
      max: 2 * IN
    }),
    oneOf('end', 'End of the basque', 'The front ends 4 in across, or in a point.', [
      ['blunt', 'Blunt, 4 in across'],
      ['sharp', 'In a point']
    ]),
    oneOf('centreFront', 'Centre front', 'On the fold, or with a seam.', [
      ['fold', 'On the fold'],
      ['seam', 'With a seam']
    ]),
    length(
      'opening',
      'Back set in, per half',
      'Half of the opening that the lacing spans; more only for a very open back.',
      {
        default: 2 * IN,
        min: 1.5 * IN,
        max: 3 * IN
      }
    ),
    length(
      'sideAllowance',
      'Allowance at the side',
      'Cloth to let out at the side: 1 in, 1½ in to be safe.',
      {
        default: INLAY,
        min: SEAM,
        max: 1.5 * IN
      }
    ),
    length('turning', 'Turning at the back edge', 'Turned in at the laced edge; no zip.', {
      default: INLAY,
      min: SEAM,
      max: 40
    }),
    yesNo('lining', 'Lining', 'The same panels once more, in lining.', true),
    oneOf('stiffening', 'Stiffening of the cups', 'What shapes the cups from inside.', [
      ['none', 'None'],
      ['interlining', 'Interlining'],
      ['foam', 'Foam cups, butted']
    ]),
    yesNo('facing', 'Facing', 'A strip along the top of front and back.', false),
    yesNo('modesty', 'Modesty panel', 'A panel behind the lacing, 5 cm wider than the opening.', true),
    yesNo('lacingStrip', 'Lacing strip', 'A doubled strip that stiffens each laced edge.', true),
    length('loopSpacing', 'Spacing of the loops', 'From loop to loop along the back edge.', {
      default: 25,
      min: 12,
      max: 60
    }),
    amount('lacing', 'Lacing, times the edge', 'How much lacing is cut for the length of the back edge.', {
      default: 9,
      min: 5,
      max: 15,
      unit: '×'
    }),
    count('bonesAtBack', 'Bones at each back edge', 'One, or two with the loops between.', {
      default: 2,
      min: 1,
      max: 2
    })
  ],
  draw(body, chosen) {
    const s = new Construction();
    const frame = drawFrame(s, body, chosen);
    const pieces = new Pieces();
    const parts = linesOf(frame, chosen);
    s.line('Centre back', parts.back.centre, 'set in for the lacing');
    cups(pieces, frame, chosen);
    front(pieces, frame, parts, chosen);
    back(pieces, parts, chosen);
    seamsOf(pieces, chosen);
    extras(pieces, parts, chosen);
    const totals = totalsOf(s, body, frame, parts, chosen);
    return {
      panels: pieces.panels,
      sheet: s.sheet(),
      seams: pieces.seams,
      totals,
      bones: bonesOf(parts, chosen),
      supplies: suppliesOf(body, parts, chosen),
      warnings: warningsOf(body, totals),
      cautions: [lacingCaution]
    };
  }
};

/** The lines of front and back once the dart below the cups is closed. */
interface Parts {
  readonly front: {
    readonly bridge: Path;
    readonly underOuter: Path;
    readonly top: Path;
    readonly side: Path;
    readonly basque: Path;
    readonly end: Path | null;
    readonly centre: Path;
  };
  readonly back: { readonly top: Path; readonly side: Path; readonly hem: Path; readonly centre: Path };
  readonly channels: { readonly front: Path; readonly cup: Path };
}

function linesOf(frame: Frame, chosen: Chosen): Parts {
  const { intake, levels, side } = frame;
  const closed = moved(side, -intake);
  const setIn = chosen.number('opening');
  const top = closed.from;
  const low = endOf(closed);
  const bridge = straight({ x: 0, y: levels.chest }, frame.innerLower.from);
  const under = frame.half - intake / 2;
  const cupEnd = hemAt(frame, under);
  return {
    front: {
      bridge,
      underOuter: moved(frame.outerLower, -intake),
      top: moved(frame.frontTop, -intake),
      side: closed,
      basque: frame.basque,
      end: frame.end,
      centre: straight({ x: 0, y: levels.chest }, { x: 0, y: levels.tip })
    },
    back: {
      top: straight({ x: setIn, y: levels.chest }, top),
      side: closed,
      hem: straight({ x: setIn, y: levels.sideEnd }, low),
      centre: straight({ x: setIn, y: levels.chest }, { x: setIn, y: levels.sideEnd })
    },
    channels: {
      front: straight({ x: 0, y: levels.chest }, { x: 0, y: levels.tip }),
      cup: straight({ x: under, y: levels.underBust }, { x: under, y: cupEnd })
    }
  };
}

/** Where the closed front ends at x. */
function hemAt(frame: Frame, x: number): number {
  // The basque runs from the side inward: turned a quarter, it runs down.
  const quarter = mapPath(frame.basque, (p) => ({ x: p.y, y: -p.x }));
  const inner = endOf(frame.basque).x;
  return x <= inner ? frame.levels.tip : crossing(quarter, -x).x;
}

const endOf = (path: Path): Point => path.segments[path.segments.length - 1]!.to;

function cups(pieces: Pieces, frame: Frame, chosen: Chosen): void {
  const { chest, underBust } = frame.levels;
  const grainAt = (x: number): [Point, Point] => [
    { x, y: chest + 0.25 * (underBust - chest) },
    { x, y: chest + 0.7 * (underBust - chest) }
  ];
  const centre: DrawnPiece = {
    id: 'centre-cup',
    name: 'Centre cup',
    hand: 'left',
    paired: true,
    grain: grainAt(frame.half - 0.9 * IN),
    edges: [
      { id: 'top', path: frame.innerTop, role: 'opening' },
      { id: 'lower', path: frame.innerLower },
      { id: 'seam', path: frame.innerSeam, backward: true, notches: [frame.bustPoint.inner] }
    ]
  };
  const outer: DrawnPiece = {
    id: 'side-cup',
    name: 'Side cup',
    hand: 'left',
    paired: true,
    grain: grainAt(frame.half + 1.2 * IN),
    edges: [
      { id: 'seam', path: frame.outerSeam, notches: [frame.bustPoint.outer] },
      { id: 'lower', path: frame.outerLower },
      { id: 'top', path: frame.outerTop, backward: true, role: 'opening' }
    ]
  };
  for (const cup of [centre, outer]) {
    pieces.piece(cup);
    if (chosen.yes('lining'))
      pieces.piece({ ...cup, id: `${cup.id}-lining`, name: `${cup.name}, lining`, role: 'lining' });
    const stiffening = chosen.word('stiffening');
    if (stiffening === 'interlining')
      pieces.piece({
        ...cup,
        id: `${cup.id}-interlining`,
        name: `${cup.name}, interlining`,
        role: 'interlining'
      });
    if (stiffening === 'foam')
      pieces.piece({
        ...cup,
        id: `${cup.id}-foam`,
        name: `${cup.name}, foam`,
        role: 'interlining',
        edges: cup.edges.map((edge) => ({ ...edge, allowance: 0 })),
        note: 'Foam butts at every edge: no allowance.'
      });
  }
}

function front(pieces: Pieces, frame: Frame, parts: Parts, chosen: Chosen): void {
  const { bridge, underOuter, top, side, basque, end, centre } = parts.front;
  const onFold = chosen.word('centreFront') === 'fold';
  const waistNotch = distanceAtLevel(side, frame.levels.waist);
  const grainX = onFold ? 0.6 * IN : IN;
  const drawn: DrawnPiece = {
    id: 'front',
    name: 'Front',
    hand: 'left',
    ...(onFold ? { fold: 'centre' } : { paired: true }),
    grain: [
      { x: grainX, y: frame.levels.underBust },
      { x: grainX, y: frame.levels.waist + IN }
    ],
    edges: [
      { id: 'bridge', path: bridge, role: 'opening' },
      { id: 'cup-inner', path: frame.innerLower },
      { id: 'cup-outer', path: underOuter },
      { id: 'top', path: top, role: 'opening' },
      { id: 'side', path: side, allowance: chosen.number('sideAllowance'), notches: [waistNotch] },
      { id: 'hem', path: basque, role: 'hem' },
      ...(end ? [{ id: 'end', path: end, role: 'hem' as const }] : []),
      { id: 'centre', path: centre, backward: true }
    ],
    lines: [
      { path: parts.channels.cup, note: 'Boning channel' },
      { path: moved(side, -8), note: 'Boning channel, side' }
    ],
    note: onFold ? 'The boning channel of the centre front runs along the fold.' : ''
  };
  pieces.piece(drawn);
  if (chosen.yes('lining'))
    pieces.piece({ ...drawn, id: 'front-lining', name: 'Front, lining', role: 'lining', lines: [] });
}

function back(pieces: Pieces, parts: Parts, chosen: Chosen): void {
  const { top, side, hem, centre } = parts.back;
  const edge = centre.from.x;
  const drawn: DrawnPiece = {
    id: 'back',
    name: 'Back',
    hand: 'right',
    paired: true,
    grain: [
      { x: edge + 2 * IN, y: centre.from.y + 1.5 * IN },
      { x: edge + 2 * IN, y: endOf(centre).y - 1.5 * IN }
    ],
    edges: [
      { id: 'top', path: top, role: 'opening' },
      {
        id: 'side',
        path: side,
        allowance: chosen.number('sideAllowance'),
        notches: [distanceAtLevel(side, endOf(centre).y - 2 * IN)]
      },
      { id: 'hem', path: hem, backward: true, role: 'hem' },
      { id: 'centre', path: centre, backward: true, role: 'opening', allowance: chosen.number('turning') }
    ],
    lines: Array.from({ length: chosen.number('bonesAtBack') }, (_, k) => ({
      path: moved(centre, 8 + 18 * k),
      note: 'Boning channel, back edge'
    }))
  };
  pieces.piece(drawn);
  if (chosen.yes('lining'))
    pieces.piece({ ...drawn, id: 'back-lining', name: 'Back, lining', role: 'lining', lines: [] });
}

function seamsOf(pieces: Pieces, chosen: Chosen): void {
  for (const suffix of chosen.yes('lining') ? ['', '-lining'] : ['']) {
    const words = suffix ? ', lining' : '';
    pieces.seam(`Seam of the cups${words}`, [`centre-cup${suffix}`, 'seam'], [`side-cup${suffix}`, 'seam'], {
      smooth: ['start']
    });
    pieces.seam(
      `Centre cup to front${words}`,
      [`front${suffix}`, 'cup-inner'],
      [`centre-cup${suffix}`, 'lower']
    );
    pieces.seam(
      `Side cup to front${words}`,
      [`front${suffix}`, 'cup-outer'],
      [`side-cup${suffix}`, 'lower'],
      {
        smooth: ['end']
      }
    );
    pieces.seam(`Side${words}`, [`front${suffix}`, 'side'], [`back${suffix}`, 'side'], {
      smooth: ['start', 'end']
    });
    if (chosen.word('centreFront') === 'seam')
      pieces.seam(`Centre front${words}`, [`front${suffix}`, 'centre'], [`front${suffix}`, 'centre']);
  }
}

/** Rectangle with its upper left corner at the origin, long side down. */
function strip(
  id: string,
  name: string,
  width: number,
  height: number,
  more: Partial<DrawnPiece> = {}
): DrawnPiece {
  const [a, b, c, d] = [
    { x: 0, y: 0 },
    { x: width, y: 0 },
    { x: width, y: height },
    { x: 0, y: height }
  ] as const;
  return {
    id,
    name,
    symmetric: true,
    grain: [
      { x: width / 2, y: 0.15 * height },
      { x: width / 2, y: 0.85 * height }
    ],
    edges: [
      { id: 'top', path: straight(a, b) },
      { id: 'right', path: straight(b, c) },
      { id: 'bottom', path: straight(c, d) },
      { id: 'left', path: straight(d, a) }
    ],
    ...more
  };
}

const FACING = 50;
const LOOP = 50;

function extras(pieces: Pieces, parts: Parts, chosen: Chosen): void {
  const edge = pathLength(parts.back.centre);
  const opening = 2 * chosen.number('opening');
  if (chosen.yes('facing')) {
    pieces.piece(
      facingOf('back-facing', 'Back facing', 'right', parts.back.top, parts.back.side, parts.back.centre)
    );
    const cut = splitAt(
      reversed(parts.front.underOuter),
      Math.min(FACING, 0.6 * pathLength(parts.front.underOuter))
    )[0];
    pieces.piece(facingOf('front-facing', 'Front facing', 'left', parts.front.top, parts.front.side, cut));
  }
  if (chosen.yes('lacingStrip'))
    pieces.piece(
      strip('lacing-strip', 'Lacing strip', 40, edge, {
        howMany: 2,
        note: 'Folded lengthwise, one into each back edge.'
      })
    );
  if (chosen.yes('modesty'))
    pieces.piece(
      strip('modesty', 'Modesty panel', opening + 50, edge, { note: '5 cm wider than the opening.' })
    );
  const loops = 2 * loopsOf(parts, chosen);
  // Bias strips as short as a workroom cuts them, joined where they must be.
  const lengths = Math.ceil((loops * LOOP) / 500);
  pieces.piece(
    strip('loop-strip', 'Strip for the loops', 10, (loops * LOOP) / lengths, {
      turns: 'bias',
      howMany: lengths,
      note: `For ${loops / 2} loops at each edge, ${LOOP / 10} cm each.`
    })
  );
}

/** A strip 5 cm deep below `top`, between two lines that run down from its ends. */
function facingOf(
  id: string,
  name: string,
  hand: 'left' | 'right',
  top: Path,
  outer: Path,
  inner: Path
): DrawnPiece {
  const [down] = splitAt(outer, Math.min(FACING, 0.6 * pathLength(outer)));
  const inward = pathLength(inner) > FACING + 1 ? splitAt(inner, FACING)[0] : inner;
  const a = endOf(down);
  const b = endOf(inward);
  return {
    id,
    name,
    hand,
    paired: true,
    grain: [
      { x: (a.x + b.x) / 2, y: top.from.y + 8 },
      { x: (a.x + b.x) / 2, y: a.y - 8 }
    ],
    edges: [
      { id: 'top', path: top, role: 'opening' },
      { id: 'side', path: down },
      { id: 'lower', path: through([a, b]) },
      { id: 'inner', path: inward, backward: true }
    ]
  };
}

function loopsOf(parts: Parts, chosen: Chosen): number {
  return Math.max(2, Math.floor((pathLength(parts.back.centre) - 20) / chosen.number('loopSpacing')) + 1);
}

/** Half the girth of the closed front and the back at a level, lacing open. */
function halfAt(parts: Parts, y: number): number {
  return crossing(parts.front.side, y).x + crossing(parts.back.side, y).x - parts.back.centre.from.x;
}

function totalsOf(s: Construction, body: Body, frame: Frame, parts: Parts, chosen: Chosen): Total[] {
  const { levels, side, innerSeam, outerSeam } = frame;
  const gap = 2 * chosen.number('opening');
  const backAt = (y: number) => crossing(parts.back.side, y).x - parts.back.centre.from.x;
  // Over the cups: along the seams nothing is taken in at the bust point, so the open front counts.
  const bust = 2 * (crossing(side, levels.bust).x + backAt(levels.bust));
  const taken = crossing(outerSeam, levels.chest).x - crossing(innerSeam, levels.chest).x;
  const topEdge = 2 * (side.from.x - taken + (parts.back.side.from.x - parts.back.centre.from.x));
  const underBust = 2 * halfAt(parts, levels.underBust);
  const waist = 2 * halfAt(parts, levels.waist);
  const hem = 2 * halfAt(parts, levels.sideEnd - 0.001);
  const H = body.hemGirth ?? body.hip!;
  const share = (levels.sideEnd - levels.waist) / (levels.full - levels.waist);
  s.length('Finished at the chest line', topEdge, 'front with the cups closed + back');
  s.length('Finished over the bust', bust, 'open front + back, along the seams');
  s.length('Finished at the under-bust', underBust, 'closed front + back');
  s.length('Finished at the waist', waist, 'closed front + back');
  s.length('Finished at the end of the side', hem, 'closed front + back');
  return [
    { level: 'topEdge', body: body.highBust ?? null, ease: 0, gap, finished: topEdge },
    { level: 'bust', body: body.bust!, ease: 0, gap, finished: bust },
    { level: 'underBust', body: body.underBust!, ease: 0, gap, finished: underBust },
    { level: 'waist', body: body.waist!, ease: 0, gap, finished: waist },
    // Between waist and full length the body is taken to widen evenly: our reading.
    { level: 'hem', body: body.waist! + share * (H - body.waist!), ease: 0, gap, finished: hem }
  ];
}

function warningsOf(body: Body, totals: readonly Total[]): string[] {
  const warnings: string[] = [];
  for (const total of totals) {
    const off = totalOff(total);
    if (off === null || Math.abs(off) <= 10) continue;
    const words = {
      topEdge: 'top edge',
      bust: 'bust',
      underBust: 'under-bust',
      waist: 'waist',
      hem: 'end of the side'
    };
    warnings.push(
      `Finished, the ${words[total.level as keyof typeof words]} is ${(Math.abs(off) / 10).toFixed(1)} cm ${off > 0 ? 'wider' : 'narrower'} than body and opening ask.`
    );
  }
  const under = totals.find(({ level }) => level === 'underBust')!;
  if (totalOff(under)! > 0.5)
    warnings.push(
      `The under-bust is looser than the body by ${(totalOff(under)! / 10).toFixed(1)} cm: it is what holds a strapless bodice up. Take the side in there, or lace closer.`
    );
  return warnings;
}

function bonesOf(parts: Parts, chosen: Chosen): Bone[] {
  const bone = (name: string, number: number, channel: Path): Bone => ({
    name,
    count: number,
    length: Math.max(0, pathLength(channel) - 20)
  });
  return [
    bone('Centre front', 1, parts.channels.front),
    bone('Below the cups', 2, parts.channels.cup),
    bone('Side', 2, parts.front.side),
    bone('Back edge', 2 * chosen.number('bonesAtBack'), parts.back.centre)
  ];
}

function suppliesOf(body: Body, parts: Parts, chosen: Chosen): Supply[] {
  const edge = pathLength(parts.back.centre);
  return [
    { name: 'Lacing', count: 1, length: Math.ceil((edge * chosen.number('lacing')) / 100) * 100 },
    { name: 'Loops', count: 2 * loopsOf(parts, chosen), length: LOOP },
    { name: 'Waist stay, ribbon 25 mm wide', count: 1, length: body.waist! + 40 },
    {
      name: 'Boning tape',
      count: 1,
      length: bonesOf(parts, chosen).reduce((sum, b) => sum + b.count * (b.length + 20), 0)
    }
  ];
}
