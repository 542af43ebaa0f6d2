import type { LengthInput } from '../cloth-lengths';
import type { FlawInput } from '../cloth-flaws';
import type { WidthInput } from '../cloth-widths';

/*
 * What lies on the invented workroom's shelf: rolls, remnants, a client's own cloth, and the widths that a cloth is sold in.
 */

interface DemoLength {
  readonly key: string;
  readonly cloth: string;
  readonly input: LengthInput;
  readonly flaws: readonly FlawInput[];
}

const cm = (length: number, usableWidth: number) => ({
  length: length * 10,
  usableWidth: usableWidth * 10,
  typed: { length: `${length} cm`, usableWidth: `${usableWidth} cm` }
});

export const lengths: readonly DemoLength[] = [
  {
    key: 'loden roll',
    cloth: 'loden',
    input: {
      kind: 'roll',
      name: 'Roll 3',
      ...cm(640, 145),
      outline: null,
      batch: '2218',
      place: 'Long shelf, below',
      note: '',
      price: null
    },
    flaws: [
      { fromEnd: 1180, fromSelvedge: 420, along: 240, across: 6, hole: false, note: 'Thick thread' },
      { fromEnd: 3900, fromSelvedge: 1010, along: 18, across: 14, hole: true, note: 'Moth' }
    ]
  },
  {
    key: 'loden remnant',
    cloth: 'loden',
    input: {
      kind: 'remnant',
      name: 'Remnant, waistcoat',
      ...cm(118, 92),
      outline: [
        { x: 0, y: 0 },
        { x: 1180, y: 0 },
        { x: 1180, y: 470 },
        { x: 730, y: 520 },
        { x: 700, y: 920 },
        { x: 0, y: 920 }
      ],
      batch: '2190',
      place: 'Basket by the window',
      note: 'Left over from the waistcoat of spring.',
      price: null
    },
    flaws: []
  },
  {
    key: 'canvas remnant',
    cloth: 'canvas',
    input: {
      kind: 'remnant',
      name: 'Canvas end',
      ...cm(165, 90),
      outline: null,
      batch: '',
      place: 'Basket by the window',
      note: '',
      price: { minor: 1000, unit: 'metre' }
    },
    flaws: []
  },
  {
    key: 'satin brought',
    cloth: 'satin',
    input: {
      kind: 'client',
      name: 'Satin of the client',
      ...cm(310, 136),
      outline: null,
      batch: '',
      place: 'Drawer 2, in tissue',
      note: 'From her mother’s trunk.',
      price: null
    },
    flaws: [{ fromEnd: 2210, fromSelvedge: 300, along: 30, across: 20, hole: false, note: 'Water mark' }]
  }
];

export const widths: readonly { readonly key: string; readonly cloth: string; readonly width: WidthInput }[] =
  [
    {
      key: 'lawn narrow',
      cloth: 'lawn',
      width: {
        seller: 'Stall on Thursdays',
        fullWidth: 1150,
        usableWidth: 1120,
        buyStep: 100,
        price: { minor: 1120, unit: 'metre' }
      }
    },
    {
      key: 'canvas wide',
      cloth: 'canvas',
      width: {
        seller: 'By post',
        fullWidth: 1500,
        usableWidth: 1470,
        buyStep: 500,
        price: { minor: 2950, unit: 'metre' }
      }
    }
  ];
