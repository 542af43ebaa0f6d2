import { pathLength, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { lacingCaution } from '../cautions';
import { count, length, oneOf, yesNo } from '../choices';
import { Construction, straight } from '../construction';
import { sweep, through } from '../curves';
import { CannotDraft, type Bone, type Draft } from '../draft';
import { INLAY, Pieces, SEAM, type DrawnEdge } from '../pieces';

/*
 * A panelled corset bodice: four to seven panels a half, seams over the bust. Every seam takes in the same on both of its sides, so
 * that the two edges are mirror images and meet by construction. Reduction at the waist and a parallel lacing gap as usual in teaching
 * practice (5 cm each).
 */

const levels = ['top', 'bust', 'underBust', 'waist', 'bottom'] as const;

export const corset: Draft = {
  id: 'corset',
  version: 1,
  name: 'Panelled corset bodice',
  about:
    'Four to seven panels a half with seams over the bust, a waist taken in by 5 cm and a parallel lacing gap of 5 cm unless chosen otherwise. Proportions are our own; reduction and gap follow usual teaching practice.',
  needs: [
    'bust',
    'underBust',
    'waist',
    'hip',
    'waistToHip',
    'shoulderToBustPoint',
    'shoulderToUnderBust',
    'shoulderToWaist'
  ],
  mayUse: ['highBust', 'bustSpan'],
  choices: [
    count('panels', 'Panels, per half', 'More panels spread the shaping over more seams.', {
      default: 6,
      min: 4,
      max: 7
    }),
    length('reduction', 'Waist reduction', 'How much smaller than the body the waist is laced.', {
      default: 50,
      min: 0,
      max: 120
    }),
    length('gap', 'Lacing gap', 'What stays open between the laced edges, parallel.', {
      default: 50,
      min: 0,
      max: 100
    }),
    length('above', 'Height above the bust point', 'Where the top edge lies over the bust.', {
      default: 60,
      min: 20,
      max: 110
    }),
    length('below', 'Length below the waist', 'Where the lower edge lies at the side.', {
      default: 120,
      min: 60,
      max: 200
    }),
    length('topEase', 'Ease at the top edge', 'Negative holds closer.', { default: 0, min: -40, max: 40 }),
    oneOf('centreFront', 'Centre front', 'On the fold, or with a seam (for a busk).', [
      ['fold', 'On the fold'],
      ['seam', 'With a seam']
    ]),
    yesNo('modesty', 'Modesty panel', 'Behind the lacing, 5 cm wider than the gap.', true)
  ],
  draw(body, chosen) {
    const s = new Construction();
    const n = chosen.number('panels');
    const gap = s.given('g', 'Lacing gap', chosen.number('gap'));
    const r = s.given('r', 'Waist reduction', chosen.number('reduction'));
    const W = s.given('W', 'Waist', body.waist!);
    const y = levelsOf(body, chosen);
    const bottomBody =
      body.waist! + Math.min(1, chosen.number('below') / body.waistToHip!) * (body.hip! - body.waist!);
    const topBody = body.highBust ?? (body.bust! + body.underBust!) / 2;
    const wanted: Record<(typeof levels)[number], number> = {
      top: topBody + chosen.number('topEase') - gap,
      bust: body.bust! - gap,
      underBust: body.underBust! - gap,
      waist: W - r - gap,
      bottom: bottomBody + 20 - gap
    };
    for (const level of levels)
      s.length(
        `Half at the ${words[level]}`,
        wanted[level] / 2,
        'half of body, ease and reduction, less the gap'
      );
    if (wanted.waist < 350) throw new CannotDraft('waist', null, 'The laced waist would be under 35 cm.');

    const base = s.length('Width of a panel at the waist', wanted.waist / 2 / n, `half at the waist ÷ ${n}`);
    // What each level has more than the waist, spread over the seams between the panels: at the bust mostly in front, below behind.
    const seams = n - 1;
    const share = (level: (typeof levels)[number], k: number): number => {
      const weights = Array.from({ length: seams }, (_, j) => weightOf(level, (j + 1) / n));
      return weights[k]! / weights.reduce((sum, one) => sum + one, 0);
    };
    const spread = (level: (typeof levels)[number], k: number): number =>
      ((wanted[level] - wanted.waist) / 2) * share(level, k);
    const pieces = new Pieces();
    const bones: Bone[] = [];
    /** The edge at seam k, k = 0 the centre front and n the centre back: how far it stands out from the panel's base at each level. */
    const edge = (k: number): Path => {
      if (k === 0 || k === n) return straight({ x: 0, y: y.top }, { x: 0, y: y.bottom });
      return through(levels.map((level): Point => ({ x: spread(level, k - 1) / 2, y: y[level] })));
    };
    for (let panel = 0; panel < n; panel++) {
      const left = moved(mirroredX(edge(panel)), panel * base);
      const right = moved(edge(panel + 1), (panel + 1) * base);
      const narrow = levels.some((level) => xAt(right, level) - xAt(left, level) < 18);
      if (narrow)
        throw new CannotDraft(null, 'panels', 'A panel would be narrower than 1.8 cm: take fewer panels.');
      s.line(`Panel ${panel + 1}, towards the front`, left, 'half of what its seam takes in');
      s.line(`Panel ${panel + 1}, towards the back`, right, 'half of what its seam takes in');
      const top = s.line(`Panel ${panel + 1}, top`, across(left, right, 'start'), 'square to both seams');
      const bottom = s.line(
        `Panel ${panel + 1}, lower edge`,
        across(left, right, 'end'),
        'square to both seams'
      );
      const onFold = panel === 0 && chosen.word('centreFront') === 'fold';
      const first = panel === 0;
      const last = panel === n - 1;
      const waistAt = (path: Path) => distanceTo(path, y.waist);
      const edges: DrawnEdge[] = [
        { id: 'top', path: top, role: 'opening' },
        {
          id: 'back',
          path: right,
          ...(last ? { role: 'opening' as const, allowance: INLAY } : { notches: [waistAt(right)] })
        },
        { id: 'bottom', path: bottom, backward: true, role: 'hem' },
        { id: 'front', path: left, backward: true, ...(first ? {} : { notches: [waistAt(left)] }) }
      ];
      const middle = (panel + 0.5) * base;
      pieces.piece({
        id: `panel-${panel + 1}`,
        name: `Panel ${panel + 1}${first ? ', centre front' : last ? ', centre back' : ''}`,
        hand: 'left',
        ...(onFold ? { fold: 'front' } : { paired: true }),
        grain: [
          { x: middle, y: y.bust },
          { x: middle, y: y.waist + 0.5 * (y.bottom - y.waist) }
        ],
        edges,
        lines: [
          {
            path: straight({ x: panel * base + 2, y: y.waist }, { x: (panel + 1) * base - 2, y: y.waist }),
            note: 'Waist tape'
          },
          ...(last
            ? [9, 27].map((x) => ({
                path: moved(right, -x),
                note: 'Boning channel, either side of the eyelets'
              }))
            : [])
        ]
      });
      if (!last) {
        bones.push({ name: `Over seam ${panel + 1}`, count: 2, length: pathLength(right) - 20 });
      } else bones.push({ name: 'Back edge', count: 4, length: pathLength(right) - 20 });
      if (first) {
        if (!onFold) pieces.seam('Centre front', ['panel-1', 'front'], ['panel-1', 'front']);
        bones.push({
          name: onFold ? 'Centre front' : 'Centre front, or a busk',
          count: onFold ? 1 : 2,
          length: pathLength(left) - 20
        });
      }
    }
    for (let panel = 1; panel < n; panel++)
      pieces.seam(`Seam ${panel}`, [`panel-${panel}`, 'back'], [`panel-${panel + 1}`, 'front'], {
        smooth: ['start', 'end']
      });
    const height = y.bottom - y.top;
    if (chosen.yes('modesty')) pieces.piece(modesty(gap + 50, height));
    const finished = (level: (typeof levels)[number]) => {
      let sum = 0;
      for (let panel = 0; panel < n; panel++)
        sum +=
          xAt(moved(edge(panel + 1), (panel + 1) * base), level) -
          xAt(moved(mirroredX(edge(panel)), panel * base), level);
      return 2 * sum;
    };
    return {
      panels: pieces.panels,
      sheet: s.sheet(),
      seams: pieces.seams,
      totals: [
        { level: 'topEdge', body: topBody, ease: chosen.number('topEase'), gap, finished: finished('top') },
        { level: 'bust', body: body.bust!, ease: 0, gap, finished: finished('bust') },
        { level: 'underBust', body: body.underBust!, ease: 0, gap, finished: finished('underBust') },
        { level: 'waist', body: W, ease: -r, gap, finished: finished('waist') },
        { level: 'hem', body: bottomBody, ease: 20, gap, finished: finished('bottom') }
      ],
      bones,
      supplies: [
        { name: 'Waist tape', count: 1, length: finished('waist') + 40 },
        { name: 'Lacing', count: 1, length: Math.ceil((height * 11) / 100) * 100 },
        { name: 'Eyelets', count: 2 * Math.max(4, Math.round(height / 25)), length: null }
      ],
      warnings:
        r > 0.1 * W
          ? [
              `The waist is taken in by ${((100 * r) / W).toFixed(0)} % of the body: more than a tenth is not advised.`
            ]
          : [],
      cautions: [lacingCaution]
    };

    function xAt(path: Path, level: (typeof levels)[number]): number {
      const index = levels.indexOf(level);
      if (path.segments.length === 1) return path.from.x;
      return index === 0 ? path.from.x : path.segments[index - 1]!.to.x;
    }
  }
};

const words = {
  top: 'top edge',
  bust: 'bust',
  underBust: 'under-bust',
  waist: 'waist',
  bottom: 'lower edge'
} as const;

function levelsOf(body: Parameters<Draft['draw']>[0], chosen: Parameters<Draft['draw']>[1]) {
  const bust = body.shoulderToBustPoint!;
  const underBust = body.shoulderToUnderBust!;
  const waist = body.shoulderToWaist!;
  if (underBust < bust + 35)
    throw new CannotDraft(
      'shoulderToUnderBust',
      null,
      'The under-bust lies less than 3.5 cm below the bust point.'
    );
  if (waist < underBust + 20)
    throw new CannotDraft('shoulderToWaist', null, 'The waist lies less than 2 cm below the under-bust.');
  const top = bust - chosen.number('above');
  return { top, bust, underBust, waist, bottom: waist + chosen.number('below') };
}

/** How much of a level's spread a seam takes, by its place from the centre front (0) to the centre back (1). */
function weightOf(level: (typeof levels)[number], at: number): number {
  const hump = (centre: number, width: number) => Math.exp(-(((at - centre) / width) ** 2));
  switch (level) {
    case 'top':
    case 'bust':
      return 0.25 + 1.6 * hump(0.3, 0.18);
    case 'underBust':
      return 1;
    case 'waist':
      return 1;
    case 'bottom':
      return 0.5 + 1.1 * hump(0.55, 0.3);
  }
}

const moved = (path: Path, dx: number): Path => each(path, (p) => ({ x: p.x + dx, y: p.y }));
const mirroredX = (path: Path): Path => each(path, (p) => ({ x: -p.x, y: p.y }));

function each(path: Path, move: (p: Point) => Point): Path {
  return {
    from: move(path.from),
    segments: path.segments.map((segment) =>
      segment.kind === 'line'
        ? { kind: 'line', to: move(segment.to) }
        : { kind: 'cubic', c1: move(segment.c1), c2: move(segment.c2), to: move(segment.to) }
    )
  };
}

/** The top or lower edge of a panel, square to both of its sides, from front to back. */
function across(left: Path, right: Path, end: 'start' | 'end'): Path {
  const tip = (path: Path): { at: Point; along: Point } => {
    const points = [
      path.from,
      ...path.segments.flatMap((one) => (one.kind === 'line' ? [one.to] : [one.c1, one.c2, one.to]))
    ];
    const [a, b] = end === 'start' ? [points[0]!, points[1]!] : [points.at(-2)!, points.at(-1)!];
    return { at: end === 'start' ? a : b, along: { x: b.x - a.x, y: b.y - a.y } };
  };
  const from = tip(left);
  const to = tip(right);
  const square = ({ x, y }: Point): Point => ({ x: y, y: -x });
  return sweep(from.at, square(from.along), to.at, square(to.along));
}

/** How far along a curve through the levels the given one lies: the length of its stretches up to there. */
function distanceTo(path: Path, y: number): number {
  let sum = 0;
  let from = path.from;
  for (const segment of path.segments) {
    if (Math.abs(from.y - y) < 1e-9) break;
    if (segment.kind === 'line')
      return (
        sum +
        ((y - from.y) / (segment.to.y - from.y)) * Math.hypot(segment.to.x - from.x, segment.to.y - from.y)
      );
    sum += pathLength({ from, segments: [segment] });
    from = segment.to;
  }
  return sum;
}

function modesty(width: number, height: number): Parameters<Pieces['piece']>[0] {
  const [a, b, c, d] = [
    { x: 0, y: 0 },
    { x: width, y: 0 },
    { x: width, y: height },
    { x: 0, y: height }
  ] as const;
  return {
    id: 'modesty',
    name: 'Modesty panel',
    symmetric: true,
    grain: [
      { x: width / 2, y: 0.2 * height },
      { x: width / 2, y: 0.8 * height }
    ],
    edges: [
      { id: 'top', path: straight(a, b), allowance: SEAM },
      { id: 'right', path: straight(b, c) },
      { id: 'bottom', path: straight(c, d) },
      { id: 'left', path: straight(d, a) }
    ],
    note: '5 cm wider than the lacing gap.'
  };
}
