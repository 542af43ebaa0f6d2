import type { Panel } from '$lib/pattern/panel';
import { at, curve, fold, hem, opening, pair, panel, seam, stroke, strip, to } from './drawing';

/* A blouse cut like a shirt: yoke, stand and collar, sleeves gathered into cuffs. */
export const blouse: readonly Panel[] = [
  panel({
    id: 'front',
    name: 'Front',
    ...pair('left'),
    start: at(-30, 0),
    edges: [
      hem('hem', [to(120, 0), curve(190, 2, 240, 20, 268, 60)], 20),
      seam('side', [curve(256, 160, 254, 270, 266, 392)]),
      seam('armhole', [curve(216, 400, 196, 470, 194, 596)], 10),
      seam('shoulder', [to(76, 640)], 12),
      seam('neck', [curve(70, 590, 46, 562, 0, 556), to(-30, 553)], 8),
      opening('front edge', [to(-30, 0)], 30)
    ],
    grain: [at(90, 520), at(90, 140)],
    notches: [
      ['armhole', 110],
      ['front edge', 30]
    ],
    lines: [{ path: stroke(at(0, 556), at(0, 0)), note: 'Centre front' }],
    holes: [
      { at: at(0, 520), note: 'Button' },
      { at: at(0, 430), note: 'Button' },
      { at: at(0, 340), note: 'Button' },
      { at: at(0, 250), note: 'Button' },
      { at: at(0, 160), note: 'Button' }
    ]
  }),
  panel({
    id: 'back',
    name: 'Back',
    start: at(0, 0),
    edges: [
      hem('hem', [to(150, 0), curve(210, 2, 256, 20, 284, 60)], 20),
      seam('side', [curve(272, 160, 270, 270, 282, 392)]),
      seam('armhole', [curve(236, 404, 220, 460, 216, 540)], 10),
      seam('yoke seam', [curve(144, 546, 72, 548, 0, 548)]),
      fold('centre back', [to(0, 0)])
    ],
    grain: [at(100, 480), at(100, 120)],
    notches: [
      ['yoke seam', 100],
      ['armhole', 90, 2]
    ]
  }),
  panel({
    id: 'yoke',
    name: 'Yoke',
    howMany: 2,
    start: at(0, 0),
    edges: [
      seam('back seam', [curve(72, 0, 144, -2, 200, -8)]),
      seam('armhole', [curve(198, 30, 200, 64, 206, 96)], 10),
      seam('shoulder', [to(80, 142)], 12),
      seam('neck', [curve(62, 118, 34, 108, 0, 107)], 8),
      fold('centre back', [to(0, 0)])
    ],
    grain: [at(60, 92), at(60, 16)]
  }),
  panel({
    id: 'sleeve',
    name: 'Sleeve',
    ...pair('left'),
    start: at(0, 0),
    edges: [
      seam('wrist', [curve(60, -10, 120, 8, 180, 4), curve(220, 2, 250, -6, 280, 0)]),
      seam('under front', [curve(300, 140, 330, 260, 356, 404)]),
      seam(
        'head',
        [
          curve(306, 414, 284, 470, 246, 506),
          curve(212, 538, 158, 542, 116, 508),
          curve(70, 470, 44, 424, -44, 404)
        ],
        10
      ),
      seam('under back', [curve(-26, 260, -10, 130, 0, 0)])
    ],
    grain: [at(140, 440), at(140, 60)],
    notches: [
      ['head', 118],
      ['head', 232],
      ['head', 360, 2],
      ['wrist', 200]
    ],
    lines: [{ path: stroke(at(212, 3), at(212, 118)), note: 'Slit' }]
  }),
  strip('cuff', 'Cuff', 62, 226, { howMany: 4, notches: [['side', 20]] }),
  panel({
    id: 'stand',
    name: 'Collar stand',
    howMany: 2,
    start: at(0, 0),
    edges: [
      seam('neck', [curve(70, 0, 140, 2, 222, 22)], 8),
      seam('front', [curve(232, 30, 226, 52, 200, 50)], 8),
      seam('collar seam', [curve(136, 36, 68, 32, 0, 32)], 8),
      fold('centre back', [to(0, 0)])
    ],
    grain: [at(30, 28), at(30, 4)]
  }),
  panel({
    id: 'collar',
    name: 'Collar',
    howMany: 2,
    role: 'contrast',
    start: at(0, 0),
    edges: [
      seam('stand seam', [curve(68, 0, 136, 4, 196, 18)], 8),
      seam('point', [to(226, 78)], 8),
      seam('outer edge', [curve(150, 62, 76, 60, 0, 60)], 8),
      fold('centre back', [to(0, 0)])
    ],
    grain: [at(40, 52), at(40, 8)],
    treat: { 'outer edge': 'mitred' }
  })
];
