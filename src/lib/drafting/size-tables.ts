import type { Body, PointId } from './measurement-points';

/*
 * Size tables to draft without a client. Published figures keep their source and how we know them; points that a table lacks are filled
 * only where a rule says how, and those are named.
 */

export interface SizeTable {
  readonly id: string;
  readonly name: string;
  readonly source: string;
  /** How we know the figures. */
  readonly mark:
    'read' | 'as reproduced, not checked against the original' | 'from memory' | 'the studio’s own';
  readonly sizes: readonly { readonly size: string; readonly body: Body }[];
  /** Points filled by our own rules, not by the table. */
  readonly filled: readonly PointId[];
}

const rows = (
  sizes: readonly string[],
  points: Readonly<Partial<Record<PointId, readonly number[]>>>,
  perUnit: number,
  fill: (body: Body, i: number) => Body = () => ({})
): SizeTable['sizes'] =>
  sizes.map((size, i) => {
    const body = Object.fromEntries(
      Object.entries(points).map(([id, values]) => [id, Math.round(values[i]! * perUnit * 100) / 100])
    ) as Body;
    return { size, body: { ...fill(body, i), ...body } };
  });

/**
 * Lengths and widths beside the girths of a table, so that every draft can be tried in every size: our own steps around the values
 * remembered of a textbook for bust 88 (armscye depth 21, back neck to waist 41, waist to hip 20.6, body rise 28, wrist 16).
 */
function ourLengths(body: Body): Body {
  const bust = body.bust!;
  const step = (bust - 880) / 40;
  const r = (value: number) => Math.round(value);
  return {
    underBust: r(bust - 120 - 2 * step),
    highBust: r(bust - 35),
    topHip:
      body.waist !== undefined && body.hip !== undefined ? r((body.waist + body.hip) / 2 + 20) : r(bust),
    neckBase: r(370 + 10 * step),
    acrossShoulder: r(390 + 10 * step),
    shoulderLength: r(122.5 + 2.5 * step),
    armscyeDepth: r(210 + 5 * step),
    armscyeGirth: r(bust / 2 - 20),
    bustSpan: r(180 + 8 * step),
    shoulderToBustPoint: r(260 + 9 * step),
    shoulderToUnderBust: r(335 + 10 * step),
    shoulderToWaist: r(425 + 7 * step),
    underBustToWaist: r(90 - 3 * step),
    underarmToWaist: 205,
    backNeckToWaist: r(410 + 4 * step),
    backWidth: r(344 + 10 * step),
    waistToHip: r(206 + 2 * step),
    waistToKnee: 585,
    waistToFloor: 1040,
    insideLeg: 780,
    crotchDepth: r(280 + 5 * step),
    upperArm: r(284 + 12 * step),
    elbow: r(260 + 10 * step),
    wrist: r(160 + 4 * step),
    armLength: 585
  };
}

const filledPoints = Object.keys(ourLengths({ bust: 880, waist: 720, hip: 960 })) as PointId[];
const without = (...points: PointId[]): PointId[] => filledPoints.filter((id) => !points.includes(id));

export const publishedTables: readonly SizeTable[] = [
  {
    id: 'en-13402-3-women',
    name: 'EN 13402-3, women',
    source: 'EN 13402-3, women’s girths in centimetres; size named by the bust',
    mark: 'from memory',
    sizes: rows(
      [
        '76',
        '80',
        '84',
        '88',
        '92',
        '96',
        '100',
        '104',
        '110',
        '116',
        '122',
        '128',
        '134',
        '140',
        '146',
        '152'
      ],
      {
        bust: [76, 80, 84, 88, 92, 96, 100, 104, 110, 116, 122, 128, 134, 140, 146, 152],
        waist: [60, 64, 68, 72, 76, 80, 84, 88, 94, 100, 106, 112, 118, 124, 130, 136],
        hip: [84, 88, 92, 96, 100, 104, 108, 112, 117, 122, 127, 132, 137, 142, 147, 152]
      },
      10,
      ourLengths
    ),
    filled: without()
  },
  {
    id: 'aldrich-women',
    name: 'Women’s block sizes, W. Aldrich',
    source:
      'W. Aldrich, Metric Pattern Cutting for Women’s Wear, 6th edition, 2015: women’s standard block sizes',
    mark: 'as reproduced, not checked against the original',
    sizes: rows(
      ['6', '8', '10', '12', '14', '16', '18', '20', '22', '24'],
      {
        bust: [80, 84, 88, 92, 96, 100, 104, 110, 116, 122],
        waist: [64, 68, 72, 76, 80, 84, 88, 94, 100, 106],
        hip: [88, 92, 96, 100, 104, 108, 112, 118, 124, 132],
        backWidth: [32.4, 33.4, 34.4, 35.4, 36.4, 37.4, 38.4, 39.8, 41.2, 42.6],
        shoulderLength: [11.75, 12, 12.25, 12.5, 12.75, 13, 13.25, 13.6, 13.9, 14.2],
        neckBase: [35, 36, 37, 38, 39, 40, 41, 42, 43, 44]
      },
      10,
      ourLengths
    ),
    filled: without('backWidth', 'shoulderLength', 'neckBase')
  },
  {
    id: 'astm-d5585-11-curvy',
    name: 'ASTM D5585-11, misses, curvy',
    source: 'ASTM D5585-11e1, table 1, in inches (bust, under-bust, upper chest, waist, neck base)',
    mark: 'read',
    sizes: rows(
      ['00', '0', '2', '4', '6', '8', '10', '12', '14', '16', '18', '20'],
      {
        neckBase: [13.25, 13.5, 13.75, 14, 14.25, 14.625, 14.875, 15.125, 15.5, 15.75, 16, 16.375],
        bust: [31.125, 31.75, 33, 34.125, 35.25, 36.25, 37.25, 38.75, 40.375, 42.125, 44, 46],
        underBust: [25.75, 26.5, 27.25, 28, 29, 30, 31, 32.5, 34, 35.75, 37.625, 39.625],
        highBust: [31.75, 32.25, 33.25, 34.125, 35, 35.875, 36.75, 38, 39.25, 40.625, 42.25, 43.875],
        waist: [23.875, 24.625, 25.375, 26.125, 27, 28, 29, 30.75, 32.5, 34.5, 36.75, 39]
      },
      25.4,
      ourLengths
    ),
    filled: without('neckBase', 'underBust', 'highBust')
  },
  {
    id: 'home-pattern-misses',
    name: 'Misses, home patterns',
    source: 'US home-pattern sizes for misses since the late 1960s, in inches',
    mark: 'read',
    sizes: rows(
      ['6', '8', '10', '12', '14', '16', '18', '20'],
      {
        bust: [30.5, 31.5, 32.5, 34, 36, 38, 40, 42],
        waist: [23, 24, 25, 26.5, 28, 30, 32, 34],
        hip: [32.5, 33.5, 34.5, 36, 38, 40, 42, 44],
        backNeckToWaist: [15.5, 15.75, 16, 16.25, 16.5, 16.75, 17, 17.25]
      },
      25.4,
      ourLengths
    ),
    filled: without('backNeckToWaist')
  }
];

/**
 * Band and cup by EN 13402-3: the band is the under-bust to the nearest 5 cm, the cup what the bust has more, in steps of 2 cm from 10
 * (lower bound excluded, upper included); null outside AA to H.
 */
export function bandAndCup(
  underBustCm: number,
  bustCm: number
): { readonly band: number; readonly cup: string } | null {
  // 58 to 62 is 60, 63 to 67 is 65: halves do not arise in whole centimetres.
  const band = Math.round(underBustCm / 5) * 5;
  const more = bustCm - underBustCm;
  const cups = ['AA', 'A', 'B', 'C', 'D', 'E', 'F', 'G', 'H'];
  const index = Math.ceil((more - 10) / 2) - 1;
  const cup = cups[index];
  return cup === undefined ? null : { band, cup };
}
