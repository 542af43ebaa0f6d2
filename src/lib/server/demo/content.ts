import type { ClothRole, Panel } from '$lib/pattern/panel';
import type { ClothInput } from '../cloths';
import type { Role } from '../permissions';
import type { Stage } from '../orders';
import { blouse } from './blouse';
import { bodice } from './bodice';
import { skirt } from './skirt';
import { slip } from './slip';
import { waistcoat } from './waistcoat';

/*
 * An invented workroom: no such place, people or cloths. Everything has a key, from which its id is made, so that the
 * demo can be filled twice without doubling and cleared without touching what is not its own.
 */

export const studioName = 'Hollin Lane Workroom';

export const people: readonly { name: string; email: string; password: string; role: Role }[] = [
  {
    name: 'Runa Helsing',
    email: 'runa@hollin-lane.example',
    password: 'loden under lamplight',
    role: 'owner'
  },
  {
    name: 'Teodor Quill',
    email: 'teodor@hollin-lane.example',
    password: 'seven darts by noon',
    role: 'patternMaker'
  },
  {
    name: 'Ama Okonwe',
    email: 'ama@hollin-lane.example',
    password: 'chalk before the shears',
    role: 'cutter'
  }
];

export interface DemoStyle {
  readonly key: string;
  readonly name: string;
  readonly kind: string;
  readonly note: string;
  readonly panels: readonly Panel[];
}

export const styles: readonly DemoStyle[] = [
  {
    key: 'skirt',
    name: 'Wilma skirt',
    kind: 'Skirt',
    note: 'A-line, waistband, pockets in the side seams, a drape over the left hip only.',
    panels: skirt
  },
  {
    key: 'bodice',
    name: 'Ilse bodice',
    kind: 'Bodice',
    note: 'Seams from the shoulder, laced at the back, fronts interlined.',
    panels: bodice
  },
  {
    key: 'blouse',
    name: 'Marta blouse',
    kind: 'Blouse',
    note: 'Yoke, stand and collar, cuffs. The collar may be of a contrast cloth.',
    panels: blouse
  },
  {
    key: 'waistcoat',
    name: 'Konrad waistcoat',
    kind: 'Waistcoat',
    note: 'Back and lining of the lining cloth, one watch pocket on the left.',
    panels: waistcoat
  },
  { key: 'slip', name: 'Sela slip', kind: 'Slip', note: 'Cut on the bias.', panels: slip }
];

interface DemoCloth {
  readonly key: string;
  readonly cloth: ClothInput;
}

const cm = (full: number, usable: number) => ({
  fullWidth: full * 10,
  usableWidth: usable * 10,
  typed: { fullWidth: `${full} cm`, usableWidth: `${usable} cm` }
});

/** Prices are in minor units of the studio's own currency, whichever it is. */
export const cloths: readonly DemoCloth[] = [
  {
    key: 'loden',
    cloth: {
      name: 'Fernmoor loden, moss',
      fibre: 'Wool',
      ...cm(150, 146),
      price: { minor: 4800, unit: 'metre' },
      sidesAlike: false,
      nap: 'oneWay',
      colour: '#7A8263',
      supplierNote: 'Two weeks from the mill. Article F-118.'
    }
  },
  {
    key: 'lawn',
    cloth: {
      name: 'Harebell lawn, printed',
      fibre: 'Cotton',
      ...cm(140, 137),
      price: { minor: 1450, unit: 'metre' },
      sidesAlike: false,
      nap: 'none',
      colour: '#A9B8CC',
      supplierNote: 'The market stall on Thursdays.'
    }
  },
  {
    key: 'linen',
    cloth: {
      name: 'Saltmarsh linen, natural',
      fibre: 'Linen',
      fullWidth: 1473.2,
      usableWidth: 1447.8,
      typed: { fullWidth: '58 in', usableWidth: '57 in' },
      price: { minor: 2200, unit: 'yard' },
      sidesAlike: true,
      nap: 'none',
      colour: '#D8C9A8',
      supplierNote: 'Sold by the yard.'
    }
  },
  {
    key: 'cupro',
    cloth: {
      name: 'Inkwell lining',
      fibre: 'Cupro',
      ...cm(140, 138),
      price: { minor: 980, unit: 'metre' },
      sidesAlike: false,
      nap: 'none',
      colour: '#5B6478',
      supplierNote: ''
    }
  },
  {
    key: 'canvas',
    cloth: {
      name: 'Coppice canvas',
      fibre: 'Wool and hair',
      ...cm(92, 90),
      price: { minor: 1675, unit: 'metre' },
      sidesAlike: true,
      nap: 'none',
      colour: '#CFC3AE',
      supplierNote: ''
    }
  },
  {
    key: 'satin',
    cloth: {
      name: 'Moonwort satin, pearl',
      fibre: 'Silk',
      ...cm(140, 137),
      price: null,
      sidesAlike: false,
      nap: 'none',
      colour: '#EAE3DC',
      supplierNote: 'Price asked for.'
    }
  }
];

export interface DemoOrder {
  readonly key: string;
  readonly clientName: string;
  /** Days from the day of filling; null without a due date. */
  readonly dueIn: number | null;
  readonly stage: Stage;
  readonly note: string;
  readonly lines: readonly {
    readonly style: string;
    readonly label: string;
    readonly quantity: number;
    readonly cloths: Partial<Record<ClothRole, string>>;
  }[];
  /** Cloths to lay, and how: packed and released, packed and left open, or packed and then spoilt. */
  readonly lays: readonly {
    readonly cloth: string;
    readonly name: string;
    readonly as: 'released' | 'open' | 'faulty';
  }[];
}

const tailored = { main: 'loden', lining: 'cupro', interlining: 'canvas' } as const;

/** In the order of their numbers. */
export const orders: readonly DemoOrder[] = [
  {
    key: 'brigitta',
    clientName: 'Brigitta Thorne',
    dueIn: -20,
    stage: 'handedOver',
    note: 'Wants a second one in linen next spring.',
    lines: [{ style: 'waistcoat', label: '40', quantity: 1, cloths: tailored }],
    lays: [
      { cloth: 'loden', name: 'As cut', as: 'released' },
      { cloth: 'cupro', name: 'As cut', as: 'released' },
      { cloth: 'canvas', name: 'As cut', as: 'released' }
    ]
  },
  {
    key: 'ferran',
    clientName: 'Ferran Oake',
    dueIn: 6,
    stage: 'sewing',
    note: 'Collar seam to be trued at the fitting.',
    lines: [{ style: 'blouse', label: '42', quantity: 1, cloths: { main: 'linen', contrast: 'lawn' } }],
    lays: [
      { cloth: 'linen', name: 'As cut', as: 'released' },
      { cloth: 'lawn', name: 'Collar', as: 'released' }
    ]
  },
  {
    key: 'ysolde',
    clientName: 'Ysolde Marr',
    dueIn: 12,
    stage: 'cutting',
    note: 'The demo order: its main cloth is laid and waits for release; the canvas is not laid yet.',
    lines: [
      { style: 'skirt', label: '38', quantity: 1, cloths: { main: 'loden' } },
      { style: 'bodice', label: '38', quantity: 1, cloths: { main: 'loden', interlining: 'canvas' } }
    ],
    lays: [{ cloth: 'loden', name: 'First lay', as: 'open' }]
  },
  {
    key: 'noor',
    clientName: 'Noor Castellane',
    dueIn: 19,
    stage: 'agreed',
    note: 'Two alike. The lay was done in a hurry: look at its findings before anything is cut.',
    lines: [{ style: 'blouse', label: '38', quantity: 2, cloths: { main: 'lawn', contrast: 'linen' } }],
    lays: [{ cloth: 'lawn', name: 'In a hurry', as: 'faulty' }]
  },
  {
    key: 'darina',
    clientName: 'Дарина Коваль',
    dueIn: 33,
    stage: 'quoted',
    note: 'Waits for the price of the satin.',
    lines: [{ style: 'slip', label: '36', quantity: 1, cloths: { main: 'satin' } }],
    lays: []
  },
  {
    key: 'eleni',
    clientName: 'Ελένη Φωτεινού',
    dueIn: null,
    stage: 'enquiry',
    note: 'For a wedding in summer; cloth not chosen.',
    lines: [{ style: 'bodice', label: '40', quantity: 1, cloths: {} }],
    lays: []
  },
  {
    key: 'piotr',
    clientName: 'Piotr Wąs',
    dueIn: null,
    stage: 'cancelled',
    note: '',
    lines: [{ style: 'waistcoat', label: '44', quantity: 1, cloths: { main: 'linen' } }],
    lays: []
  }
];

/** The order that a first sign-in lands on. */
export const firstOrder = 'ysolde';
