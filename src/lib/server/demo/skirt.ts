import type { Panel } from '$lib/pattern/panel';
import { at, curve, fold, hem, opening, pair, panel, seam, stroke, strip, to } from './drawing';

/* An A-line skirt with a waistband, pockets in the side seams and a drape that hangs over the left hip only. */
export const skirt: readonly Panel[] = [
  panel({
    id: 'front',
    name: 'Front',
    start: at(0, 0),
    edges: [
      hem('hem', [curve(130, 0, 240, 8, 352, 34)]),
      seam('side', [to(250, 470), curve(240, 540, 222, 610, 186, 668)]),
      seam('waist', [curve(130, 652, 66, 646, 0, 645)], 12),
      fold('centre front', [to(0, 0)])
    ],
    grain: [at(100, 560), at(100, 160)],
    notches: [
      ['side', 470],
      ['side', 630],
      ['waist', 92]
    ],
    lines: [{ path: stroke(at(88, 650), at(96, 560), at(104, 651)), note: 'Dart' }],
    holes: [{ at: at(96, 566), note: 'Point of the dart' }]
  }),
  panel({
    id: 'back',
    name: 'Back',
    ...pair('right'),
    start: at(0, 0),
    edges: [
      hem('hem', [curve(130, 0, 250, 8, 366, 36)]),
      seam('side', [to(262, 472), curve(252, 542, 232, 612, 194, 670)]),
      seam('waist', [curve(136, 654, 70, 648, 0, 646)], 12),
      opening('centre back', [to(0, 0)], 25)
    ],
    grain: [at(110, 560), at(110, 160)],
    notches: [
      ['side', 472],
      ['side', 632],
      ['centre back', 210, 2]
    ],
    lines: [{ path: stroke(at(84, 651), at(96, 530), at(108, 652)), note: 'Dart' }],
    holes: [{ at: at(96, 538), note: 'Point of the dart' }]
  }),
  strip('waistband', 'Waistband', 70, 780, {
    notches: [
      ['side', 195],
      ['side', 390, 2],
      ['side', 585]
    ],
    edges: [
      seam('foot', [to(70, 0)], 20),
      seam('side', [to(70, 780)], 12),
      seam('head', [to(0, 780)], 20),
      seam('other side', [to(0, 0)], 12)
    ]
  }),
  panel({
    id: 'pocket',
    name: 'Pocket bag',
    ...pair('left', 4),
    start: at(0, 0),
    edges: [
      seam('bag', [curve(70, -16, 148, 10, 160, 96), curve(166, 150, 140, 190, 96, 214)]),
      seam('top', [to(0, 258)]),
      seam('side', [to(0, 0)])
    ],
    grain: [at(52, 210), at(52, 40)],
    turns: 'bothWays',
    grainTolerance: 3,
    notches: [['side', 60]]
  }),
  panel({
    id: 'drape',
    name: 'Drape, left hip',
    note: 'One only, over the left hip. Pleats towards the back.',
    start: at(0, 0),
    edges: [
      hem('hem', [curve(120, -46, 300, -20, 410, 96)], 15),
      seam('side', [curve(380, 190, 352, 262, 330, 352)]),
      seam('waist', [curve(240, 330, 120, 322, 28, 340)], 12),
      opening('front edge', [curve(48, 220, 40, 110, 0, 0)], 15)
    ],
    grain: [at(180, 300), at(180, 40)],
    turns: 'oneWay',
    notches: [
      ['waist', 90],
      ['waist', 120],
      ['waist', 180],
      ['waist', 210]
    ],
    lines: [
      { path: stroke(at(236, 331), at(226, 250)), note: 'Pleat' },
      { path: stroke(at(206, 328), at(198, 250)), note: 'Pleat' }
    ]
  })
];
