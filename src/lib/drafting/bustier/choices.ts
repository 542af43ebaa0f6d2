import { length, oneOf, yesNo, type Choice } from '../choices';

/** What is given in inches by the trade. */
export const INCH = 25.4;

/** Choices of the bustier. Defaults and ranges in inches are common practice, no published source. */
export const bustierChoices: readonly Choice[] = [
  length(
    'neckWidth',
    'Neck width',
    'Where the shoulder seam starts; the seam over the bust runs from its middle.',
    {
      default: 3 * INCH,
      min: 2 * INCH,
      max: 5 * INCH
    }
  ),
  length('topAbove', 'Cup top above the chest line', 'How high the cups stand above the armhole depth.', {
    default: INCH / 2,
    min: INCH / 2,
    max: INCH
  }),
  oneOf(
    'gape',
    'Taken in against gaping',
    'A quarter inch on each side of the seam at the top, or as much as brings the top edge to the measured high bust.',
    [
      ['quarter', 'A quarter inch each side'],
      ['highBust', 'To the high bust']
    ]
  ),
  length('bridge', 'Bridge between the cups', 'How far the cups stand apart at the centre front.', {
    default: INCH,
    min: INCH / 2,
    max: 2.5 * INCH
  }),
  oneOf(
    'sides',
    'Side line',
    'Whether the side follows the measured bust and under-bust, or is one smooth curve as drawn by hand.',
    [
      ['levels', 'Through every level'],
      ['plain', 'One smooth curve']
    ]
  ),
  length(
    'bustEase',
    'Ease over the cups',
    'Room at the bust point; only with a side line through every level.',
    {
      default: INCH,
      min: 0,
      max: 2.5 * INCH
    }
  ),
  length('belowWaist', 'Full length below the waist', 'Where the level of the hem lies.', {
    default: 6 * INCH,
    min: 4 * INCH,
    max: 10 * INCH
  }),
  length('sideBelowWaist', 'Side below the waist', 'Where the side seam and the back end.', {
    default: 2 * INCH,
    min: INCH,
    max: 4 * INCH
  }),
  length('dip', 'Basque below the full length', 'How far the centre front dips.', {
    default: 3 * INCH,
    min: 0,
    max: 5 * INCH
  }),
  oneOf('basqueEnd', 'Basque end', 'How the basque ends at the centre front.', [
    ['blunt', 'Blunt'],
    ['sharp', 'A sharp point']
  ]),
  length('bluntHalf', 'Blunt end on the half', 'Half the width of a blunt end.', {
    default: 2 * INCH,
    min: INCH / 2,
    max: 3 * INCH
  }),
  length(
    'openingHalf',
    'Centre back set in, each half',
    'Half the lacing gap. Three inches only for a very open back.',
    { default: 2 * INCH, min: 1.5 * INCH, max: 3 * INCH }
  ),
  length(
    'sideAllowance',
    'Side seam allowance',
    'Cloth left at the side: one inch, one and a half to be safe.',
    {
      default: INCH,
      min: INCH,
      max: 1.5 * INCH
    }
  ),
  length('backTurning', 'Turning at the centre back', "The edge's own turning under the loops.", {
    default: 25,
    min: 10,
    max: 40
  }),
  oneOf('centreFront', 'Centre front', 'On the fold, or with a seam.', [
    ['fold', 'On the fold'],
    ['seam', 'With a seam']
  ]),
  yesNo('facing', 'Facings', 'Adds facings along the top, down past the under-bust.', false),
  yesNo('lining', 'Lining', 'Adds every panel again for the lining.', true),
  yesNo('interlining', 'Interlining', 'Adds front, back and cups again as a strength layer.', false),
  yesNo('foamCups', 'Foam cups', 'Adds cups of foam without allowances: they butt.', false),
  yesNo('lacingStrip', 'Lacing strip', 'Adds strips for the centre back that carry the loops.', true),
  length('loopSpacing', 'Loops apart', 'From loop to loop along the centre back; gives their count.', {
    default: 25,
    min: 12,
    max: 50
  }),
  length('loopLength', 'Length of one loop', 'Cord or bias strip that one loop takes, its ends included.', {
    default: 60,
    min: 30,
    max: 120
  }),
  yesNo('modesty', 'Modesty panel', 'Adds the panel behind the lacing: the opening and 5 cm.', true),
  yesNo(
    'waistStay',
    'Waist stay',
    'Adds a stay round the waist to the sheet, and its line on the panels.',
    true
  ),
  yesNo(
    'boning',
    'Boning channels',
    'Marks channels over the seams and the centre front, and lists the bones.',
    true
  )
];
