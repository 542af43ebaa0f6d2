import type { Panel } from '$lib/pattern/panel';
import { at, curve, fold, opening, pair, panel, seam, to } from './drawing';

/* A fitted bodice with seams from the shoulder over the bust: front on the fold, laced at the centre back. */

const centreFront = {
  start: at(0, 0),
  edges: [
    seam('waist', [curve(24, 0, 48, 1, 72, 4)]),
    seam('front seam', [curve(84, 60, 98, 110, 99, 168), curve(100, 230, 88, 300, 96, 384)]),
    seam('shoulder', [to(64, 397)], 12),
    seam('neck', [curve(62, 340, 44, 302, 0, 300)], 10),
    fold('centre front', [to(0, 0)])
  ],
  grain: [at(36, 270), at(36, 60)]
} as const;

const sideFront = {
  start: at(0, 0),
  edges: [
    seam('waist', [curve(28, -3, 58, -4, 88, -2)]),
    seam('side', [curve(92, 60, 100, 120, 112, 188)], 20),
    seam('armhole', [curve(72, 196, 50, 260, 44, 352)], 10),
    seam('shoulder', [to(10, 366)], 12),
    seam('front seam', [curve(6, 290, -22, 232, -20, 166), curve(-18, 108, -8, 56, 0, 0)])
  ],
  grain: [at(40, 230), at(40, 30)]
} as const;

export const bodice: readonly Panel[] = [
  panel({
    ...centreFront,
    id: 'centre-front',
    name: 'Centre front',
    edges: [...centreFront.edges],
    notches: [
      ['front seam', 168],
      ['waist', 36]
    ]
  }),
  panel({
    ...sideFront,
    id: 'side-front',
    name: 'Side front',
    ...pair('left'),
    edges: [...sideFront.edges],
    notches: [
      ['front seam', 200],
      ['armhole', 80],
      ['side', 95]
    ]
  }),
  panel({
    id: 'side-back',
    name: 'Side back',
    ...pair('right'),
    start: at(0, 0),
    edges: [
      seam('waist', [curve(24, 1, 50, 0, 76, -2)]),
      seam('side', [curve(82, 58, 92, 118, 104, 186)], 20),
      seam('armhole', [curve(78, 198, 62, 262, 60, 340)], 10),
      seam('shoulder', [to(24, 352)], 12),
      seam('back seam', [curve(18, 280, -8, 220, -8, 164), curve(-8, 104, -4, 52, 0, 0)])
    ],
    grain: [at(36, 230), at(36, 30)],
    notches: [
      ['back seam', 190, 2],
      ['armhole', 78, 2],
      ['side', 95]
    ]
  }),
  panel({
    id: 'centre-back',
    name: 'Centre back',
    ...pair('right'),
    start: at(0, 0),
    edges: [
      seam('waist', [curve(22, 0, 44, 1, 66, 2)]),
      seam('back seam', [curve(68, 56, 76, 112, 82, 170), curve(88, 240, 86, 312, 104, 392)]),
      seam('shoulder', [to(70, 408)], 12),
      seam('neck', [curve(60, 392, 34, 386, 0, 386)], 10),
      opening('centre back', [to(0, 0)], 30)
    ],
    grain: [at(34, 330), at(34, 70)],
    notches: [['back seam', 170, 2]],
    lines: [
      {
        path: { from: at(14, 12), segments: [to(14, 374)] },
        note: 'Eyelets, 25 mm apart'
      }
    ]
  }),
  panel({
    ...centreFront,
    id: 'centre-front-interlining',
    name: 'Centre front, interlining',
    edges: [...centreFront.edges],
    role: 'interlining'
  }),
  panel({
    ...sideFront,
    id: 'side-front-interlining',
    name: 'Side front, interlining',
    ...pair('left'),
    edges: [...sideFront.edges],
    role: 'interlining'
  })
];
