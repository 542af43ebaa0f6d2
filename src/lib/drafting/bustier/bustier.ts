import { endOf, placeAt } from '$lib/geometry/path';
import { formatLength } from '$lib/units/length';
import { lacingCaution } from '../cautions';
import type { Chosen } from '../choices';
import { Construction } from '../construction';
import {
  TOTAL_TOLERANCE,
  totalOff,
  type Draft,
  type Drafted,
  type Level,
  type Supply,
  type Total
} from '../draft';
import { distanceAtLevel, widthAt } from '../levels';
import type { Body } from '../measurement-points';
import { bustierChoices, INCH } from './choices';
import { bustierLines, type BustierLines } from './lines';
import { bustierPieces, SHORT, type BustierPieces } from './pieces';

/** Turned in at each end of the waist stay. */
const STAY_TURNING = 25;

function draw(body: Body, chosen: Chosen): Drafted {
  const sheet = new Construction();
  const lines = bustierLines(body, chosen, sheet);
  const made = bustierPieces(lines, chosen);
  const totals = totalsOf(body, chosen, lines, made);
  const opening = 2 * chosen.number('openingHalf');
  sheet.length('Opening at the centre back', opening, '2 × centre back set in (choice)');
  sheet.length(
    'Loops apart',
    chosen.number('loopSpacing'),
    `${made.loops} loops on each side, along the centre back`
  );
  const stay = chosen.yes('waistStay')
    ? sheet.length(
        'Waist stay',
        totals.find(({ level }) => level === 'waist')!.finished + 2 * STAY_TURNING,
        'finished waist + 2.5 cm to turn in at each end'
      )
    : null;
  return {
    panels: made.pieces.panels,
    sheet: sheet.sheet(),
    seams: made.pieces.seams,
    totals,
    bones: made.bones,
    supplies: suppliesOf(chosen, made, stay),
    warnings: warningsOf(totals),
    cautions: [lacingCaution]
  };
}

function suppliesOf(chosen: Chosen, made: BustierPieces, stay: number | null): Supply[] {
  const { bones, loops, backLength } = made;
  // Crossed at every loop and over the opening, and as much again to pull it open.
  const lacing =
    2 * loops * (2 * chosen.number('openingHalf') + chosen.number('loopSpacing')) + 2 * backLength;
  return [
    { name: 'Lacing', count: 1, length: Math.ceil(lacing / 100) * 100 },
    ...(stay === null ? [] : [{ name: 'Ribbon for the waist stay', count: 1, length: stay }]),
    ...(bones.length === 0
      ? []
      : [
          {
            name: 'Boning channel tape',
            count: 1,
            length: bones.reduce((sum, bone) => sum + bone.count * (bone.length + 2 * SHORT), 0)
          }
        ])
  ];
}

/** What the hand method does not check: the finished girths, measured across the pieces at their levels. */
function totalsOf(
  body: Body,
  chosen: Chosen,
  lines: BustierLines,
  { front, back, centreCup, sideCup }: BustierPieces
): Total[] {
  const { y, intake } = lines;
  const gap = 2 * chosen.number('openingHalf');
  const around = (level: number) => 2 * (widthAt(front, level) + widthAt(back, level));
  const xAt = (path: BustierLines['side'], level: number) =>
    placeAt(path, distanceAtLevel(path, level)).point.x;
  // Across the tops of the cups at the level of X, then from the side cup to the side and the back.
  const cupTops = y.chest - chosen.number('topAbove');
  const sideTop = lines.side.from.x;
  const top =
    2 *
    (xAt(lines.innerSeam, cupTops) +
      (sideTop + intake - xAt(lines.outerSeam, cupTops)) +
      (sideTop - chosen.number('openingHalf')));
  // Just below the level: the corner between the cups stands on it.
  const underBust = around(y.underBust + 0.01);
  const overCups = around(y.bust) + 2 * (widthAt(centreCup, y.bust) + widthAt(sideCup, y.bust));
  return [
    // A strapless top edge wants a little less than the body: the four quarters of an inch against gaping.
    { level: 'topEdge', body: body.highBust ?? null, ease: -INCH, gap, finished: top },
    { level: 'bust', body: body.bust!, ease: chosen.number('bustEase'), gap, finished: overCups },
    { level: 'underBust', body: body.underBust!, ease: 0, gap, finished: underBust },
    { level: 'waist', body: body.waist!, ease: 0, gap, finished: around(y.waist) },
    // Pieces end above the full length at the side: there the side line itself is measured.
    { level: 'hem', body: lines.hemGirth, ease: 0, gap, finished: 4 * endOf(lines.wholeSide).x - gap }
  ];
}

const levelWords: Partial<Record<Level, string>> = {
  topEdge: 'Top edge',
  bust: 'Bust, over the cups',
  underBust: 'Under-bust',
  waist: 'Waist',
  hem: 'Hem'
};

function warningsOf(totals: readonly Total[]): string[] {
  const both = (mm: number) => `${formatLength(mm, 'cm', { decimals: 1 })} (${formatLength(mm, 'in')})`;
  return totals.flatMap((total) => {
    const off = totalOff(total);
    const found: string[] = [];
    if (off === null) return found;
    const word = levelWords[total.level]!;
    if (Math.abs(off) > TOTAL_TOLERANCE)
      found.push(
        `${word}: finished and laced to its gap it is ${both(Math.abs(off))} ${off > 0 ? 'more' : 'less'} than the body with its ease.`
      );
    // What holds a strapless bodice up.
    if (total.level === 'underBust' && off > 1)
      found.push('The under-bust is looser than the body: nothing would hold the bodice up.');
    return found;
  });
}

export const bustier: Draft = {
  id: 'bustier',
  version: 1,
  name: 'Fitted bustier with cups',
  about:
    'Strapless, with two-piece cups, a basque front and a back laced with loops. A hand method of the trade: common practice, no published source.',
  needs: [
    'bust',
    'underBust',
    'waist',
    'hip',
    'acrossShoulder',
    'armscyeDepth',
    'bustSpan',
    'shoulderToBustPoint',
    'shoulderToUnderBust',
    'shoulderToWaist'
  ],
  mayUse: ['highBust', 'hemGirth', 'waistToHip'],
  choices: bustierChoices,
  draw
};
