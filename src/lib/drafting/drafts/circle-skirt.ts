import { arcPath, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import type { Panel } from '$lib/pattern/panel';
import { count, length, oneOf } from '../choices';
import { Construction, straight } from '../construction';
import type { Draft } from '../draft';
import { Pieces, SEAM } from '../pieces';

/*
 * Circle skirts: r = W ÷ (2π·f), f the share of a circle; hem at r + length. The radius is that of the sew line at the waist: the
 * allowance lies inside it, nearer the centre. The widely published formula; table in tests/reference.
 */

const shares = { full: 1, threeQuarter: 0.75, half: 0.5, quarter: 0.25 } as const;
type Share = keyof typeof shares;

/** The waist radius of a circle skirt: W ÷ (2π·f). */
export function waistRadius(waist: number, share: number): number {
  return waist / (2 * Math.PI * share);
}

export const circleSkirt: Draft = {
  id: 'circle-skirt',
  version: 1,
  name: 'Circle skirt',
  about:
    'A ring, or part of one, that falls from the waist: full, three-quarter, half or quarter circle, in one or several gores. Radius by the usual formula, waist ÷ (2π × share of the circle).',
  needs: ['waist'],
  mayUse: [],
  choices: [
    oneOf('share', 'Share of a circle', 'How full the hem is.', [
      ['full', 'Full'],
      ['threeQuarter', 'Three-quarter'],
      ['half', 'Half'],
      ['quarter', 'Quarter']
    ]),
    length('length', 'Length', 'From the waist line to the hem.', { default: 600, min: 150, max: 1200 }),
    count('gores', 'Gores', 'Into how many panels the ring is parted.', { default: 2, min: 1, max: 8 }),
    length('ease', 'Ease at the waist', 'Added to the measured waist.', { default: 10, min: 0, max: 60 }),
    length('hem', 'Hem allowance', 'Turned up, or rolled, at the hem; a curved hem takes little.', {
      default: 10,
      min: 0,
      max: 30
    })
  ],
  draw(body, chosen) {
    const s = new Construction();
    const share = shares[chosen.word('share') as Share];
    const W = s.given('W', 'Waist', body.waist!);
    const e = s.given('e', 'Ease at the waist', chosen.number('ease'));
    const L = s.given('L', 'Length', chosen.number('length'));
    const gores = chosen.number('gores');
    s.length('Waist of the skirt', W + e, 'W + e');
    const r = s.length('Radius of the waist', waistRadius(W + e, share), `(W + e) ÷ (2π × ${share})`);
    const R = s.length('Radius of the hem', r + L, 'r + L');
    const angle = s.angle('Angle of a gore', (360 * share) / gores, `360° × ${share} ÷ ${gores}`);
    const half = (angle * Math.PI) / 360;
    const centre = s.point('O', { x: 0, y: 0 }, 'the centre of the circle');
    // The gore hangs straight down: its middle runs along y.
    const from = Math.PI / 2 - half;
    const waist = s.line('Waist', arc(centre, r, from, half), 'circle about O, radius r');
    const hem = s.line('Hem', arc(centre, R, from, half), 'circle about O, radius R');
    const pieces = new Pieces();
    const gore: Gore = { r, R, hem: chosen.number('hem'), grain: grainFrom(r, L) };
    if (angle > 359.9) ring(pieces, gore);
    else {
      const on = (radius: number, a: number) => ({ x: radius * Math.cos(a), y: radius * Math.sin(a) });
      const first = s.line('Side, first', straight(on(r, from), on(R, from)), 'R − r');
      const to = from + 2 * half;
      const second = s.line('Side, second', straight(on(r, to), on(R, to)), 'R − r');
      pieces.piece({
        id: 'gore',
        name: gores === 1 ? 'Skirt' : 'Skirt gore',
        edges: [
          { id: 'waist', path: waist, notches: [lengthOfArc(r, angle) / 2] },
          { id: 'second', path: second },
          { id: 'hem', path: hem, backward: true, role: 'hem', allowance: gore.hem },
          { id: 'first', path: first, backward: true }
        ],
        grain: gore.grain,
        howMany: gores,
        symmetric: true,
        note: 'The grain runs down the middle of the gore. Let the skirt hang before the hem is levelled.'
      });
      pieces.seam(gores === 1 ? 'Seam' : 'Between two gores', ['gore', 'second'], ['gore', 'first'], {
        smooth: ['start', 'end']
      });
    }
    const across = angle > 180 ? 2 * R : 2 * R * Math.sin(half);
    return {
      panels: pieces.panels,
      sheet: s.sheet(),
      seams: pieces.seams,
      totals: [{ level: 'waist', body: W, ease: e, gap: 0, finished: gores * lengthOfArc(r, angle) }],
      bones: [],
      supplies: [],
      warnings:
        Math.min(across, R) > 1500
          ? ['Each panel is wider than most cloth in every way it can lie: take more gores.']
          : [],
      cautions: []
    };
  }
};

interface Gore {
  readonly r: number;
  readonly R: number;
  readonly hem: number;
  readonly grain: readonly [Point, Point];
}

const grainFrom = (r: number, L: number): readonly [Point, Point] => [
  { x: 0, y: r + L * 0.15 },
  { x: 0, y: r + L * 0.85 }
];

const arc = (centre: Point, radius: number, from: number, half: number): Path =>
  arcPath({ centre, rx: radius, ry: radius, start: from, sweep: 2 * half });

const lengthOfArc = (radius: number, degrees: number): number => (radius * degrees * Math.PI) / 180;

/** A whole circle without a seam: the hem outside, the waist cut out of it at its cut line, and a slit to step in by. */
function ring(pieces: Pieces, { r, R, hem, grain }: Gore): void {
  const centre = { x: 0, y: 0 };
  const halves = [0, Math.PI].map((start) => arcPath({ centre, rx: R, ry: R, start, sweep: Math.PI }));
  const panel = pieces.piece({
    id: 'ring',
    name: 'Skirt, whole circle',
    edges: halves.map((path, k) => ({ id: `hem-${k + 1}`, path, role: 'hem' as const, allowance: hem })),
    grain,
    symmetric: true,
    lines: [
      { path: straight({ x: 0, y: -(r - SEAM) }, { x: 0, y: -(r + 200) }), note: 'Slit for the opening' },
      { path: arcPath({ centre, rx: r, ry: r, start: 0, sweep: 2 * Math.PI }), note: 'Waist, sew line' }
    ],
    note: 'The waist is cut out at its cut line, 1 cm inside the sew line. Let the skirt hang before the hem is levelled.'
  });
  panel.cutOuts.push(
    arcPath({ centre, rx: r - SEAM, ry: r - SEAM, start: 0, sweep: 2 * Math.PI }) as Panel['cutOuts'][number]
  );
}
