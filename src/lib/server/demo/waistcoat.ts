import type { Panel } from '$lib/pattern/panel';
import { at, curve, opening, pair, panel, seam, stroke, strip, to } from './drawing';

/* A waistcoat: fronts and welts of the main cloth, back and lining of the lining, a single watch pocket on the left. */

const front = {
  start: at(-18, 0),
  edges: [
    seam('hem', [to(60, -58), to(196, 22)], 20),
    seam('side', [curve(188, 110, 192, 190, 204, 262)], 20),
    seam('armhole', [curve(160, 278, 138, 360, 136, 492)], 10),
    seam('shoulder', [to(52, 520)], 12),
    seam('neck', [curve(40, 430, 6, 330, -18, 250)], 10),
    opening('front edge', [to(-18, 0)], 12)
  ],
  grain: [at(70, 400), at(70, 40)]
} as const;

const back = {
  start: at(0, 0),
  edges: [
    seam('hem', [curve(70, 0, 140, 6, 206, 14)], 20),
    seam('side', [curve(196, 104, 198, 186, 210, 258)], 20),
    seam('armhole', [curve(166, 282, 154, 380, 156, 486)], 10),
    seam('shoulder', [to(72, 524)], 12),
    seam('neck', [curve(58, 510, 30, 502, 0, 501)], 10),
    seam('centre back', [curve(6, 360, -6, 180, 0, 0)])
  ],
  grain: [at(100, 420), at(100, 80)]
} as const;

export const waistcoat: readonly Panel[] = [
  panel({
    ...front,
    id: 'front',
    name: 'Front',
    ...pair('left'),
    edges: [...front.edges],
    notches: [
      ['armhole', 130],
      ['side', 120]
    ],
    lines: [
      { path: stroke(at(54, 96), at(166, 112)), note: 'Welt' },
      { path: stroke(at(100, 92), at(96, 250)), note: 'Dart' }
    ],
    holes: [
      { at: at(0, 232), note: 'Button' },
      { at: at(0, 176), note: 'Button' },
      { at: at(0, 120), note: 'Button' },
      { at: at(0, 64), note: 'Button' },
      { at: at(0, 8), note: 'Button' }
    ]
  }),
  strip('welt', 'Welt', 46, 118, { ...pair('left'), symmetric: false, turns: 'oneWay' }),
  panel({
    id: 'watch-pocket',
    name: 'Watch pocket, left',
    note: 'One only, on the left front.',
    start: at(0, 0),
    edges: [
      seam('foot', [curve(20, -8, 56, -8, 78, 4)], 10),
      seam('side', [to(84, 78)], 10),
      seam('mouth', [to(0, 66)], 20),
      seam('front', [to(0, 0)], 10)
    ],
    grain: [at(40, 62), at(40, 8)],
    turns: 'oneWay'
  }),
  panel({
    ...back,
    id: 'back',
    name: 'Back',
    ...pair('right', 4),
    edges: [...back.edges],
    role: 'lining',
    notches: [
      ['armhole', 110, 2],
      ['side', 118]
    ]
  }),
  panel({
    ...front,
    id: 'front-lining',
    name: 'Front, lining',
    ...pair('left'),
    edges: [...front.edges],
    role: 'lining'
  }),
  panel({
    ...front,
    id: 'front-interlining',
    name: 'Front, interlining',
    ...pair('left'),
    edges: [...front.edges],
    role: 'interlining'
  }),
  strip('strap', 'Back strap', 44, 250, { howMany: 2, role: 'lining' })
];
