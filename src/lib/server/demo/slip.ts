import type { Panel } from '$lib/pattern/panel';
import { at, curve, hem, panel, seam, strip, to } from './drawing';

/* A slip on the bias: front and back whole, each its own mirror image, straps from what is left. */
export const slip: readonly Panel[] = [
  panel({
    id: 'front',
    name: 'Front',
    symmetric: true,
    turns: 'bias',
    grainTolerance: 1,
    start: at(-330, 0),
    edges: [
      hem('hem', [curve(-220, -40, -110, -56, 0, -56), curve(110, -56, 220, -40, 330, 0)], 12),
      seam('side, left', [curve(286, 220, 214, 420, 206, 560), curve(204, 640, 226, 700, 238, 752)]),
      seam('top, left', [curve(200, 800, 170, 850, 128, 890)], 10),
      seam('top', [curve(84, 830, 40, 806, 0, 806), curve(-40, 806, -84, 830, -128, 890)], 10),
      seam('top, right', [curve(-170, 850, -200, 800, -238, 752)], 10),
      seam('side, right', [curve(-226, 700, -204, 640, -206, 560), curve(-214, 420, -286, 220, -330, 0)])
    ],
    grain: [at(0, 700), at(0, 100)],
    notches: [
      ['side, left', 570],
      ['side, right', 192]
    ]
  }),
  panel({
    id: 'back',
    name: 'Back',
    symmetric: true,
    turns: 'bias',
    grainTolerance: 1,
    start: at(-334, 0),
    edges: [
      hem('hem', [curve(-222, -40, -112, -58, 0, -58), curve(112, -58, 222, -40, 334, 0)], 12),
      seam('side, right', [curve(290, 220, 216, 420, 208, 560), curve(206, 640, 224, 700, 234, 752)]),
      seam('top', [curve(160, 704, 80, 680, 0, 680), curve(-80, 680, -160, 704, -234, 752)], 10),
      seam('side, left', [curve(-224, 700, -206, 640, -208, 560), curve(-216, 420, -290, 220, -334, 0)])
    ],
    grain: [at(0, 640), at(0, 100)],
    notches: [
      ['side, right', 570],
      ['side, left', 192]
    ]
  }),
  strip('strap', 'Strap', 12, 420, { howMany: 2, turns: 'bias', grainTolerance: 1 }),
  panel({
    id: 'facing',
    name: 'Front facing',
    symmetric: true,
    turns: 'free',
    start: at(-216, 0),
    edges: [
      seam('foot', [curve(-140, -30, -70, -44, 0, -44), curve(70, -44, 140, -30, 216, 0)], 6),
      seam('side, left', [to(226, 44)], 15),
      seam('top, left', [curve(192, 92, 160, 140, 120, 178)], 10),
      seam('top', [curve(80, 122, 40, 96, 0, 96), curve(-40, 96, -80, 122, -120, 178)], 10),
      seam('top, right', [curve(-160, 140, -192, 92, -226, 44)], 10),
      seam('side, right', [to(-216, 0)], 15)
    ],
    grain: [at(0, 80), at(0, -30)]
  })
];
